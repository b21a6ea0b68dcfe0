"""Regulators whose output follows from two resistors: their output net is a rail.

Reference voltages and adjust currents are typical ones of data sheets, from memory. Two kinds:

* floating (LM317 and its like): VREF stands between OUT and ADJ, so VOUT = VREF (1 + R2/R1) + IADJ R2, R1 from OUT to
  ADJ and R2 from ADJ to ground;
* feedback (a pin FB, ADJ or REF against ground): the net at the far end of the upper resistor stands at
  VREF (1 + R1/R2), whatever coil lies between it and the part; a shunt reference holds its cathode so.
"""

from __future__ import annotations

import re
from collections.abc import Iterable, Iterator
from typing import Final

from checker.circuit.draft import Draft
from checker.circuit.parts import symbol_name
from checker.netlist.types import Part

FLOATING: Final[tuple[tuple[str, float, float], ...]] = (
    (r"(?:LM|L|UA)?[123]17(?!\d)|LM3(?:38|50)(?!\d)", 1.25, 50e-6),
    (r"(?:LM|AMS|LD|NCP|TS|AZ|REG|SPX)1117A?(?:[-_ ]?ADJ)?(?![-_ ]?\d)", 1.25, 60e-6),
    (r"(?:LT|LM)108[3-6](?:[-_ ]?ADJ)?(?![-_ ]?\d)", 1.25, 55e-6),
    (r"(?:LM)?[123]37(?!\d)", -1.25, -65e-6),
)
"""Type, reference voltage between OUT and ADJ [V], current out of ADJ [A]."""
FEEDBACK: Final[tuple[tuple[str, float], ...]] = (
    (r"(?:TL|LM|KA|AZ)431\w*", 2.495),
    (r"(?:TLV|LMV)431\w*", 1.24),
    (r"LP295[01]\w*", 1.235),
    (r"MIC29[13]\d2\w*|MIC5205YM5\w*", 1.24),
    (r"LT176[1-4]\w*|LT1129\w*", 1.22),
    (r"LM25(?:7[4-6]|9[4-6])[\w-]*ADJ\w*", 1.23),
    (r"MC3[34]063\w*|NCP3063\w*", 1.25),
    (r"MP1584\w*|AP632\d\d\w*|TPS5433\d\w*", 0.8),
    (r"TPS5430\w*", 1.221),
)
"""Type, voltage of the feedback pin against ground [V]; the first that fits counts."""
SENSE: Final = frozenset({"ADJ", "FB", "REF", "VFB", "ADJ/GND", "R", "FEEDBACK"})
_OUT: Final = frozenset({"VO", "OUT", "VOUT", "OUTPUT", "O"})


def adjustable_nets(draft: Draft) -> Iterator[tuple[str, float, str, str]]:
    """(net, volts, part with its formula, sense pin) of every adjustable regulator whose two resistors are known."""
    for part in draft.netlist.parts:
        if part.do_not_fit or part.letter.upper() not in ("U", "IC", "VR", "REG", "N", "Q", "D"):
            continue
        sense = [pin for pin in part.pins if pin.function.upper().strip("~{}") in SENSE]
        if len(sense) != 1:
            continue
        found = _floating(draft, part, draft.net(sense[0].net)) or _feedback(draft, part, draft.net(sense[0].net))
        if found is not None:
            yield (*found, sense[0].number)


def _typed(part: Part, table: Iterable[tuple[str, *tuple[float, ...]]]) -> tuple[float, ...] | None:
    names = (part.value, symbol_name(part))
    for pattern, *figures in table:
        if any(re.match(pattern, name, re.IGNORECASE) for name in names):
            return tuple(figures)
    return None


def _floating(draft: Draft, part: Part, sense: str) -> tuple[str, float, str] | None:
    figures = _typed(part, FLOATING)
    outputs = {draft.net(pin.net) for pin in part.pins if pin.function.upper().strip("~{}") in _OUT}
    if figures is None or len(outputs) != 1:
        return None
    (out,) = outputs
    reference, current = figures
    if sense == draft.ground:
        return out, reference, f"{part.ref} ({part.value}), its reference {reference:g} V"
    upper, lower = _ohms(draft, sense, out), _ohms(draft, sense, draft.ground)
    if upper is None or lower is None:
        return None
    volts = reference * (1.0 + lower / upper) + current * lower
    return out, volts, f"{part.ref} ({part.value}): {reference:g} V (1 + R2/R1) + {current * 1e6:g} uA R2"


def _feedback(draft: Draft, part: Part, sense: str) -> tuple[str, float, str] | None:
    figures = _typed(part, FEEDBACK)
    if figures is None or sense == draft.ground:
        return None
    (reference,) = figures
    words = f"{part.ref} ({part.value}): {reference:g} V (1 + R1/R2)"
    on = [draft.resistors[name] for table, name in draft.elements_on(sense) if table == "resistors"]
    cathodes = {draft.net(pin.net) for pin in part.pins if pin.function.upper() in ("K", "C", "CATHODE")}
    if sense in cathodes:
        return sense, reference, f"{part.ref} ({part.value}), its reference {reference:g} V"
    lower = _ohms(draft, sense, draft.ground)
    tops = {wire.other(sense) for wire in on} - {draft.ground}
    if lower is None or len(tops) != 1:
        return None
    (top,) = tops
    upper = _ohms(draft, sense, top)
    return None if upper is None else (top, reference * (1.0 + upper / lower), words)


def _ohms(draft: Draft, one: str, other: str) -> float | None:
    """Resistance of what stands directly between two nets; None for nothing."""
    siemens = sum(
        1.0 / draft.resistors[name].value
        for table, name in draft.elements_on(one)
        if table == "resistors" and draft.resistors[name].other(one) == other and draft.resistors[name].value > 0.0
    )
    return 1.0 / siemens if siemens else None
