"""Nets of known voltage: from ideal sources, from the intent, from net names, in that order of trust."""

from __future__ import annotations

import re
from typing import Final, Literal

from checker.circuit.draft import Draft
from checker.circuit.lookup import find_net
from checker.circuit.order import last_segment, natural, natural_key
from checker.circuit.regulators import regulated_nets
from checker.circuit.types import Rail
from checker.intent.types import RailIntent
from checker.pattern import lazy

_TAIL: Final = (
    r"(?:[AD]|[_-](?:IN|OUT|[A-D]|ANA(?:LOG)?|DIG(?:ITAL)?|FUSED|RAW|SUPPLY"
    r"|RF|AUDIO|MCU|USB|MAIN|AUX|PWR|REG|LED|IO|LOGIC|CORE))?"
)
_NUMBER: Final = r"(?P<whole>\d{1,3})(?:V(?P<part>\d{1,2})|[.,](?P<point>\d{1,2})V(?:DC)?|V(?:DC)?)"
_NAMED: Final = lazy(rf"(?P<sign>[+\-PN]|PLUS|MINUS)?V?{_NUMBER}{_TAIL}", re.IGNORECASE)
_AFTER_WORD: Final = lazy(
    rf"(?:V(?:CC|DD|BUS|BAT|IN|REG|SYS)?|[AD]V(?:CC|DD)|REG|SYS|PWR|SUPPLY|P)[_-]?(?P<sign>\+?){_NUMBER}{_TAIL}",
    re.IGNORECASE,
)
_BARE: Final = lazy(r"(?P<sign>[+-])(?P<whole>\d{1,3})" + _TAIL, re.IGNORECASE)
_SIGNED: Final = lazy(rf"V(?P<sign>[+-])(?P<whole>\d{{1,3}})V?{_TAIL}", re.IGNORECASE)
_V33: Final = lazy(rf"V33{_TAIL}", re.IGNORECASE)
_USUAL: Final = frozenset({5, 6, 8, 9, 10, 12, 13, 15, 18, 24, 28, 30, 36, 48})
"""Supply voltages in use; a signed number that names a net without a V is a supply only if it is one of
these."""
_FILTER_OHM: Final = 1000.0
"""Largest resistor taken for a supply filter (common practice, no source)."""
_NAMELESS: Final = lazy(
    r"[AD]?V(?:CC|DD|EE)[AD]?|V(?:BAT|BUS|SUP|SUPPLY|S?PP|NN)|V[+-]{1,2}|[+-]V(?:CC|DD|EE|S)?|VSS[AD]?|B\+|[+-]?HV|VS[+-]",
    re.IGNORECASE,
)
"""Names of supplies that do not say how many volts."""


def add_rails(draft: Draft) -> None:
    """Find every rail, give each one without an element a source of its own, and list names that give no
    volts.

    Raises InputTrouble for a declared rail whose net the netlist does not have.
    """
    _from_elements(draft)
    _from_intent(draft)
    _from_names(draft)
    _from_regulators(draft)
    _nameless(draft)
    draft.rails.sort(key=lambda rail: natural_key(rail.net))


def volts_of_name(name: str) -> float | None:
    """Volts that the last segment of a net name states: "+3V3" is 3.3; None for names that state none."""
    text = last_segment(name).upper()
    if not any(map(str.isdigit, text)):
        return None
    if text.startswith("V33") and _V33.fullmatch(text):
        return 3.3
    found = (_NAMED.fullmatch(text) or _AFTER_WORD.fullmatch(text)) if "V" in text else None
    if found is not None:
        fraction = found["part"] or found["point"] or "0"
        volts = float(f"{found['whole']}.{fraction}")
        return -volts if (found["sign"] or "") in ("-", "N", "MINUS") else volts
    pattern = _BARE if text[0] in "+-" else _SIGNED if text[:2] in ("V+", "V-") else None
    found = None if pattern is None else pattern.fullmatch(text)
    if found is not None and int(found["whole"]) in _USUAL:
        return float(found["sign"] + found["whole"])
    return None


def _from_elements(draft: Draft) -> None:
    """Nets that chains of steady sources hold above ground."""
    driver = {draft.ground: ""}
    fresh = [draft.ground]
    steady = {name: wire for name, wire in draft.voltages.items() if name not in draft.signals}
    on: dict[str, list[str]] = {}
    for name in natural(steady):
        for net in (steady[name].first, steady[name].second):
            on.setdefault(net, []).append(name)
    while fresh:
        net = fresh.pop(0)
        for name in on.get(net, ()):
            far = steady[name].other(net)
            if far in driver:
                continue
            linked = name in draft.links or steady[name].value == 0.0
            driver[far] = driver[net] if linked and driver[net] else name
            fresh.append(far)
            volts = draft.known_volts(far)
            if name not in draft.links and volts:
                draft.rails.append(Rail(net=far, volts=volts, source="element", element=-1))
    draft.rail_elements.update(driver)


