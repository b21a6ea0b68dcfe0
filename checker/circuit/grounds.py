"""Which nets are the reference, node 0."""

from __future__ import annotations

import re
from collections.abc import Iterable

from checker.circuit.notes import Notes
from checker.circuit.order import last_segment, listed, natural
from checker.intent.types import Intent
from checker.netlist.types import Netlist
from checker.pattern import lazy
from checker.shape import frozen

_GROUND = lazy(r"[ADPSC]?GND(?:[ADPSR]|PWR|REF|ISO|\d{1,2})?(?:[_-]\w{1,10})?|EARTH(?:_\w+)?|0V", re.IGNORECASE)
_SIGNS = ("GND", "EARTH", "0V")
"""One of these stands in every strong name: the long pattern is for few nets."""
_WEAK = lazy(r"VSS[AD]?|COM(?:MON)?", re.IGNORECASE)
"""A ground by name only where no net has a stronger one: beside a GND it may be a negative supply or a bus."""


@frozen
class Ground:
    """`name` stands for all `keys`; `found` False where the board shows no reference (then `keys` is
    empty)."""

    name: str
    keys: frozenset[str]
    found: bool


def find_ground(netlist: Netlist, intent: Intent, notes: Notes) -> Ground:
    """The ground nets: what the format fixes, and nets with ground names, merged into one.

    A board with neither takes a rail that the intent declares as 0 V. Otherwise none is guessed.
    Names: common practice, no source.
    """
    fixed = [key for key in netlist.ground if key in netlist.nets]
    kicad = netlist.format == "kicad"
    named = _strong(netlist) if kicad or not fixed else _named(netlist, lazy("GND", re.IGNORECASE), netlist.nets)
    keys = fixed + [key for key in named if key not in fixed]
    keys = keys or _named(netlist, _WEAK, netlist.nets)
    if not keys:
        return _declared(netlist, intent, notes)
    for key in keys[1:]:
        notes.add("ground", f"net {key} taken as the same ground as {keys[0]}")
    return Ground(name=keys[0], keys=frozenset(keys), found=True)


def _strong(netlist: Netlist) -> list[str]:
    names = {key: (net.name or key).upper() for key, net in netlist.nets.items()}
    return _named(netlist, _GROUND, [key for key, name in names.items() if any(sign in name for sign in _SIGNS)])


def _named(netlist: Netlist, pattern: re.Pattern[str], among: Iterable[str]) -> list[str]:
    """Nets whose last segment has such a name; a plain GND first, then in natural order."""
    found = [key for key in among if pattern.fullmatch(last_segment(netlist.nets[key].name or key))]
    return sorted(natural(found), key=lambda key: _rank(netlist.nets[key].name or key))


def _rank(name: str) -> tuple[int, int]:
    return (0 if last_segment(name).upper() == "GND" else 1, name.count("/"))


def _declared(netlist: Netlist, intent: Intent, notes: Notes) -> Ground:
    zero = [rail.net for rail in intent.rails if rail.volts == 0.0]
    keys = [key for key in netlist.nets if key in zero or last_segment(key) in zero]
    if keys:
        notes.add("ground", f"the rail declared as 0 V is the ground: {listed(keys)}")
        return Ground(name=keys[0], keys=frozenset(keys), found=True)
    name = _unused("0", netlist.nets)
    notes.add("ground", "no net is ground by format, name or intent; declare one as a rail of 0 V")
    return Ground(name=name, keys=frozenset(), found=False)


def _unused(name: str, taken: Iterable[str]) -> str:
    known = set(taken)
    while name in known:
        name += "'"
    return name
