"""Nets and pins that the intent names, found in the netlist or refused with a suggestion."""

from __future__ import annotations

from checker.circuit.draft import Draft
from checker.circuit.order import last_segment, listed
from checker.circuit.types import Circuit, Rail
from checker.intent.hints import unknown
from checker.netlist.types import Part, Pin
from checker.quantity.value import Origin
from checker.trouble import InputTrouble


def find_net(draft: Draft, name: str, origin: Origin, what: str) -> str:
    """Key of the net called `name`, in full or by its last path segment where only one net ends so.

    Raises InputTrouble, with file and line of the intent's entry, for no net or several.
    """
    nets = draft.netlist.nets
    if name in nets:
        return name
    keys = [key for key, net in nets.items() if net.name == name]
    keys = keys or [key for key, net in nets.items() if last_segment(net.name) == name]
    if not keys and draft.netlist.format == "spice":
        keys = [key for key in nets if key.lower() == name.lower()]
    if len({draft.net(key) for key in keys}) == 1:
        return keys[0]
    if keys:
        message = f"{what}: several nets are called {name!r}: {listed(keys)}; give the full name"
    else:
        message = f"{what}: {unknown(name, {last_segment(net.name) for net in nets.values()}, 'net')}"
    raise InputTrouble(message, file=origin.file, line=origin.line)


def find_pin(draft: Draft, ref: str, pin: str, origin: Origin, what: str) -> tuple[Part, Pin]:
    """The pin of a part, by number or by a function that only one pin has.

    Raises InputTrouble, with file and line of the intent's entry, where there is none.
    """
    part = next((part for part in draft.netlist.parts if part.ref == ref), None)
    if part is None:
        message = f"{what}: {unknown(ref, {part.ref for part in draft.netlist.parts}, 'part')}"
        raise InputTrouble(message, file=origin.file, line=origin.line)
    found = [entry for entry in part.pins if entry.number == pin]
    found = found or [entry for entry in part.pins if entry.function.upper() == pin.upper()]
    if not found or len({entry.net for entry in found}) != 1:
        known = {entry.number for entry in part.pins} | {entry.function for entry in part.pins if entry.function}
        message = f"{what}: {unknown(pin, known, f'pin of {ref}')}"
        raise InputTrouble(message, file=origin.file, line=origin.line)
    return part, found[0]


def find_rail(circuit: Circuit, name: str, origin: Origin, what: str) -> Rail:
    """The rail on a net, by full name or last segment. Raises InputTrouble for none or several."""
    found = [rail for rail in circuit.rails if rail.net == name]
    found = found or [rail for rail in circuit.rails if last_segment(rail.net) == name]
    if len(found) != 1:
        message = f"{what}: {unknown(name, {last_segment(rail.net) for rail in circuit.rails}, 'rail')}"
        raise InputTrouble(message, file=origin.file, line=origin.line)
    return found[0]
