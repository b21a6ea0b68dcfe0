"""Resistors, capacitors, inductors, couplings, sources and what is made of them, put into the draft."""

from __future__ import annotations

import math
import re
from dataclasses import replace
from typing import Final

from checker.cards.types import Ratings
from checker.circuit.draft import Draft, Table
from checker.circuit.entry import bare_fact
from checker.circuit.types import Change, PartFact, PartKind, Scenario
from checker.circuit.values import part_value
from checker.netlist.types import Part
from checker.pattern import lazy
from checker.quantity.parse import parse_engineering
from checker.quantity.value import Value
from checker.trouble import InputTrouble, NotAQuantity

MOST_TRACKS: Final = 6
"""Potentiometers of a board whose ends are looked at; more would be mostly the panel of an instrument."""
MOST_SOURCE: Final = 1e9
"""Volts or amperes beyond which a source's value is a slip."""
END_SHARE: Final = 2e-3
"""Resistance left at the end of a track, of the whole (makers allow some 0.1 to 1 %; common practice, no source)."""
_TRIMMER: Final = lazy(r"TRIM|PRESET|BOURNS_3\d{3}", re.IGNORECASE)
_UNITS: Final[dict[str, tuple[str, Table, PartKind, str]]] = {
    "resistor": ("ohm", "resistors", "resistor", "value"),
    "capacitor": ("F", "capacitors", "capacitor", "value"),
    "inductor": ("H", "inductors", "inductor", "value"),
}


def add_passive(draft: Draft, part: Part, kind: str) -> None:
    """A resistor, capacitor or inductor; series and parallel resistance where the netlist writes them.

    0 ohm becomes an ideal wire (a 0 V entry by the part's name). An unknown resistor blocks; an unknown
    capacitor is open at DC and an unknown inductor a wire, so they only leave signal figures in doubt.
    """
    unit, table, fact_kind, _ = _UNITS[kind]
    ends = two_ends(part)
    value = part_value(draft, part, unit)
    if ends is None:
        _not_two_ended(draft, part, fact_kind)
        return
    draft.facts[part.ref] = _fact(draft, part, fact_kind, ends, value)
    if value is None or (value.si == 0.0 and kind == "capacitor"):
        _without_value(draft, part, kind, ends)
    elif value.si == 0.0:
        draft.tie(part.ref, *ends, 0.0, link=True)
    else:
        si = _multiplied(part, kind, value.si)
        draft.wire(table, part.ref, *_parasitics(draft, part, kind, si, ends), si)


def add_voltage(draft: Draft, part: Part) -> None:
    """An independent voltage source; one with an AC part or a waveform carries signal."""
    ends = two_ends(part)
    source = part.source
    volts = source.dc if source is not None else _plain_number(part, "V")
    if source is not None and volts is None:
        volts = source.rest or 0.0
    if ends is None or volts is None or abs(volts) > MOST_SOURCE:
        draft.loose(part.ref, [pin.net for pin in part.pins], f"volts of {part.ref}", "a DC value")
        draft.facts[part.ref] = bare_fact(draft, part, "source")
        return
    draft.facts[part.ref] = _fact(draft, part, "source", ends, None)
    placed = draft.tie(part.ref, *_parasitics(draft, part, "voltage", 1.0, ends), volts)
    if placed and source is not None and (source.ac is not None or source.waveform):
        draft.signals.add(part.ref)


def add_current(draft: Draft, part: Part) -> None:
    """An independent current source, current from its first pin through itself to its second; `m` in parallel."""
    ends = two_ends(part)
    source = part.source
    amps = source.dc if source is not None else _plain_number(part, "A")
    if source is not None and amps is None:
        amps = source.rest or 0.0
    draft.facts[part.ref] = bare_fact(draft, part, "source")
    if ends is None or amps is None or abs(amps) > MOST_SOURCE:
        draft.loose(part.ref, [pin.net for pin in part.pins], f"amperes of {part.ref}", "a DC value")
        return
    draft.wire("currents", part.ref, *ends, amps * part.params.get("m", 1.0))
    if source is not None and (source.ac is not None or source.waveform):
        draft.signals.add(part.ref)


