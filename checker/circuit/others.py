"""Parts that are no element: jumpers, fuses, connectors, test points, circuits without a model."""

from __future__ import annotations

import contextlib
import re
from typing import Final

from checker.circuit.draft import Draft, LoosePin
from checker.circuit.elements import two_ends
from checker.circuit.entry import bare_fact
from checker.circuit.types import Unknown
from checker.netlist.types import Part
from checker.quantity.parse import parse_engineering
from checker.trouble import NotAQuantity

_SAFE: Final = frozenset({"input", "no_connect", "notconnected", "unconnected", "free"})
"""Pin kinds that draw no current worth counting."""
_NO_INPUTS: Final = frozenset(
    ("K", "RL", "RLY", "SW", "S", "SP", "LS", "L", "T", "TR", "M", "BZ", "MK", "R", "RN", "RV", "RT", "X")
)
"""Letters of parts that conduct, whatever pin kind a careless symbol gives them."""


_COILS: Final = frozenset({"K", "RL", "RLY", "RY"})


def add_closed(draft: Draft, part: Part) -> None:
    """A closed jumper, a fuse or a bead: an ideal wire, noted."""
    draft.facts[part.ref] = bare_fact(draft, part, "unmodelled")
    ends = two_ends(part)
    if ends is None:
        add_unmodelled(draft, part)
        return
    draft.notes.add("parts", "closed jumper, fuse or bead taken as a wire", part.ref)
    draft.tie(part.ref, *ends, 0.0, link=True)


def add_open(draft: Draft, part: Part) -> None:
    """An open jumper, a push button at rest or a crystal: no DC path, noted."""
    draft.facts[part.ref] = bare_fact(draft, part, "unmodelled")
    if re.search(r"XTAL|CRYSTAL", f"{part.symbol} {part.value}", re.IGNORECASE) or part.letter.upper() in (
        "Y",
        "QZ",
    ):
        if _crystal(draft, part):
            return
        nets = [pin.net for pin in part.pins]
        wanted = "the fields Lm and Cm (and Rm, C0) of its series branch; open until then"
        draft.loose(part.ref, nets, f"a model of the crystal {part.ref}", wanted, blocks_dc=False)
        return
    draft.notes.add("parts", "open jumper or push button taken as open", part.ref)


def _crystal(draft: Draft, part: Part) -> bool:
    """The series branch Rm, Lm, Cm and the parallel capacitance C0 of a crystal, from its fields; False without."""
    said = {}
    for key, unit in (("Lm", "H"), ("Cm", "F"), ("Rm", "ohm"), ("C0", "F")):
        with contextlib.suppress(NotAQuantity):
            said[key] = parse_engineering(part.fields.get(key, ""), unit).si
    ends = two_ends(part)
    if ends is None or not (said.get("Lm") and said.get("Cm")):
        return False
    first, second, third = ends[0], f"{part.ref}.m", f"{part.ref}.n"
    draft.wire("capacitors", f"{part.ref}.cm", first, second, said["Cm"])
    draft.wire("inductors", f"{part.ref}.lm", second, third if said.get("Rm") else ends[1], said["Lm"])
    if said.get("Rm"):
        draft.wire("resistors", f"{part.ref}.rm", third, ends[1], said["Rm"])
    if said.get("C0"):
        draft.wire("capacitors", f"{part.ref}.c0", *ends, said["C0"])
    return True


def add_connector(draft: Draft, part: Part) -> None:
    """A connector without a defined impedance: its pins are open, noted where they reach elements."""
    draft.facts[part.ref] = bare_fact(draft, part, "connector")
    draft.plain_connectors.append(part)
    _pins(draft, part, connector=True)


def add_unmodelled(draft: Draft, part: Part) -> None:
    """A part without a model; which of its pins matter is decided once the board is complete."""
    draft.facts[part.ref] = bare_fact(draft, part, "unmodelled")
    _pins(draft, part, connector=False)


def _pins(draft: Draft, part: Part, *, connector: bool) -> None:
    name = part.value or part.model
    shown = f"{part.ref} ({name})" if name else part.ref
    whole = part.letter.upper() in _COILS or len({pin.net for pin in part.pins}) == 2
    for pin in part.pins:
        if not connector and not _is_safe(pin.kind):
            draft.foreign.add(draft.net(pin.net))
        level = (
            f'its level in a [[state]], e.g. pins = {{ "{part.ref}.{pin.number}" = "2.5 V" }}, or its net under [rails]'
        )
        kind = "passive" if part.letter.upper() in _NO_INPUTS else pin.kind
        draft.loose_pins.append(
            LoosePin(
                part=part.ref,
                pin=pin.number,
                net=draft.net(pin.net),
                kind="connector" if connector else kind,
                datum=f"what {shown} does at pin {pin.number}",
                supply=f'[[part]] ref = "{part.ref}" with resistance, inductance or capacitance' if whole else level,
            )
        )


def _is_safe(kind: str) -> bool:
    return bool(_SAFE & set(kind.lower().split("+")))


def settle(draft: Draft) -> None:
    """Decide which loose parts and pins matter, now that every element is known; fills `draft.unknowns`."""
    tables = (draft.resistors, draft.capacitors, draft.inductors, draft.voltages, draft.currents)
    ends = [{net for wire in table.values() for net in (wire.first, wire.second)} for table in tables]
    devices = {net for table in draft.devices.values() for device in table.values() for net in device.nets}
    devices |= {net for each in draft.four_poles.values() for net in each.nets}
    conducting = set().union(ends[0], *ends[2:], devices)
    present = conducting | ends[1]
    for loose in draft.loose_parts:
        nets = tuple(net for net in loose.nets if net in present and draft.known_volts(net) is None)
        conducts = any(net in conducting for net in nets)
        draft.unknowns.append(
            Unknown(
                ref=loose.ref,
                pin="",
                nets=nets,
                datum=loose.datum,
                supply=loose.supply,
                blocks_dc=loose.blocks_dc and conducts,
            )
        )
    for pin in draft.loose_pins:
        if pin.net in present and pin.net not in draft.nameless and draft.known_volts(pin.net) is None:
            _settle_pin(draft, pin, pin.net in conducting)


def _settle_pin(draft: Draft, pin: LoosePin, conducts: bool) -> None:
    """One pin on a net of unknown voltage that has elements."""
    if (pin.part, pin.pin) in draft.driven_pins:
        return
    if pin.kind == "connector":
        draft.notes.add("connectors", "pins of connectors taken as open", pin.part)
    elif _is_safe(pin.kind):
        draft.notes.add("parts", "inputs taken as drawing no current", pin.part)
    else:
        draft.unknowns.append(
            Unknown(
                ref=pin.part,
                pin=pin.pin,
                nets=(pin.net,),
                datum=pin.datum,
                supply=pin.supply,
                blocks_dc=conducts,
            )
        )
