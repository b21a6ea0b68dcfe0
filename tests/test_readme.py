"""What the README shows as printed is what the program prints. `python -m tests.test_readme` writes it anew."""

from __future__ import annotations

import re
from pathlib import Path

import pytest

from checker.pipeline import check_board
from checker.report.forms import form

ROOT = Path(__file__).parent.parent
README = ROOT / "README.md"
SHOWN = re.compile(r"<!-- output: check (?P<board>\S+) -->\n```text\n(?P<text>.*?)```\n", re.DOTALL)
WIDTH = 100


def printed(board: str) -> str:
    """The text report of a board of the README, from the repository's root."""
    return form("text")(check_board(Path(board), None).report, width=WIDTH, colour=False)


def renewed(text: str) -> str:
    """The README with every shown report made again."""
    return SHOWN.sub(
        lambda found: f"<!-- output: check {found['board']} -->\n```text\n{printed(found['board'])}```\n", text
    )


def test_the_readme_shows_what_is_printed(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(ROOT)
    shown = {found["board"]: found["text"] for found in SHOWN.finditer(README.read_text("utf-8"))}
    assert len(shown) == 2
    assert shown == {board: printed(board) for board in shown}


if __name__ == "__main__":
    README.write_text(renewed(README.read_text("utf-8")), "utf-8")
