"""Declared parasitics of capacitors and coils: series resistance and inductance, self-resonance, quality.

They come from the intent file, from SPICE text (`Rser Lser Rpar Cpar`), or from fields of the schematic (ESR, ESL, DCR,
SRF), in that order of trust, and become elements of their own around the ideal part: a capacitor's stand in series, a
coil's resistance in series and its capacitance and loss across it.
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from typing import Final

from checker.circuit.draft import Draft
from checker.netlist.types import Part
from checker.quantity.parse import parse_engineering
from checker.shape import frozen
from checker.trouble import NotAQuantity

WRITTEN: Final = frozenset({"rser", "lser", "rpar", "cpar"})
FIELDS: Final[Mapping[str, str]] = {"ESR": "ohm", "DCR": "ohm", "ESL": "H", "SRF": "Hz"}


@frozen
class Declared:
    """What is said of one part, 0 for nothing: series resistance [ohm] and inductance [H], parallel resistance [ohm]
    and capacitance [F], self-resonance [Hz], quality (plain) at a frequency [Hz]."""

    rser: float = 0.0
    lser: float = 0.0
    rpar: float = 0.0
    cpar: float = 0.0
    resonance_hz: float = 0.0
    quality: float = 0.0
    quality_hz: float = 0.0


def around(draft: Draft, part: Part, kind: str, si: float, ends: tuple[str, str]) -> tuple[str, str]:
    """Put the parasitics of a part of value `si` between nets `ends` in the draft; the nets of the ideal part."""
    said = declared(draft, part, kind)
    omega = 2.0 * math.pi * said.resonance_hz
    tuned = 1.0 / (omega**2 * si) if omega else 0.0
    at_q = 2.0 * math.pi * said.quality_hz * si
    if kind == "capacitor":
        lossy = 1.0 / (at_q * said.quality) if said.quality else 0.0
        chain = (("resistors", "rser", said.rser or lossy), ("inductors", "lser", said.lser or tuned))
        across = (("resistors", "rpar", said.rpar), ("capacitors", "cpar", said.cpar))
    else:
        chain = (("resistors", "rser", said.rser), ("inductors", "lser", said.lser))
        across = (
            ("resistors", "rpar", said.rpar or at_q * said.quality),
            ("capacitors", "cpar", said.cpar or (tuned if kind == "inductor" else 0.0)),
        )
    for table, name, value in across:
        if value:
            draft.wire(table, f"{part.ref}.{name}", *ends, value)  # type: ignore[arg-type]
    # The far side of a source on ground gets them, so that the source itself still stands on ground.
    turned = kind == "voltage" and draft.net(ends[0]) == draft.ground
    end, other = reversed(ends) if turned else ends
    for table, name, value in chain:
        if value:
            inner = f"{part.ref}.n" if name == "rser" else f"{part.ref}.m"
            draft.wire(table, f"{part.ref}.{name}", end, inner, value)  # type: ignore[arg-type]
            end = inner
    return (other, end) if turned else (end, other)


def declared(draft: Draft, part: Part, kind: str) -> Declared:
    """All that is said, the more trustworthy over the other."""
    found = {key: abs(value) for key, value in part.params.items() if key in WRITTEN}
    for key, unit in FIELDS.items():
        value = _field(part.fields.get(key, ""), unit)
        name = {"ohm": "rser", "H": "lser", "Hz": "resonance_hz"}[unit]
        if value and (key != "DCR" or kind == "inductor"):
            found.setdefault(name, value)
    said = draft.said(part.ref)
    own = said.parasitics if said is not None else {}
    return Declared(**{**found, **own})


def _field(text: str, unit: str) -> float:
    try:
        return parse_engineering(text, unit).si if text else 0.0
    except NotAQuantity:
        return 0.0
