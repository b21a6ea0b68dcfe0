"""In our own tests a rule that breaks down raises."""

from __future__ import annotations

import pytest

from checker.judge.guard import RAISE


@pytest.fixture(autouse=True)
def rules_raise(monkeypatch: pytest.MonkeyPatch) -> None:
    """Set for every test of the folder."""
    monkeypatch.setenv(RAISE, "1")
