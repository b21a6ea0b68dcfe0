"""Both formats of a board give one report, but for what only one of them carries."""

from __future__ import annotations

from functools import cache
from pathlib import Path

import pytest

from tests.boards.writer import SAMPLES
from tests.pipeline.formats import as_data, checked, differences, grounded

BOARDS = sorted(path.name for path in SAMPLES.iterdir() if path.is_dir())
ONE_FORMAT_ONLY = {
    *("netlist.format", "netlist.path", "netlist.sha256", "assumptions"),
    *(f"{where}.location.{what}" for where in ("stages", "findings") for what in ("file", "line", "sheet")),
}
"""Equal to the last bit elsewhere; ground's own name (0 and GND) is evened out before."""


def test_what_only_one_format_carries() -> None:
    """The list above is what the sample boards show: no entry is there without need, and none is missing."""
    found = set()
    for board in BOARDS:
        one, other = both(board)
        found |= set(differences(one, other))
    assert found == ONE_FORMAT_ONLY


@pytest.mark.parametrize("board", BOARDS)
def test_assumptions_differ_by_model_cards_and_pads_alone(board: str) -> None:
    one, other = both(board)
    more = set(one["assumptions"]) - set(other["assumptions"])
    assert all("no .model" in words or "SPICE text shows neither pads nor packages" in words for words in more)
    assert set(other["assumptions"]) <= set(one["assumptions"])


@pytest.mark.parametrize("board", BOARDS)
def test_the_sections_are_equal_and_not_empty(board: str) -> None:
    one, other = both(board)
    assert one["stages"] and one["nets"] and one["islands"]
    for key in ("groups", "nets", "rails", "ports", "gains", "islands", "unchecked", "unavailable", "conditions"):
        assert one[key] == other[key], key
    for a, b in zip(one["stages"], other["stages"], strict=True):
        assert {**a, "location": None} == {**b, "location": None}
    for a, b in zip(one["findings"], other["findings"], strict=True):
        assert {**a, "location": None} == {**b, "location": None}


@cache
def both(board: str) -> tuple[dict[str, object], dict[str, object]]:
    """The report of each format, SPICE text first."""
    folder: Path = SAMPLES / board
    one, other = (grounded(as_data(checked(folder / f"{board}.{form}"))) for form in ("cir", "net"))
    return one, other