def _plain_number(part: Part, unit: str) -> float | None:
    """A value that is a number alone, or schematic text such as "9V"."""
    if part.number is not None:
        return part.number
    try:
        return parse_engineering(part.value, unit).si
    except NotAQuantity:
        return None


def add_coupling(draft: Draft, part: Part) -> None:
    """Coupled inductors; more than two are coupled in pairs. Runs after every inductor is placed."""
    prefix = part.ref.rsplit(".", 1)[0] + "." if "." in part.ref else ""
    names = [name if name in draft.inductors else prefix + name for name in part.controls]
    factor = part.number
    absent = [name for name in names if name not in draft.inductors]
    if factor is None or absent or len(names) < 2 or not math.isfinite(factor) or abs(factor) > 1.0:
        datum = f"inductors and factor of {part.ref}"
        nets = [net for name in names if name in draft.inductors for net in _ends_of(draft, name)]
        draft.loose(part.ref, nets, datum, "K with two inductors and a factor from -1 to 1", blocks_dc=False)
        return
    pairs = [(first, second) for place, first in enumerate(names) for second in names[place + 1 :]]
    for first, second in pairs:
        name = part.ref if len(pairs) == 1 else f"{part.ref}.{first}.{second}"
        draft.couplings[name] = (first, second, factor)


def add_potentiometer(draft: Draft, part: Part) -> None:
    """A potentiometer at mid travel as two resistors; one drawn with two pins as its whole resistance."""
    value = part_value(draft, part, "ohm")
    ends, wiper = _track(part)
    draft.facts[part.ref] = replace(bare_fact(draft, part, "resistor"), value=value)
    if value is None or value.si == 0.0:
        draft.loose(part.ref, [pin.net for pin in part.pins], f"value of {part.ref}", "a value in ohm")
    elif len(ends) != 2:
        draft.loose(part.ref, [pin.net for pin in part.pins], f"pins of {part.ref}", "pins 1, 2 (wiper) and 3")
    elif wiper:
        draft.notes.add("parts", "potentiometer taken at mid travel, linear", part.ref)
        draft.wire("resistors", f"{part.ref}.a", ends[0], wiper, value.si / 2)
        draft.wire("resistors", f"{part.ref}.b", wiper, ends[1], value.si / 2)
        if not _TRIMMER.search(f"{part.symbol} {part.value} {part.description} {part.footprint}"):
            draft.tracks[part.ref] = value.si
    else:
        draft.notes.add("parts", "variable resistor taken at its written value", part.ref)
        draft.wire("resistors", part.ref, *ends, value.si)


def add_ends(draft: Draft) -> None:
    """Both ends of every potentiometer, and of every range of values, as corners; a trimmer that is a potentiometer is
    set once and stays where it was set."""
    for ref, ends in list(draft.ranges.items())[:MOST_TRACKS]:
        for word, factor in zip(("lowest", "highest"), ends, strict=True):
            if ref in draft.resistors or ref in draft.capacitors or ref in draft.inductors:
                change = Change(part=ref, property="factor", value=factor)
                draft.states.append(Scenario(name=f"{ref} at its {word}", kind="corner", changes=(change,)))
    if len(draft.tracks) > MOST_TRACKS:
        draft.notes.add("parts", "so many potentiometers: mid travel alone is looked at", *draft.tracks)
        return
    for ref, ohm in draft.tracks.items():
        for name, share in (("0 %", 0.0), ("100 %", 1.0)):
            arms = (f"{ref}.a", share), (f"{ref}.b", 1.0 - share)
            changes = tuple(
                Change(part=arm, property="r_ohm", value=ohm * min(max(part, END_SHARE), 1.0 - END_SHARE))
                for arm, part in arms
                if arm in draft.resistors
            )
            draft.states.append(Scenario(name=f"{ref} at {name}", kind="corner", changes=changes))


