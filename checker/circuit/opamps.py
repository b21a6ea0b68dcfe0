"""Operational amplifiers whose pins are known: solved with their feedback instead of left out.

Pin numbers are those that single, dual and quad amplifiers share, in the outlines with 8, 8 and 14 leads; names or
kinds of pins in the export must agree. Figures of the types are from memory of data sheets, typical.
"""

from __future__ import annotations

import re
from collections.abc import Iterator, Mapping
from typing import Final

from checker.circuit.draft import Draft, DraftDevice
from checker.circuit.families import type_names
from checker.circuit.parameters import OPAMP
from checker.circuit.parts import symbol_name
from checker.constants import DEFAULT_AMBIENT_C, ZERO_CELSIUS_K
from checker.netlist.types import Part, Pin
from checker.pattern import lazy
from checker.shape import frozen


@frozen
class Kind:
    """Types by name: gain-bandwidth product [Hz]; what the output keeps from the upper and lower supply [V]."""

    pattern: str
    gbw_hz: float
    high_v: float
    low_v: float


KINDS: Final = (
    Kind(pattern=r"TL0?[678][1-4]\w*", gbw_hz=3e6, high_v=1.5, low_v=1.5),
    Kind(pattern=r"LF(?:35[1367]|347|41[12]|44[124])\w*", gbw_hz=4e6, high_v=1.5, low_v=1.5),
    Kind(
        pattern=r"(?:LM|SA|NE|KA|UA|RC|AS)?(?:358|324|2904|2902|158|124|321)[A-Z]*", gbw_hz=1e6, high_v=1.5, low_v=0.02
    ),
    Kind(
        pattern=r"(?:UA|LM|MC1|UPC)?7?[47]41[A-Z]*|(?:MC|LM|RC|JRC|NJM)?(?:1)?4558\w*|LM1458\w*",
        gbw_hz=1e6,
        high_v=1.5,
        low_v=1.5,
    ),
    Kind(
        pattern=r"(?:NE|SE|SA|RC|NJM|JRC|LM|TS)?(?:553[234]|4560|4562|4565|2068|5532)\w*",
        gbw_hz=1e7,
        high_v=1.5,
        low_v=1.5,
    ),
    Kind(
        pattern=r"OPA?(?:27|37|07|1[67]\d\d|2?13[24]|2?60[4-6]|16[0-9]\d|227|228|4134|2227)\w*",
        gbw_hz=8e6,
        high_v=1.5,
        low_v=1.5,
    ),
    Kind(
        pattern=r"MC33(?:07[1-9]|17[1-9]|20[1-4]|28[2-4]|27[24])\w*|MC3407[1-9]\w*|LT1(?:00[1-8]|01[2-4]|028|037|05[5-8]|07[78]|11[23]|12[24]\d|36\d|49\d|80\d)\w*|AD(?:71[123]|74[1-8]|82\d\d?|86[0-9]\d|OP\w+)\w*",
        gbw_hz=4e6,
        high_v=1.5,
        low_v=1.5,
    ),
    Kind(
        pattern=r"MCP6\d\d\d?\w*|TLV(?:2[2346]\d\d|9\d{3}|27\d)\w*|(?:LMV|LMC|TS|OPA|TLC)[2-9]\d{1,3}\w*|LM[CV]?6\d\d\d?\w*",
        gbw_hz=1e6,
        high_v=0.05,
        low_v=0.05,
    ),
)
"""The first that fits counts."""
GENERIC: Final = Kind(pattern="", gbw_hz=1e6, high_v=1.5, low_v=1.5)
_OTHER: Final = lazy(r"LM(?:386|38\d|13700|3900|3080|311|339|393)\w*|CA3080\w*|TDA\w+|LM13600\w*", re.IGNORECASE)
"""Amplifiers of other sorts that stand in the same libraries."""

