"""Dual-gate MOSFETs as the two transistors in series that they are: ".A" at gate 1 and the source, ".B" at gate 2
and the drain, with an inner net between them and both bodies at the source (common practice, no source)."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import replace
from typing import Final

from checker.cards.pins import pin_map
from checker.cards.types import Card
from checker.circuit.draft import Draft
from checker.circuit.identity import Identity
from checker.circuit.pins import Unit, letter_of
from checker.netlist.types import Part

_PINS: Final = frozenset({"D", "G1", "G2", "S"})


def dual_gate_pins(part: Part, card: Card | None) -> Mapping[str, str] | None:
    """Net of D, G1, G2 and S by the symbol's pin names, else by the card's pads; None for any other part.

    Two pins of one name on different nets (and so a dual transistor, with two drains) are another part.
    """
    by_card = None if card is None or card.upper is None else pin_map(card, part.footprint)
    for letters in (
        {pin.number: _name(pin.function.removesuffix(f"_{pin.number}")) for pin in part.pins},
        by_card or {},
    ):
        nets = {letters.get(pin.number, ""): pin.net for pin in part.pins}
        if nets.keys() == _PINS and all(nets[letters[pin.number]] == pin.net for pin in part.pins):
            return nets
    return None


def _name(function: str) -> str:
    letter, unit = letter_of(function)
    return letter + unit if letter == "G" else letter


def halves(
    draft: Draft, part: Part, nets: Mapping[str, str], known: Identity, card: Card, second: Card
) -> Iterator[tuple[Unit, Identity]]:
    """The two transistors of a part: what it was identified as, its card, and the card's `upper` half, which takes
    over the ratings."""
    draft.notes.add(
        "models", "dual-gate MOSFET taken as two transistors on one chip, .A at gate 1 below .B at gate 2", part.ref
    )
    middle = f"{part.ref}.n"
    lower = {"D": middle, "G": nets["G1"], "S": nets["S"], "B": nets["S"]}
    upper = {"D": nets["D"], "G": nets["G2"], "S": middle, "B": nets["S"]}
    yield Unit(suffix=".A", nets=lower, shares_chip=True), known
    yield Unit(suffix=".B", nets=upper, shares_chip=True), replace(known, card=replace(second, ratings=card.ratings))