def _track(part: Part) -> tuple[tuple[str, ...], str]:
    """(nets of the track's ends, net of the wiper): the pin called W or wiper, else pin 2 of three."""
    wipers = [pin for pin in part.pins if {pin.number.upper(), pin.function.upper()} & {"W", "WIPER"}]
    if not wipers and len(part.pins) == 3:
        wipers = [pin for pin in part.pins if pin.number == "2"]
    ends = tuple(pin.net for pin in part.pins if pin not in wipers)
    return ends, wipers[0].net if len(wipers) == 1 and len(part.pins) == 3 else ""


def add_array(draft: Draft, part: Part) -> None:
    """Separate resistors in one case: pin k belongs with the pin opposite, 2 n + 1 - k."""
    value = part_value(draft, part, "ohm")
    pins = {int(pin.number): pin.net for pin in part.pins if pin.number.isascii() and pin.number.isdigit()}
    draft.facts[part.ref] = bare_fact(draft, part, "resistor")
    count = _even(max(pins, default=0))
    if value is None or value.si == 0.0 or len(pins) != len(part.pins):
        draft.loose(part.ref, [pin.net for pin in part.pins], f"value of {part.ref}", "a value in ohm")
        return
    draft.notes.add("pins", "resistor array: each pin taken with the one opposite", part.ref)
    for number in range(1, count // 2 + 1):
        if number in pins and count + 1 - number in pins:
            first, second = pins[number], pins[count + 1 - number]
            draft.wire("resistors", f"{part.ref}.{number}", first, second, value.si)


def _even(count: int) -> int:
    """Number of pins of the array whose highest connected pin this is."""
    return count + count % 2


def add_battery(draft: Draft, part: Part) -> None:
    """A battery whose value text states volts; pin 1 is its positive pole."""
    draft.facts[part.ref] = bare_fact(draft, part, "source")
    poles = sorted(part.pins, key=lambda pin: pin.number.strip("+") != "1" and not pin.function.startswith("+"))
    volts = _plain_number(part, "V")
    if volts is None or len(poles) != 2:
        supply = 'a value such as "9V", or its net under [rails]'
        draft.loose(part.ref, [pin.net for pin in part.pins], f"volts of {part.ref}", supply)
        return
    draft.tie(part.ref, poles[0].net, poles[1].net, volts)


def add_declared(draft: Draft, part: Part) -> bool:
    """A part whose two-terminal model the intent gives (a relay coil, a motor); False where it gives none.

    Raises InputTrouble where two of its pins cannot be singled out.
    """
    said = draft.said(part.ref)
    if said is None:
        return False
    resistance, inductance, capacitance = said.resistance_ohm, said.inductance_h, said.capacitance_f
    if resistance is None and inductance is None and capacitance is None:
        return False
    ends = _coil_pins(draft, part)
    if ends is None:
        message = f"[[part]] {part.ref!r}: two pins cannot be singled out; a coil's are A1 and A2"
        raise InputTrouble(message, file=said.origin.file, line=said.origin.line)
    draft.facts[part.ref] = _fact(draft, part, "coil", ends, None)
    if capacitance is not None:
        draft.wire("capacitors", f"{part.ref}.c", *ends, capacitance)
    if resistance is not None and inductance is not None:
        middle = f"{part.ref}.n"
        draft.wire("resistors", f"{part.ref}.r", ends[0], middle, resistance)
        draft.wire("inductors", f"{part.ref}.l", middle, ends[1], inductance)
    elif resistance is not None:
        draft.wire("resistors", f"{part.ref}.r", *ends, resistance)
    elif inductance is not None:
        draft.wire("inductors", f"{part.ref}.l", *ends, inductance)
    _contacts(draft, part, ends)
    return True


def _contacts(draft: Draft, part: Part, coil: tuple[str, str]) -> None:
    """Pins of a relay that are not its coil: where they lead is unknown."""
    nets = [pin.net for pin in part.pins if pin.net not in coil]
    if nets:
        draft.loose(part.ref, nets, f"contacts of {part.ref}", "nothing yet: contacts are not modelled")


def two_ends(part: Part) -> tuple[str, str] | None:
    """The two nets of a two-terminal part; pins doubled on one net count once."""
    nets = list(dict.fromkeys(pin.net for pin in part.pins))
    if len(part.pins) == 2:
        return part.pins[0].net, part.pins[1].net
    return (nets[0], nets[1]) if len(nets) == 2 else None


def _coil_pins(draft: Draft, part: Part) -> tuple[str, str] | None:
    """The coil of a relay (A1 and A2, else the two nets with a diode across), else the only two pins."""
    coil: dict[str, str] = {}
    for pin in part.pins:
        for label in (pin.number.upper(), pin.function.upper()):
            if label in ("A1", "A2"):
                coil.setdefault(label, pin.net)
    if len(coil) == 2:
        return coil["A1"], coil["A2"]
    ends = two_ends(part)
    if ends is not None:
        return ends
    own = {draft.net(pin.net) for pin in part.pins}
    across = {device.nets for device in draft.devices["diode"].values() if set(device.nets) <= own}
    if len(across) != 1:
        return None
    ((anode, cathode),) = across
    draft.notes.add("pins", "the coil is taken to be on the two pins that a diode joins", part.ref)
    return cathode, anode


def _not_two_ended(draft: Draft, part: Part, kind: PartKind) -> None:
    """One-ended parts do nothing; others are of a form that is not modelled."""
    draft.facts[part.ref] = bare_fact(draft, part, kind)
    if len(part.pins) > 1:
        draft.loose(part.ref, [pin.net for pin in part.pins], f"which pins of {part.ref} belong together", "two pins")


def _without_value(draft: Draft, part: Part, kind: str, ends: tuple[str, str]) -> None:
    unit = {"resistor": "ohm", "capacitor": "farad", "inductor": "henry"}[kind]
    if kind == "inductor":
        draft.tie(part.ref, *ends, 0.0, link=True)
    supply = f"a value in {unit}; {part.value!r} is none" if part.value else f"a value in {unit}"
    draft.loose(part.ref, ends, f"value of {part.ref}", supply, blocks_dc=kind == "resistor")


def _fact(draft: Draft, part: Part, kind: PartKind, ends: tuple[str, str], value: Value | None) -> PartFact:
    ratings, whence, dielectric = Ratings(), "", ""
    if draft.netlist.format == "kicad":
        from checker.circuit.sizes import dielectric_of, ratings_of

        ratings, whence = ratings_of(part, kind)
        dielectric = dielectric_of(part) if kind == "capacitor" else ""
    return PartFact(
        ref=part.ref,
        kind=kind,
        terminals={"1": draft.net(ends[0]), "2": draft.net(ends[1])},
        origin=part.origin,
        value=value,
        ratings=ratings,
        ratings_source=whence,
        dielectric=dielectric,
        footprint=part.footprint,
    )


def _multiplied(part: Part, kind: str, si: float) -> float:
    """`m` devices in parallel."""
    count = part.params.get("m", 1.0)
    return si * count if kind == "capacitor" else si / count


def _parasitics(draft: Draft, part: Part, kind: str, si: float, ends: tuple[str, str]) -> tuple[str, str]:
    """The nets of the ideal part among its declared parasitics."""
    said = draft.said(part.ref)
    fields = part.fields.keys() & {"ESR", "DCR", "ESL", "SRF"}
    if not (part.params.keys() & {"rser", "lser", "rpar", "cpar"} or fields or (said and said.parasitics)):
        return ends
    from checker.circuit.parasitics import around  # few parts have any

    return around(draft, part, kind, si, ends)


def _ends_of(draft: Draft, name: str) -> tuple[str, str]:
    wire = draft.inductors[name]
    return wire.first, wire.second
