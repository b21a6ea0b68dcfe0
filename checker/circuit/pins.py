"""Which pin is which terminal: functions, simulation pin maps, symbol names, and cards by package, in that
order."""

from __future__ import annotations

import re
from collections.abc import Mapping
from typing import Final

from checker.cards.pins import pin_map
from checker.cards.types import Card
from checker.circuit.notes import Notes
from checker.circuit.parts import symbol_name
from checker.netlist.types import Part
from checker.pattern import lazy
from checker.shape import frozen

_WORDS: Final = {
    "BASE": "B",
    "COLLECTOR": "C",
    "EMITTER": "E",
    "ANODE": "A",
    "CATHODE": "K",
    "KATHODE": "K",
    "SUBSTRATE": "S",
    "DRAIN": "D",
    "GATE": "G",
    "SOURCE": "S",
}
_FUNCTION: Final = lazy(r"([A-Z]+?)[_ ]?(\d*)")
_COMPOUND: Final = lazy(r"(?:[AK]\d){2}")
_SUFFIX: Final = lazy(r"_([BCES]{3,4}|[DGS]{3}|[DGSB]{4})$", re.IGNORECASE)
_FOURTH: Final = {"bipolar": "S", "fet": "B", "diode": ""}
"""Substrate or body, where an element names it."""
_ORDER: Final = {"bipolar": "CBE", "fet": "DGS", "diode": "AK"}
"""Terminal order of SPICE elements."""
_TERMINALS: Final = frozenset("BCEGDS")
_WANTED: Final = {"bipolar": frozenset("CBE"), "fet": frozenset("DGS"), "diode": frozenset("AK")}


@frozen
class Unit:
    """One device of a part: `suffix` "" or ".A", ".B"...; `nets` by terminal letter. `shares_chip`: the part's ratings
    and thermal resistance are of it and the other unit together."""

    suffix: str
    nets: Mapping[str, str]
    shares_chip: bool = False


def spice_terminals(part: Part, kind: str) -> tuple[Unit, ...]:
    """Terminals of a SPICE element by position: C B E (S), D G S (B), or A K; empty where pins are missing."""
    letters = _ORDER[kind] + _FOURTH[kind]
    nets = {letter: pin.net for letter, pin in zip(letters, part.pins, strict=False)}
    return (Unit(suffix="", nets=nets),) if _WANTED[kind] <= nets.keys() else ()


def kicad_terminals(part: Part, kind: str, card: Card | None, notes: Notes) -> tuple[Unit, ...]:
    """Terminals of a schematic part; empty where nothing tells them apart.

    `kind` is "bipolar", "fet" or "diode". A disagreement between symbol and card about the pads is noted.
    """
    wanted = _WANTED[kind]
    units = () if kind == "diode" and len(part.pins) > 2 else _by_function(part, wanted) or _by_number(part, wanted)
    by_card = _pads_of_card(part, card, notes) if card is not None else None
    if units:
        _compare(part, units, by_card, notes)
        return units
    for letters in (_simulation_pins(part, kind), _symbol_order(part), by_card):
        units = _from_pads(part, letters, wanted)
        if units:
            return units
    if kind == "diode" and {pin.number for pin in part.pins} == {"1", "2"}:
        notes.add("pins", "pin 1 taken as cathode and pin 2 as anode, as editor symbols have them", part.ref)
        return _from_pads(part, {"1": "K", "2": "A"}, wanted)
    return ()


def _pads_of_card(part: Part, card: Card, notes: Notes) -> Mapping[str, str] | None:
    """The card's pads in the part's footprint; without a footprint, those of the only package it comes in.

    A part whose symbol is not in the export has pins without names: its author may have numbered them in any order, so
    without a footprint nothing says that the numbers are pads.
    """
    if part.footprint or len(card.packages) != 1 or not any(pin.function for pin in part.pins):
        return pin_map(card, part.footprint)
    ((package, pads),) = card.packages.items()
    named = ((pads.get(pin.number, "")[:1], letter_of(pin.function)[0]) for pin in part.pins)
    if any(letter in _TERMINALS and letter != by_card for by_card, letter in named):
        return None
    notes.add("pins", f"no footprint; pads as in {package}, the only package of its card", part.ref)
    return pads


def pads_of_symbol(part: Part) -> dict[str, str]:
    """Pad number -> terminal letter as the symbol has it: by pin functions, else simulation pins, else its name.

    Empty where nothing tells; pads numbered by letter tell nothing of the package.
    """
    by_function = {pin.number: letter_of(pin.function.removesuffix(f"_{pin.number}"))[0] for pin in part.pins}
    named = {pad: letter for pad, letter in by_function.items() if letter in _TERMINALS and pad.isdigit()}
    if named:
        return named
    pads = {pin.number for pin in part.pins}
    other = _simulation_pins(part, "bipolar") or _symbol_order(part) or {}
    return {pad: letter for pad, letter in other.items() if pad in pads and letter in _TERMINALS and pad.isdigit()}


