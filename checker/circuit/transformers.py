"""Transformers and bifilar windings as coupled inductors, where turns or a ratio are written.

Pins go in pairs, 1-2, 3-4, 5-6, as in the editor's own symbols; a tapped secondary has its tap between its ends
(common practice, no source). For direct current a winding is a wire. Leakage is not known and left out; the inductance
comes from turns on a known core or from a value in henry, else it is so large that it does not count. Which ends are in
phase is taken from the order of the pins.
"""

from __future__ import annotations

import re
from collections.abc import Sequence
from typing import Final

from checker.circuit.draft import Draft
from checker.circuit.entry import bare_fact
from checker.circuit.others import add_unmodelled
from checker.circuit.parts import symbol_name
from checker.circuit.wound import core_of
from checker.netlist.types import Part, Pin
from checker.quantity.parse import parse_engineering
from checker.trouble import NotAQuantity

LARGE_H: Final = 1.0
"""Inductance of a winding that nothing tells: some ohms at mains, megohms at radio frequency."""
_TURNS: Final = re.compile(r"(?<![\w.])(\d{1,4}(?:\.5)?) ?(?:T|TURNS?)(?![\w])", re.IGNORECASE)
_RATIO: Final = re.compile(r"(?<![\w.:])(\d{1,4}(?:\.\d+)?)((?: ?: ?\d{1,4}(?:\.\d+)?){1,3})(?![\w.:])")
_BIFILAR: Final = re.compile(r"BIFILAR|\b1:1 ?(?:BALUN|CHOKE)|COMMON[-_ ]?MODE", re.IGNORECASE)


def add_transformer(draft: Draft, part: Part) -> None:
    """Windings by their turns; a part whose turns or pins are not known stays unmodelled, with what it lacks."""
    turns = turns_of(part)
    pairs = None if turns is None else windings(part.pins, len(turns))
    if turns is None or pairs is None:
        add_unmodelled(draft, part)
        return
    turns = _tapped(turns, len(pairs))
    first_h, why = _inductance(part, turns[0])
    draft.facts[part.ref] = bare_fact(draft, part, "coil")
    names = []
    for place, ((a, b), count) in enumerate(zip(pairs, turns, strict=True), start=1):
        if draft.net(a) != draft.net(b):
            name = f"{part.ref}.{place}"
            draft.wire("inductors", name, a, b, first_h * (count / turns[0]) ** 2)
            names.append(name)
    for k, one in enumerate(names):
        for other in names[k + 1 :]:
            draft.couplings[f"{one}.{other}"] = (one, other, 1.0)
    ratio = ":".join(f"{count:g}" for count in turns)
    draft.notes.add("parts", f"windings {ratio} by turns, without leakage, in phase by pin order; {why}", part.ref)


def turns_of(part: Part) -> tuple[float, ...] | None:
    """Turns of each winding, or numbers in their ratio; None where nothing tells them."""
    texts = [part.fields.get(key, "") for key in ("Turns", "Ratio", "N")]
    texts += [part.value, symbol_name(part).replace("_", " ")]
    for text in texts:
        counted = [float(found) for found in _TURNS.findall(text)]
        if len(counted) > 1:
            return tuple(counted) if min(counted) > 0.0 else None
        ratio = _RATIO.search(text)
        if ratio is not None:
            numbers = [float(word) for word in re.findall(r"\d+(?:\.\d+)?", ratio[0])]
            return tuple(numbers) if min(numbers) > 0.0 else None
    if any(_BIFILAR.search(text) for text in texts):
        return 1.0, 1.0
    return None


def windings(pins: Sequence[Pin], count: int) -> list[tuple[str, str]] | None:
    """The nets of each winding's ends; None where the pins do not tell. Five pins: the second winding is tapped."""
    by_number = {int(pin.number): pin.net for pin in pins if pin.number.isascii() and pin.number.isdigit()}
    if len(by_number) != len(pins):
        return None
    numbers = sorted(by_number)
    if numbers == [1, 2, 3, 4] or (numbers == [1, 2, 3, 4, 5, 6] and count == 3):
        nets = [by_number[number] for number in numbers]
        return list(zip(nets[::2], nets[1::2], strict=True)) if count == len(nets) // 2 else None
    if numbers == [1, 2, 3, 4, 5] and count in (2, 3):
        a, b, first, tap, last = (by_number[number] for number in numbers)
        return [(a, b), (first, tap), (tap, last)]
    return None


def _tapped(turns: tuple[float, ...], count: int) -> tuple[float, ...]:
    """Turns of each half of a tapped secondary, whose ratio counts the whole."""
    return turns if len(turns) == count else (turns[0], turns[1] / 2.0, turns[1] / 2.0)


def _inductance(part: Part, turns: float) -> tuple[float, str]:
    """Inductance of the first winding [H], and where it is from."""
    core = core_of(part.value) if _TURNS.search(part.value) else None
    if core is not None:
        return core[1] * 1e-9 * turns**2, f"inductance from {core[0]} (from memory)"
    for key in ("Inductance", "L", "Lp"):
        try:
            return parse_engineering(part.fields.get(key, ""), "H").si, f"inductance from the field {key}"
        except NotAQuantity:
            continue
    return LARGE_H, "inductance not stated, taken as large"