_PLUS, _MINUS, _OUT = "plus", "minus", "out"
_SINGLE: Final = ({"3": _PLUS, "2": _MINUS, "6": _OUT},)
_DUAL: Final = ({"3": _PLUS, "2": _MINUS, "1": _OUT}, {"5": _PLUS, "6": _MINUS, "7": _OUT})
_QUAD: Final = (
    {"3": _PLUS, "2": _MINUS, "1": _OUT},
    {"5": _PLUS, "6": _MINUS, "7": _OUT},
    {"10": _PLUS, "9": _MINUS, "8": _OUT},
    {"12": _PLUS, "13": _MINUS, "14": _OUT},
)
_LAYOUTS: Final[tuple[tuple[tuple[Mapping[str, str], ...], str, str], ...]] = (
    (_QUAD, "4", "11"),
    (_DUAL, "8", "4"),
    (_SINGLE, "7", "4"),
)
"""(units, positive supply, negative supply)."""
_ORDER: Final = (_PLUS, _MINUS, "top", "bottom", _OUT)
"""Pins of a five-pin amplifier in SPICE text (common practice of its macro models)."""
_NAMES: Final = {
    "+": _PLUS, "IN+": _PLUS, "+IN": _PLUS, "NONINV": _PLUS,
    "-": _MINUS, "IN-": _MINUS, "-IN": _MINUS, "INV": _MINUS,
    "OUT": _OUT, "VOUT": _OUT, "O": _OUT,
    "V+": "top", "VCC": "top", "VDD": "top", "VCC+": "top", "VS+": "top", "+V": "top", "+VS": "top",
    "V-": "bottom", "VEE": "bottom", "VSS": "bottom", "VCC-": "bottom", "VS-": "bottom", "-V": "bottom",
    "GND": "bottom",
}  # fmt: skip


@frozen
class Unit:
    """One amplifier of a part: its nets; `suffix` "" or ".A"..."""

    suffix: str
    nets: Mapping[str, str]


def kind_of(part: Part) -> Kind | None:
    """The type of an operational amplifier; None for any other part."""
    names = type_names(part)
    if any(_OTHER.fullmatch(name) for name in names):
        return None
    for kind in KINDS:
        if any(re.fullmatch(kind.pattern, name, re.IGNORECASE) for name in names):
            return kind
    library = part.symbol.split(":", 1)[0].lower() if ":" in part.symbol else ""
    named = re.search(r"op-?amp|operational amplifier", f"{part.description} {symbol_name(part)}", re.IGNORECASE)
    return GENERIC if library == "amplifier_operational" or named else None


def add_opamps(draft: Draft) -> None:
    """Put every amplifier in the draft whose pins and supplies are known, in place of its loose pins."""
    loose = {pin.part for pin in draft.loose_pins}
    found = [
        (part, kind)
        for part in draft.netlist.parts
        if part.ref in loose and not part.do_not_fit and (kind := kind_of(part)) is not None
    ]
    spice = draft.netlist.format == "spice"
    units = {part.ref: units_of(part, spice=spice) for part, _ in found}
    supplies = {(draft.net(u.nets["top"]), draft.net(u.nets["bottom"])) for each in units.values() for u in each}
    for part, kind in found:
        own = units[part.ref]
        if not own and not spice and len(supplies) == 1:
            ((top, bottom),) = supplies
            own = units_of(part, spice=False, feed=(top, bottom))
            if own:
                draft.notes.add("parts", "shows no supply pins; taken as fed like the other amplifiers", part.ref)
        for unit in own:
            _add(draft, part, unit, kind)


def _add(draft: Draft, part: Part, unit: Unit, kind: Kind) -> None:
    nets = {role: draft.net(net) for role, net in unit.nets.items()}
    present = draft.present()
    if nets[_OUT] not in present or draft.known_volts(nets[_OUT]) is not None or nets["top"] == nets["bottom"]:
        return
    device = DraftDevice(
        nets=tuple(nets[role] for role in (_PLUS, _MINUS, _OUT, "top", "bottom")),
        polarity=1.0,
        params={**OPAMP, "gbw": kind.gbw_hz, "high": kind.high_v, "low": kind.low_v},
        tnom_k=DEFAULT_AMBIENT_C + ZERO_CELSIUS_K,
        rth_kpw=float("nan"),
    )
    draft.place("opamp", part.ref + unit.suffix, device)
    draft.driven_pins.update((part.ref, pin.number) for pin in part.pins if draft.net(pin.net) in nets.values())
    text = (
        f"operational amplifier of {kind.gbw_hz / 1e6:g} MHz and gain {OPAMP['gain']:g}, whose output stops "
        f"{kind.high_v:g} V below and {kind.low_v:g} V above its supplies"
    )
    draft.notes.add("parts", text if kind is not GENERIC else f"{text} (type not known)", part.ref)


