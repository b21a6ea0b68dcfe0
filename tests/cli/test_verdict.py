"""The table of exit statuses."""

from __future__ import annotations

from dataclasses import replace

import pytest

from checker.cli.verdict import exit_status
from checker.record import Checked
from checker.words import Gate, Severity
from tests.record.invented import report


@pytest.mark.parametrize(
    ("severity", "gate", "status"),
    [
        ("must-fix", "must-fix", 1),
        ("must-fix", "note", 1),
        ("must-fix", "never", 0),
        ("review", "must-fix", 0),
        ("review", "review", 1),
        ("review", "note", 1),
        ("note", "must-fix", 0),
        ("note", "review", 0),
        ("note", "note", 1),
        ("note", "never", 0),
    ],
)
def test_gate(severity: Severity, gate: Gate, status: int) -> None:
    finding = replace(report().findings[0], severity=severity)
    assert exit_status(replace(report(), findings=(finding,)), gate, None) == status


@pytest.mark.parametrize(
    ("stages", "of", "required", "status"),
    [
        *[(0, 0, None, 0), (0, 0, 100.0, 0), (0, 3, None, 1), (0, 3, 0.0, 1), (1, 3, None, 0)],
        *[(2, 3, 66.0, 0), (2, 3, 67.0, 1), (3, 3, 100.0, 0), (1, 3, 0.0, 0)],
    ],
)
def test_too_little_checked(stages: int, of: int, required: float | None, status: int) -> None:
    board = replace(report(), findings=(), checked=Checked(stages=stages, of=of))
    assert exit_status(board, "must-fix", required) == status
    assert exit_status(board, "never", required) == status


def test_incomplete_outweighs_all() -> None:
    assert exit_status(replace(report(), incomplete=True), "never", None) == 3
