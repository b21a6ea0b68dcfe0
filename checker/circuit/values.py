"""The value of a two-terminal part, with its tolerance, and the tolerances assumed where nothing says."""

from __future__ import annotations

import math
import re
from typing import Final

from checker.circuit.draft import Draft
from checker.netlist.types import Part
from checker.pattern import lazy
from checker.quantity.parse import parse_engineering
from checker.quantity.value import Value
from checker.trouble import NotAQuantity

TOLERANCE: Final = {"ohm": 0.05, "F": 0.20, "H": 0.20}
"""Fractions assumed where neither value text nor intent says (common practice, no source: E24 carbon film
and general-purpose capacitors and inductors)."""
SMALLEST, LARGEST = 1e-21, 1e24
"""Values outside are no part's, and no arithmetic's either."""
_RANGE: Final = lazy(
    r"(?P<low>\d+(?:\.\d+)?\s*[a-zµ]{0,2})\s*(?:-|\.\.|to)\s*(?P<high>\d+(?:\.\d+)?)\s*(?P<unit>[a-zµΩ]{0,4})",
    re.IGNORECASE,
)
_DOUBTFUL_OHM: Final = 0.1
_MILLI: Final = lazy(r"\d[mM](?![A-Za-z])")
"""What most often comes of a mega written in the other dialect."""
_POTENTIOMETERS: Final = frozenset({"RV", "VR", "P", "POT", "TR"})
NAMES: Final = {"ohm": "resistors", "F": "capacitors", "H": "inductors"}


def part_value(draft: Draft, part: Part, unit: str) -> Value | None:
    """The part's value in SI [`unit`: "ohm", "F", "H"], or None where it says none; notes an assumed
    tolerance."""
    said = draft.said(part.ref)
    intended = None
    if said is not None:
        intended = {"ohm": said.resistance_ohm, "F": said.capacitance_f, "H": said.inductance_h}[unit]
    tapered = unit == "ohm" and part.number is None and part.letter.upper() in _POTENTIOMETERS and "%" not in part.value
    found = (intended, None) if intended is not None else None if tapered else written_value(part, unit)
    if found is None:
        # The letter behind a potentiometer's value is its taper, no tolerance.
        found = _workshop(draft, part, unit) or (written_value(part, unit) if tapered else None)
    if found is None:
        ends = _ends(part.value, unit)
        if ends is not None:
            middle = sum(ends) / 2
            draft.notes.add("values", f"{part.value} taken at the middle of its range, both ends as corners", part.ref)
            draft.ranges[part.ref] = ends[0] / middle, ends[1] / middle
            found = middle, None
    if found is None or not math.isfinite(found[0]) or found[0] < 0.0:
        return None
    si, tolerance = found
    if unit == "ohm" and intended is None and 0.0 < si < _DOUBTFUL_OHM and _MILLI.search(part.value):
        text = f"{part.value} read as milliohms; megohms are 1Meg in SPICE text and 1M on a schematic"
        draft.notes.add("values", text, part.ref)
    if said is not None and said.tolerance is not None:
        tolerance = said.tolerance
    assumed = tolerance is None and si > 0.0
    if assumed:
        tolerance = TOLERANCE[unit]
        draft.notes.add("tolerances", f"{NAMES[unit]} without a written tolerance: ±{tolerance * 100:g} %")
    origin = part.origin if intended is None or said is None else said.origin
    return Value(si=si, unit=unit, text=part.value, tolerance=tolerance, origin=origin, assumed_tolerance=assumed)


def _workshop(draft: Draft, part: Part, unit: str) -> tuple[float, float | None] | None:
    """Turns on a core, a coded inductance, a potentiometer with its taper."""
    from checker.circuit.wound import coded_henry, tapered_ohm, wound_henry

    if unit == "H":
        wound = wound_henry(f"{part.value} {part.fields.get('Turns', '')}")
        if wound is not None:
            draft.notes.add("values", f"turns on a {wound[1]} core, by its inductance factor (from memory)", part.ref)
            return wound[0], None
        return coded_henry(part.value)
    if unit == "ohm" and part.letter.upper() in _POTENTIOMETERS:
        ohm = tapered_ohm(part.value)
        return None if ohm is None else (ohm, None)
    return None


def _ends(text: str, unit: str) -> tuple[float, float] | None:
    """Both ends of a trimmer's range ("2-10pF") in SI, the lower first."""
    found = _RANGE.fullmatch(text.strip())
    if found is None:
        return None
    low, high = found["low"], found["high"]
    if not low[-1].isalpha():
        low += found["unit"]
    try:
        first, second = (parse_engineering(end, unit).si for end in (low, high + found["unit"]))
    except NotAQuantity:
        return None
    return (first, second) if 0.0 < first < second else None


def written_value(part: Part, unit: str) -> tuple[float, float | None] | None:
    """(SI value, tolerance) as the netlist writes it."""
    if part.number is not None:
        sound = part.number == 0.0 or SMALLEST <= abs(part.number) <= LARGEST
        percent = part.params.get("tol")
        return (part.number, None if percent is None else percent / 100.0) if sound else None
    text = part.fields.get("Spice_Model", "") if part.fields.get("Spice_Primitive") else part.value
    for candidate in dict.fromkeys((text, part.value)):
        try:
            reading = parse_engineering(candidate, unit)
        except NotAQuantity:
            continue
        return reading.si, reading.tolerance
    return None