def _from_intent(draft: Draft) -> None:
    for said in draft.intent.rails:
        net = draft.net(find_net(draft, said.net, said.origin, "rail"))
        known = draft.known_volts(net)
        if net == draft.ground:
            if said.volts != 0.0:
                draft.notes.add("rails", f"{said.net} is ground; the {said.volts:g} V declared for it are not used")
        elif known is not None:
            _declared_and_driven(draft, said, net, known)
        else:
            named = volts_of_name(net)
            if named is not None and named != said.volts:
                draft.notes.add("rails", f"{net} is {said.volts:g} V as declared, although its name says {named:g} V")
            _hold(draft, net, said.volts)
            _list(draft, net, said.volts, "intent", said)


def _declared_and_driven(draft: Draft, said: RailIntent, net: str, known: float) -> None:
    """A declared rail that an element holds already: the element is kept."""
    element = draft.rail_elements.get(net) or "an element"
    if abs(known - said.volts) > 1e-9 * max(abs(known), abs(said.volts)):
        text = f"{net} is declared {said.volts:g} V, but {element} holds it at {known:g} V; {element} is kept"
        draft.notes.add("rails", text)
    draft.rails = [rail for rail in draft.rails if rail.net != net]
    _list(draft, net, known, "element", said)


def _from_names(draft: Draft) -> None:
    for net in natural(draft.present() & draft.netlist.nets.keys()):
        name = draft.netlist.nets[net].name
        volts = volts_of_name(name)
        known = draft.known_volts(net)
        if known is not None:
            if volts is not None and abs(known - volts) > 1e-9 * abs(volts) and net not in draft.rail_elements:
                draft.notes.add("rails", f"{net} is held at {known:g} V, although its name says {volts:g} V")
        elif volts:
            draft.notes.add("rails", f"{net} taken as {volts:g} V from its name")
            _hold(draft, net, volts)
            _list(draft, net, volts, "net name", None)


def _from_regulators(draft: Draft) -> None:
    present = draft.present()
    for net, volts, part in regulated_nets(draft):
        if net in present and draft.known_volts(net) is None:
            draft.notes.add("rails", f"{net} taken as {volts:g} V, the output of {part}")
            _hold(draft, net, volts)
            _list(draft, net, volts, "element", None)
    sensing = {"ADJ", "FB", "REF", "VFB", "ADJ/GND", "R", "FEEDBACK"}
    if any(sensing & {pin.function.upper().strip("~{}") for pin in part.pins} for part in draft.netlist.parts):
        _from_adjustable(draft)


def _from_adjustable(draft: Draft) -> None:
    from checker.circuit.adjustable import adjustable_nets  # few boards have any

    for net, volts, words, pin in list(adjustable_nets(draft)):
        if net in draft.present() and draft.known_volts(net) is None:
            draft.notes.add("rails", f"{net} taken as {volts:.4g} V, by {words}")
            _hold(draft, net, volts)
            _list(draft, net, volts, "element", None)
            draft.driven_pins.add((words.split(" ", 1)[0], pin))


def _nameless(draft: Draft) -> None:
    """Supplies by name whose volts nothing tells."""
    for net in natural(draft.present() & draft.netlist.nets.keys()):
        last = last_segment(draft.netlist.nets[net].name)
        if draft.known_volts(net) is None and _NAMELESS.fullmatch(last) and not _is_fed(draft, net):
            draft.loose(net, (net,), f"volts of {net}", f'[rails] "{last}" = "…"')
            draft.nameless.add(net)


def _is_fed(draft: Draft, net: str) -> bool:
    """Whether a net of unknown voltage hangs on a known one through a coil or a supply-filter resistor, or on a source
    with a resistance of its own."""
    for table, name in draft.elements_on(net):
        if table == "voltages" and name not in draft.links:
            return True
        wire = draft.table(table)[name]
        small = table == "inductors" or (table == "resistors" and wire.value <= _FILTER_OHM)
        if small and wire.other(net) != draft.ground and draft.known_volts(wire.other(net)) is not None:
            return True
    return False


def _hold(draft: Draft, net: str, volts: float) -> None:
    name = f"rail:{net}"
    draft.tie(name, net, draft.ground, volts)
    draft.rail_elements[net] = name


def _list(
    draft: Draft,
    net: str,
    volts: float,
    source: Literal["intent", "element", "net name"],
    said: RailIntent | None,
) -> None:
    draft.rails.append(
        Rail(
            net=net,
            volts=volts,
            source=source,
            element=-1,
            tolerance=None if said is None else said.tolerance,
            may_be_absent=said is not None and said.may_be_absent,
        )
    )
