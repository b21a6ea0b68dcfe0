"""Fixed regulators that say their voltage in their name: their output net is a rail.

Type numbers and endings are common practice of the makers, no source.
"""

from __future__ import annotations

import re
from typing import Final

from checker.circuit.draft import Draft
from checker.circuit.parts import symbol_name
from checker.netlist.types import Part
from checker.pattern import lazy

_SERIES: Final = lazy(r"(?:[A-Z]{1,3})?(?P<family>78|79)[LMST]?(?P<volts>\d\d)(?!\d)", re.IGNORECASE)
_FAMILY: Final = lazy(r"1117|1086|29(?:31|37|40|50|51|85)|3985|17[0-9]{2}-|3819|LDO|REGULATOR", re.IGNORECASE)
_ENDING: Final = lazy(
    r"[-_](?P<whole>\d{1,2})[.-](?P<part>\d)(?!\d)|(?:[-_]|(?<=\d)V)(?P<two>[1-5]\d)(?:02)?(?!\d)", re.IGNORECASE
)
_OUTPUTS: Final = frozenset({"VO", "OUT", "VOUT", "OUTPUT", "O"})
_GROUNDS: Final = frozenset({"GND", "COM", "GROUND", "VSS"})


def regulated_volts(part: Part) -> float | None:
    """Output voltage [V] that a fixed regulator's value or symbol states; None for any other part."""
    for name in (part.value, symbol_name(part)):
        series = _SERIES.match(name)
        if series is not None:
            volts = float(series["volts"])
            return -volts if series["family"] == "79" else volts
        if not _FAMILY.search(f"{name} {part.symbol} {part.description}"):
            continue
        ending = _ENDING.search(name)
        if ending is not None:
            return float(ending["two"]) / 10 if ending["two"] else float(f"{ending['whole']}.{ending['part']}")
    return None


def regulated_nets(draft: Draft) -> list[tuple[str, float, str]]:
    """(net, volts, part) of every fixed regulator whose common pin is on ground and whose output is one net."""
    found = []
    for part in draft.netlist.parts:
        volts = regulated_volts(part) if part.letter.upper() in ("U", "IC", "VR", "REG", "N") else None
        if volts is None or part.do_not_fit:
            continue
        commons = {draft.net(pin.net) for pin in part.pins if pin.function.upper().split("/")[0] in _GROUNDS}
        outputs = {draft.net(pin.net) for pin in part.pins if pin.function.upper() in _OUTPUTS}
        outputs = outputs or {draft.net(pin.net) for pin in part.pins if "power_out" in pin.kind}
        if commons == {draft.ground} and len(outputs) == 1:
            found.append((outputs.pop(), volts, f"{part.ref} ({part.value})"))
    return sorted(found)
