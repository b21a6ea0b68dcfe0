"""Loads that state their resistance: buzzers, loudspeakers, motors, solenoids, lamps and thermistors."""

from __future__ import annotations

import re
from typing import Final

from checker.circuit.draft import Draft
from checker.circuit.elements import two_ends
from checker.circuit.parts import symbol_name
from checker.netlist.types import Part
from checker.pattern import lazy

_SORTS: Final = (
    ("loudspeaker", r"SPEAKER\w*|LOUDSPEAKER\w*", ("LS", "SP", "SPK")),
    ("buzzer", r"BUZZER\w*|BEEPER\w*", ("BZ", "LS")),
    ("microphone", r"MIC(?:ROPHONE)?(?:_\w+)?", ("MK", "MIC")),
    ("motor", r"MOTOR\w*", ("M", "MOT")),
    ("solenoid", r"SOLENOID\w*|ELECTROMAGNET\w*", ("L", "Y")),
    ("lamp", r"LAMP\w*|BULB\w*", ("LA", "H", "DS")),
    ("thermistor", r"THERM\w*|NTC\w*|PTC\w*", ("TH", "RT", "R", "NTC")),
    ("light-dependent resistor", r"LDR\w*|R_PHOTO\w*", ("R", "LDR")),
    ("shunt", r"R_?SHUNT\w*", ("R", "RS")),
)
_OHM: Final = lazy(
    r"(?<![\w.])(?P<whole>\d+)(?:(?P<point>[RK])(?P<part>\d+)|[.,](?P<fraction>\d+))?\s*(?P<unit>R|Ω|K|ohms?)?(?![\w.])",
    re.IGNORECASE,
)
_PIEZO: Final = lazy(r"PIEZO|CRYSTAL|CERAMIC|ULTRASONIC", re.IGNORECASE)


def add_loads(draft: Draft) -> None:
    """A resistor for every two-ended load whose text states ohms; a piezoelectric one is open at DC."""
    loose = {pin.part for pin in draft.loose_pins}
    for part in draft.netlist.parts:
        sort = sort_of(part) if part.ref in loose and not part.do_not_fit else None
        ends = two_ends(part) if sort else None
        if sort is None or ends is None:
            continue
        text = f"{part.value} {symbol_name(part)}"
        ohm = stated_ohm(part.value)
        if sort in ("loudspeaker", "buzzer") and _PIEZO.search(text) and ohm is None:
            draft.notes.add("parts", "piezoelectric: taken as open", part.ref)
        elif ohm is not None:
            exact = sort in ("shunt",)
            draft.notes.add("parts", f"{sort} taken as {ohm:g} ohm" + ("" if exact else ", its stated value"), part.ref)
            draft.wire("resistors", f"{part.ref}.r", *ends, ohm)
        else:
            continue
        draft.driven_pins.update((part.ref, pin.number) for pin in part.pins)


def sort_of(part: Part) -> str | None:
    """What load a part is; None for any other part."""
    name = symbol_name(part)
    for sort, pattern, letters in _SORTS:
        if part.letter.upper() in letters and re.fullmatch(pattern, name, re.IGNORECASE):
            return sort
    return None


def stated_ohm(text: str) -> float | None:
    """The resistance [ohm] that a text states with its unit: "8R", "15R coil", "10k NTC", "32 ohm"."""
    for found in _OHM.finditer(text):
        unit = (found["point"] or found["unit"] or "").upper()
        if not unit:
            continue
        ohm = float(f"{found['whole']}.{found['part'] or found['fraction'] or '0'}")
        return (ohm * 1e3 if unit == "K" else ohm) or None
    return None
