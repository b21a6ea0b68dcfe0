"""Pins that the intent's states set: each gets a source behind a resistor, open until a state closes it."""

from __future__ import annotations

from collections.abc import Iterable
from typing import Final

from checker.circuit.draft import Draft
from checker.circuit.lookup import find_net, find_pin
from checker.circuit.order import natural
from checker.circuit.types import Rail
from checker.quantity.value import Origin
from checker.trouble import InputTrouble

OPEN_OHM: Final = 1e12
"""Series resistance of a pin that is not driven: a picoampere at a volt, below any leakage."""
DRIVEN_OHM: Final = 1.0
"""Series resistance of a driven pin: small against every resistor that a logic pin can feed."""


def drive_name(label: str) -> str:
    """Name stem of a pin's source and resistor: "drive:U1.7"."""
    return f"drive:{label}"


def split_label(label: str) -> tuple[str, str]:
    """(part, pin) of "U1.7"; the part may contain points ("X1.J2.3")."""
    ref, _, pin = label.rpartition(".")
    return ref, pin


def add_drives(draft: Draft) -> None:
    """Source and open resistor for every pin that a state names; a pin on a port's net uses the port's
    source.

    Raises InputTrouble for a part, pin or rail that the netlist does not have, or a "high" that no rail
    explains.
    """
    for state in draft.intent.states:
        what = f"state {state.name!r}"
        for label in state.pins:
            ref, pin = split_label(label)
            _, found = find_pin(draft, ref, pin, state.origin, what)
            draft.driven[label] = draft.net(found.net)
            draft.driven_pins.add((ref, found.number))
        for net in state.absent:
            find_net(draft, net, state.origin, what)
            draft.notes.add("states", "an absent rail is taken as 0 V from its own source, not as open")
    attached = {port.net for port in draft.ports if port.emf.startswith("port:")}
    for label in natural(draft.driven):
        _add_drive(draft, label, draft.driven[label], attached)
    for state in draft.intent.states:
        for label, level in state.pins.items():
            if level == "high":
                _explain_high(draft, label, state.origin)


def _add_drive(draft: Draft, label: str, net: str, attached: set[str]) -> None:
    known = draft.known_volts(net)
    if known is not None:
        draft.notes.add("states", f"{label} is held at {known:g} V; what states say of it is not used")
    elif net in attached and split_label(label)[1] in draft.facts[split_label(label)[0]].terminals:
        draft.notes.add("states", f"{label} is driven through the source of the port on its net")
    else:
        name = drive_name(label)
        draft.tie(name, f"{name}.n", draft.ground, 0.0)
        draft.wire("resistors", f"{name}.r", f"{name}.n", net, OPEN_OHM)
        draft.notes.add("states", f"{label} is open except where a state drives it")


def _explain_high(draft: Draft, label: str, origin: Origin) -> None:
    volts = high_volts(draft.rails, draft.facts[split_label(label)[0]].terminals.values())
    if volts is None:
        message = f'{label} is "high", but no positive rail tells how many volts that is; write the volts'
        raise InputTrouble(message, file=origin.file, line=origin.line)
    draft.notes.add("states", f"{label} high is taken as {volts:g} V")


def high_volts(rails: Iterable[Rail], nets: Iterable[str]) -> float | None:
    """Volts of a logic high [V]: the lowest positive rail on the part's own nets, else of the board."""
    positive = [rail for rail in rails if rail.volts > 0.0]
    own = set(nets)
    near = [rail.volts for rail in positive if rail.net in own]
    return min(near or [rail.volts for rail in positive], default=None)