def check_supplies(draft: Draft) -> None:
    """Name every amplifier that nothing feeds: without its supplies there are no limits to its output."""
    for name, device in draft.devices["opamp"].items():
        ref = name if name in draft.facts else name.rsplit(".", 1)[0]
        for net in device.nets[3:]:
            feeds = [wire for table, wire in draft.elements_on(net) if table != "capacitors"]
            if draft.known_volts(net) is None and not feeds and not _by_device(draft, net):
                draft.loose(ref, (device.nets[2], net), f"the supply of {ref} on {net}", f'[rails] "{net}" = "…"')


def _by_device(draft: Draft, net: str) -> bool:
    """Whether a device other than an amplifier ends on a net."""
    tables = (table for kind, table in draft.devices.items() if kind != "opamp")
    return any(net in device.nets for table in tables for device in table.values())


def units_of(part: Part, *, spice: bool, feed: tuple[str, str] | None = None) -> tuple[Unit, ...]:
    """The amplifiers of a part, each with all five nets; empty where the pins are in doubt.

    `feed`: nets of the supplies for a part that shows no pins for them.
    """
    if spice:
        if len(part.pins) != len(_ORDER):
            return ()
        return (Unit(suffix="", nets=dict(zip(_ORDER, (pin.net for pin in part.pins), strict=True))),)
    pins = {pin.number: pin for pin in part.pins}
    for layout, top, bottom in _LAYOUTS:
        roles = {number: role for unit in layout for number, role in unit.items()} | {top: "top", bottom: "bottom"}
        nets = feed
        if feed is None and pins.keys() >= {top, bottom}:
            nets = pins[top].net, pins[bottom].net
        shown = feed is None or not pins.keys() & {top, bottom}
        if nets is not None and shown and _agree(pins, roles, several=len(layout) > 1):
            return tuple(_by_layout(pins, layout, *nets))
    return _by_names(part)


def _agree(pins: Mapping[str, Pin], roles: Mapping[str, str], *, several: bool) -> bool:
    """Whether the layout explains every pin, and names and kinds that the export gives do not contradict it."""
    extra = pins.keys() - roles.keys()
    if extra and (several or not extra <= {"1", "5", "8"}):
        return False
    told = False
    for number in pins.keys() & roles.keys():
        role, kind = roles[number], pins[number].kind.lower()
        said = _NAMES.get(re.sub(r"^~?\{?|\}?$|_?\d+$", "", pins[number].function.upper()).strip("~_"))
        wanted = {_PLUS: "input", _MINUS: "input", _OUT: "output", "top": "power_in", "bottom": "power_in"}[role]
        if (said is not None and said != role) or (kind in ("input", "output") and kind != wanted):
            return False
        told = told or said == role or kind == wanted
    return told


def _by_layout(pins: Mapping[str, Pin], layout: tuple[Mapping[str, str], ...], top: str, bottom: str) -> Iterator[Unit]:
    for place, unit in enumerate(layout):
        if unit.keys() <= pins.keys():
            nets = {role: pins[number].net for number, role in unit.items()} | {"top": top, "bottom": bottom}
            yield Unit(suffix="" if len(layout) == 1 else f".{chr(ord('A') + place)}", nets=nets)


def _by_names(part: Part) -> tuple[Unit, ...]:
    """A single amplifier in any outline, by the names of its pins alone."""
    nets: dict[str, set[str]] = {}
    for pin in part.pins:
        role = _NAMES.get(re.sub(r"_?\d+$", "", pin.function.upper()).strip("~{}"))
        if role is None and pin.kind.lower() == "output":
            role = _OUT
        if role is not None:
            nets.setdefault(role, set()).add(pin.net)
    if set(nets) != set(_ORDER) or any(len(each) != 1 for each in nets.values()):
        return ()
    return (Unit(suffix="", nets={role: next(iter(each)) for role, each in nets.items()}),)
