"""Outputs of logic and of controllers: two levels, both of which the board must bear.

The export does not say at which level an output rests. An output is taken as low in the nominal condition, a port
pin of a controller as open (as after reset), and each level of all of them together is a state of the board.
"""

from __future__ import annotations

import re
from typing import Final, Literal

from checker.circuit.draft import Draft
from checker.circuit.drives import DRIVEN_OHM, OPEN_OHM, drive_name
from checker.circuit.families import is_controller, is_two_level, pulls_down_only
from checker.circuit.order import natural_key
from checker.circuit.types import Change, Scenario
from checker.netlist.types import Part, Pin
from checker.pattern import lazy

LOW: Final = "logic low"
HIGH: Final = "logic high"
Way = Literal["output", "port", "sink"]
"""How a pin acts: driven to both levels; the same, but open after reset; pulled low or open."""
_OUTPUT: Final = frozenset({"output", "3state", "tri_state", "tristate"})
_BOTH: Final = frozenset({"bidi", "bidirectional", "passive", "unspecified", ""})
_SINK: Final = frozenset({"opencol", "open_collector", "opencollector"})
_SUPPLY: Final = lazy(
    r"[AD]?V(?:CC|DD|SS|EE|BAT|IN|REF)\w*|\+?\d(?:V\d|[.]\d)?V?|[AD]?GND\w*|GROUND|AREF|\w*XTAL\w*|R(?:E)?SE?T|~?RESET~?",
    re.IGNORECASE,
)
_PLUS: Final = lazy(r"[AD]?V(?:CC|DD)\w*|V\+|VS|VIN|VBAT|\+?(?:3V3|5V|3[.]3V)", re.IGNORECASE)


def add_logic(draft: Draft) -> None:
    """A source for every net that logic drives and that the intent's states leave alone; fills `draft.states`."""
    if draft.netlist.format != "kicad":
        return
    spoken = {label for state in draft.intent.states for label in state.pins}
    low: list[Change] = []
    high: list[Change] = []
    for net, drivers in sorted(_drivers(draft, spoken).items(), key=lambda entry: natural_key(entry[0])):
        way, part, pin, volts = min(drivers, key=lambda one: (one[0] == "port", natural_key(one[1].ref)))
        label = f"{part.ref}.{pin.number}"
        _drive(draft, label, net, way)
        draft.driven_pins.update((one.ref, other.number) for _, one, other, _ in drivers)
        low += _levels(label, 0.0)
        high += _levels(label, None if way == "sink" else volts)
        _note(draft, way, part, volts)
    if low:
        draft.states.append(Scenario(name=LOW, kind="state", changes=tuple(low)))
        draft.states.append(Scenario(name=HIGH, kind="state", changes=tuple(high)))


def _drivers(draft: Draft, spoken: set[str]) -> dict[str, list[tuple[Way, Part, Pin, float]]]:
    """Net -> the logic pins that may drive it, with the volts of their high level."""
    present = draft.present()
    loose = {pin.part for pin in draft.loose_pins}
    found: dict[str, list[tuple[Way, Part, Pin, float]]] = {}
    for part in draft.netlist.parts:
        controller = is_controller(part)
        if part.do_not_fit or not (controller or is_two_level(part)) or part.ref not in loose:
            continue
        volts = _high_volts(draft, part)
        for pin in part.pins:
            way = _way(part, pin, controller=controller)
            net = draft.net(pin.net)
            said = {f"{part.ref}.{pin.number}", f"{part.ref}.{pin.function}"} & spoken
            if way is None or volts is None or net not in present or draft.known_volts(net) is not None:
                continue
            if not said and net not in draft.nameless:
                found.setdefault(net, []).append((way, part, pin, volts))
    return found


def _way(part: Part, pin: Pin, *, controller: bool) -> Way | None:
    """How a pin drives its net; None where it does not, or not by levels."""
    kind = pin.kind.lower().split("+")[0]
    if _SUPPLY.fullmatch(pin.function.strip("~{}")):
        return None
    if kind in _SINK or (kind in _OUTPUT and pulls_down_only(part)):
        return "sink"
    if kind in _OUTPUT:
        return "port" if controller else "output"
    if kind in _BOTH and (controller or kind in ("bidi", "bidirectional")):
        return "port"
    return None


def _high_volts(draft: Draft, part: Part) -> float | None:
    """The part's own supply [V]; None where none of its supply pins is on a known net."""
    volts = [
        draft.known_volts(draft.net(pin.net))
        for pin in part.pins
        if "power_in" in pin.kind.lower() or _PLUS.fullmatch(pin.function)
    ]
    return max((one for one in volts if one is not None and one > 0.0), default=None)


def _drive(draft: Draft, label: str, net: str, way: Way) -> None:
    """A source behind a resistor, low in the nominal condition; a port is open there."""
    name = drive_name(label)
    draft.tie(name, f"{name}.n", draft.ground, 0.0)
    draft.wire("resistors", f"{name}.r", f"{name}.n", net, OPEN_OHM if way == "port" else DRIVEN_OHM)


def _levels(label: str, volts: float | None) -> list[Change]:
    """What sets a pin to a level; None: open."""
    name = drive_name(label)
    if volts is None:
        return [Change(part=f"{name}.r", property="r_ohm", value=OPEN_OHM)]
    return [
        Change(part=f"{name}.r", property="r_ohm", value=DRIVEN_OHM),
        Change(part=name, property="v_v", value=volts),
    ]


def _note(draft: Draft, way: Way, part: Part, volts: float) -> None:
    texts = {
        "output": f'logic outputs taken as low; the state "{HIGH}" has them at {volts:g} V',
        "port": f'port pins taken as open, as after reset; the states "{LOW}" and "{HIGH}" ({volts:g} V) drive them',
        "sink": f'outputs that only pull down taken as low; the state "{HIGH}" has them open',
    }
    draft.notes.add("states", texts[way], part.ref)
