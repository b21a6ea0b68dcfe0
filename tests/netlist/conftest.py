"""Readers take files: a fixture that writes one and reads it."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

import pytest

from checker.netlist.read import read_netlist
from checker.netlist.types import Netlist

Read = Callable[..., Netlist]


@pytest.fixture
def read(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Read:
    """`read(text_or_bytes, name=..., include_dirs=..., limits=...)`, in a folder of its own."""
    monkeypatch.chdir(tmp_path)

    def write_and_read(content: str | bytes, name: str = "board.net", **options: object) -> Netlist:
        data = content.encode() if isinstance(content, str) else content
        Path(name).write_bytes(data)
        return read_netlist(Path(name), **options)  # type: ignore[arg-type]

    return write_and_read
