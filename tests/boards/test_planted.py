"""The table of planted mistakes is whole: every rule has a board that breaks it and one that keeps it."""

from __future__ import annotations

import tomllib
from pathlib import Path

import pytest

from tests.boards.writer import kicad_export, placed_parts

PLANTED = Path(__file__).parent / "planted"
BOARDS = tomllib.loads((PLANTED / "expected.toml").read_text("utf-8"))["board"]
RULES = {
    "input-mismatch",
    "coupling-loss",
    "bypass-loss",
    "dissipation",
    "junction-temperature",
    "saturated-at-rest",
    "cut-off-at-rest",
    "reverse-active",
    "soft-divider",
    "beta-dependent-bias",
    "no-base-path",
    "base-not-grounded",
    "target-missed",
}


def circuit(name: str) -> dict[str, tuple[str, tuple[str, ...]]]:
    """Value and nets of each part of a planted board."""
    parts = placed_parts((PLANTED / f"{name}.cir").read_text("utf-8"))
    return {part.ref: (part.value, part.nets) for part in parts}


def test_every_rule_has_a_board() -> None:
    assert {board["rule"] for board in BOARDS} == RULES
    assert {rule for board in BOARDS for rule in board["also"]} <= RULES


def test_every_file_is_in_the_table() -> None:
    named = {name for board in BOARDS for name in (board["name"], board["clean"])}
    assert {path.stem for path in PLANTED.glob("*.cir")} == named
    assert {path.name.removesuffix(".intent.toml") for path in PLANTED.glob("*.intent.toml")} == named


@pytest.mark.parametrize("board", BOARDS, ids=lambda board: board["name"])
def test_the_twin_differs_and_the_faulty_part_exists(board: dict[str, str]) -> None:
    planted, clean = circuit(board["name"]), circuit(board["clean"])
    assert board["part"] in planted
    intents = [(PLANTED / f"{board[key]}.intent.toml").read_text("utf-8") for key in ("name", "clean")]
    assert (planted, intents[0]) != (clean, intents[1])


@pytest.mark.parametrize("path", sorted(PLANTED.glob("*.cir")), ids=lambda path: path.stem)
def test_each_board_can_be_written_in_the_other_format(path: Path) -> None:
    export = kicad_export(path.stem, path.read_text("utf-8"))
    assert export.count("(") == export.count(")")
    assert "meg" not in export
    intent = tomllib.loads(path.with_name(path.stem + ".intent.toml").read_text("utf-8"))
    nets = {net for _, nets in circuit(path.stem).values() for net in nets}
    assert {port["net"] for port in intent["port"]} | set(intent["rails"]) <= nets