def terminals_of(text: str) -> list[tuple[str, str]]:
    """Every (terminal letter, unit) that a pad serves: "K1A2" is a cathode and an anode."""
    if _COMPOUND.fullmatch(text):
        return [(letter, unit) for letter, unit in re.findall(r"([AK])(\d)", text)]
    return [letter_of(text)]


def letter_of(function: str) -> tuple[str, str]:
    """(terminal letter, unit number as text) of a pin function: "B1" is ("B", "1"), "Emitter" ("E", "")."""
    found = _FUNCTION.fullmatch(function.upper().strip("~ "))
    if found is None:
        return "", ""
    word, unit = found.groups()
    return _WORDS.get(word, word), unit


def _by_function(part: Part, wanted: frozenset[str]) -> tuple[Unit, ...]:
    """Terminals by pin function; the one pin that an export leaves out because nothing is on it gets its own
    net."""
    units: dict[str, dict[str, set[str]]] = {}
    for pin in part.pins:
        letter, unit = letter_of(pin.function.removesuffix(f"_{pin.number}"))
        units.setdefault(unit, {}).setdefault(letter, set()).add(pin.net)
    if len(units) == 1 and len(part.pins) == len(wanted) - 1:
        ((unit, pins),) = units.items()
        for letter in wanted - pins.keys():
            pins[letter] = {f"{part.ref}.{letter}"}
    return _units(units, wanted)


def _by_number(part: Part, wanted: frozenset[str]) -> tuple[Unit, ...]:
    """Old symbols number their pins by letter."""
    pins: dict[str, set[str]] = {}
    for pin in part.pins:
        pins.setdefault(pin.number.upper(), set()).add(pin.net)
    return _units({"": pins}, wanted)


def _units(units: Mapping[str, Mapping[str, set[str]]], wanted: frozenset[str]) -> tuple[Unit, ...]:
    """Complete devices whose terminals each lie on one net; empty if any is ambiguous."""
    complete = {unit: pins for unit, pins in units.items() if wanted <= pins.keys()}
    if not complete or any(len(pins[letter]) != 1 for pins in complete.values() for letter in wanted):
        return ()
    suffixes = [""] if len(complete) == 1 else [f".{chr(ord('A') + index)}" for index in range(len(complete))]
    return tuple(
        Unit(suffix=suffix, nets={letter: next(iter(complete[unit][letter])) for letter in sorted(wanted)})
        for suffix, unit in zip(suffixes, sorted(complete), strict=True)
    )


def _from_pads(part: Part, letters: Mapping[str, str] | None, wanted: frozenset[str]) -> tuple[Unit, ...]:
    """Devices from a map pad -> terminal ("1": "B", or "B1" for a dual)."""
    if not letters:
        return ()
    units: dict[str, dict[str, set[str]]] = {}
    for pin in part.pins:
        for letter, unit in terminals_of(letters.get(pin.number, "")):
            units.setdefault(unit, {}).setdefault(letter, set()).add(pin.net)
    return _units(units, wanted)


def _simulation_pins(part: Part, kind: str) -> dict[str, str] | None:
    """`Sim.Pins` ("1=C 2=B 3=E") or the older node sequence ("3,2,1")."""
    text = part.fields.get("Sim.Pins", "")
    if text:
        pairs = [pair.partition("=") for pair in text.split()]
        return {pad: letter.upper() for pad, _, letter in pairs}
    sequence = re.split(r"[\s,]+", part.fields.get("Spice_Node_Sequence", "").strip())
    if len(sequence) >= len(_ORDER[kind]):
        return dict(zip(sequence, _ORDER[kind], strict=False))
    return None


def _symbol_order(part: Part) -> dict[str, str] | None:
    """Pads in the order that the symbol's name spells: Q_NPN_BCE."""
    for name in (symbol_name(part), part.value):
        found = _SUFFIX.search(name)
        if found is not None:
            return {str(place): letter for place, letter in enumerate(found[1].upper(), start=1)}
    return None


def _compare(part: Part, units: tuple[Unit, ...], by_card: Mapping[str, str] | None, notes: Notes) -> None:
    """Note where the card's pads for this footprint would give other terminals than the symbol."""
    if not by_card or len(units) != 1 or not all(pin.number in by_card for pin in part.pins):
        return
    nets: dict[str, set[str]] = {}
    for pin in part.pins:
        nets.setdefault(by_card[pin.number], set()).add(pin.net)
    if any(nets.get(letter) != {net} for letter, net in units[0].nets.items()):
        pads = ", ".join(f"{pad}={letter}" for pad, letter in sorted(by_card.items()))
        notes.add("pins", f"the symbol's pins are used, but the part in this package has {pads}", part.ref)
