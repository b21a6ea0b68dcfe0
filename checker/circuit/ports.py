"""Where signal enters and leaves: declared ports, and those that sources, connectors, loads and names
suggest."""

from __future__ import annotations

from dataclasses import replace
from typing import Final

from checker.circuit.connectors import nominal, role_by_name, role_of_net, signal_net
from checker.circuit.draft import Draft, DraftPort
from checker.circuit.lookup import find_net, find_pin
from checker.circuit.order import last_segment, natural, natural_key
from checker.intent.types import PortIntent
from checker.netlist.types import Part
from checker.words import PortRole

_EQUAL_OHM: Final = 0.2
"""A resistor within this fraction of a connector's nominal impedance is its termination (the next E12 values
are 18 % away)."""


def add_ports(draft: Draft) -> None:
    """Declared ports if there are any; otherwise every port that the netlist suggests, each noted.

    Raises InputTrouble for a declared port whose net or pin does not exist.
    """
    if draft.intent.ports:
        for said in draft.intent.ports:
            draft.ports.append(_declared(draft, said))
    else:
        _from_sources(draft)
        _from_connectors(draft)
        _from_plain_connectors(draft)
        _from_loads(draft)
        _from_names(draft)
    draft.ports.sort(key=lambda port: natural_key(port.name))


# --- declared -----------------------------------------------------------------------------------------------


def _declared(draft: Draft, said: PortIntent) -> DraftPort:
    what = f"port {said.name!r}"
    part: Part | None = None
    if said.part:
        part, pin = find_pin(draft, said.part, said.pin, said.origin, what)
        net = draft.net(pin.net)
    else:
        net = draft.net(find_net(draft, said.net, said.origin, what))
    band = None if said.band is None else (said.band.low_hz, said.band.high_hz)
    port = DraftPort(
        name=said.name,
        net=net,
        role=said.role,
        reference_ohm=said.impedance_ohm,
        level_v=said.level_v,
        band_hz=band,
        coaxial=part in draft.coaxial_parts if part is not None else _is_coaxial(draft, net),
        declared=True,
        part="" if part is None else part.ref,
    )
    return _with_elements(draft, port, attach=said.attach)


def _with_elements(draft: Draft, port: DraftPort, *, attach: bool) -> DraftPort:
    """Give a port its source or load: what stands on the net already, else what the impedance asks for."""
    emf, series = existing_source(draft, port.net)
    if port.role == "input" and emf:
        if attach and port.reference_ohm is not None:
            draft.notes.add("ports", f"port {port.name}: {emf} drives its net already; no source attached")
        return replace(port, emf=emf, series=series)
    if not attach or port.reference_ohm is None or port.net == draft.ground:
        load = existing_load(draft, port.net) if port.role != "input" else ()
        return replace(port, load=load)
    return attached(draft, port, port.reference_ohm)


def attached(draft: Draft, port: DraftPort, ohm: float) -> DraftPort:
    """A port with a source of its own (input), a load of its own (output), or both in one (direction
    open)."""
    name = f"port:{port.name}"
    if port.role == "output":
        draft.wire("resistors", f"{name}.r", port.net, draft.ground, ohm)
        return replace(port, load=(f"{name}.r",))
    inner = f"{name}.emf"
    draft.tie(f"{name}.emf", inner, draft.ground, 0.0)
    draft.signals.add(f"{name}.emf")
    draft.wire("resistors", f"{name}.r", inner, port.net, ohm)
    load = () if port.role == "input" else (f"{name}.r",)
    return replace(port, emf=f"{name}.emf", series=f"{name}.r", load=load)


def existing_source(draft: Draft, net: str) -> tuple[str, str]:
    """(e.m.f., series resistor) that stands on a net: a source to ground, directly or behind one resistor.

    A steady source counts only directly and at 0 V: one behind a resistor is a bias supply.
    """
    on = draft.elements_on(net)
    for table, name in on:
        if table == "voltages" and draft.voltages[name].other(net) == draft.ground and _may_drive(draft, name):
            return name, ""
    for table, name in on:
        if table != "resistors":
            continue
        far = draft.resistors[name].other(net)
        if far == draft.ground or draft.device_pins(far):
            continue
        behind = [(kind, entry) for kind, entry in draft.elements_on(far) if entry != name]
        if len(behind) == 1 and behind[0][0] == "voltages" and behind[0][1] in draft.signals:
            return behind[0][1], name
    return "", ""


def _may_drive(draft: Draft, name: str) -> bool:
    return name in draft.signals or (draft.voltages[name].value == 0.0 and name not in draft.links)


def existing_load(draft: Draft, net: str) -> tuple[str, ...]:
    """Resistors from a net to ground where only capacitors join it to the rest: they carry no bias."""
    on = draft.elements_on(net)
    resistors = [name for table, name in on if table == "resistors"]
    capacitors = [
        name for table, name in on if table == "capacitors" and draft.capacitors[name].other(net) != draft.ground
    ]
    others = [name for table, name in on if table not in ("resistors", "capacitors")]
    if net in draft.foreign or net not in draft.netlist.nets:
        return ()
    grounded = tuple(name for name in resistors if draft.resistors[name].other(net) == draft.ground)
    if not capacitors or others or draft.device_pins(net) or len(grounded) != len(resistors):
        return ()
    return grounded


# --- suggested ----------------------------------------------------------------------------------------------


def _from_sources(draft: Draft) -> None:
    """Sources with an AC part or a waveform are inputs; behind a lone series resistor the plane is its far
    end."""
    for name in natural(draft.signals):
        wire = draft.voltages.get(name) or draft.currents.get(name)
        if wire is None:
            continue
        hot = wire.first if wire.first != draft.ground else wire.second
        if name in draft.currents:
            draft.ports.append(DraftPort(name=name, net=hot, role="input", part=name))
        else:
            series, plane = _lone_resistor(draft, name, hot)
            coaxial = _is_coaxial(draft, plane)
            draft.ports.append(
                DraftPort(name=name, net=plane, role="input", emf=name, series=series, coaxial=coaxial, part=name)
            )
        draft.notes.add("ports", f"{name} carries signal; taken as an input port at {draft.ports[-1].net}")


def _lone_resistor(draft: Draft, source: str, hot: str) -> tuple[str, str]:
    """(series resistor, plane): the only resistor on a source's hot net, where nothing else stands there."""
    behind = [(table, name) for table, name in draft.elements_on(hot) if name != source]
    if len(behind) == 1 and behind[0][0] == "resistors" and not draft.device_pins(hot):
        far = draft.resistors[behind[0][1]].other(hot)
        if far != draft.ground:
            return behind[0][1], far
    return "", hot


def _from_connectors(draft: Draft) -> None:
    """Coaxial connectors on nets that have elements; attached at their nominal impedance."""
    present = draft.present()
    for part in sorted(draft.coaxial_parts, key=lambda entry: natural_key(entry.ref)):
        known = frozenset(pin.net for pin in part.pins if draft.known_volts(draft.net(pin.net)) is not None)
        key = signal_net(part, known - draft.signal_nets())
        net = None if key is None else draft.net(key)
        if net is None or net not in present or net == draft.ground:
            continue
        _connector(draft, part, net)


def _connector(draft: Draft, part: Part, net: str) -> None:
    known = nominal(part)
    driven = next((port for port in draft.ports if port.net == net), None)
    role: PortRole | None = driven.role if driven is not None else role_by_name(net, part.value, part.ref)
    text = f"{part.ref} on {net}: {known.working}"
    draft.notes.add("connectors", text if role else f"{text}; direction still to be found")
    port = DraftPort(name=part.ref, net=net, role=role, reference_ohm=known.ohm, coaxial=True, part=part.ref)
    if driven is not None:
        draft.ports.remove(driven)
        draft.ports.append(replace(port, emf=driven.emf, series=driven.series))
        return
    load = existing_load(draft, net)
    if known.ohm is None:
        draft.ports.append(replace(port, load=() if role == "input" else load))
    elif role == "output" and any(_near(draft.resistors[name].value, known.ohm) for name in load):
        draft.ports.append(replace(port, load=load))
    else:
        draft.notes.add("ports", f"{part.ref} terminated in {known.ohm:g} ohm, its nominal impedance")
        draft.ports.append(attached(draft, port, known.ohm))


def _near(ohm: float, nominal_ohm: float) -> bool:
    return abs(ohm - nominal_ohm) <= _EQUAL_OHM * nominal_ohm


def _from_plain_connectors(draft: Draft) -> None:
    """Pins of other connectors that a capacitor joins to the board, or whose names tell a direction."""
    taken = {port.net for port in draft.ports}
    for part in sorted(draft.plain_connectors, key=lambda entry: natural_key(entry.ref)):
        first = True
        for net in natural({draft.net(pin.net) for pin in part.pins} - taken):
            if not draft.ends.get(net) or draft.known_volts(net) is not None:
                continue
            coupled = _is_coupled(draft, net)
            role = role_of_net(net) or (role_by_name(part.value, part.ref) if coupled else None)
            if role is None and not coupled:
                continue
            load = existing_load(draft, net) if role != "input" else ()
            draft.notes.add("ports", f"{part.ref} on {net} taken as {_article(role)} port")
            name = part.ref if first else f"{part.ref}.{net}"
            draft.ports.append(DraftPort(name=name, net=net, role=role, load=load, part=part.ref))
            taken.add(net)
            first = False


def _article(role: PortRole | None) -> str:
    return f"an {role}" if role else "an input or output"


def _is_coupled(draft: Draft, net: str) -> bool:
    """Whether only capacitors join a net to the rest of the board, besides resistors to ground."""
    on = draft.elements_on(net)
    through = [
        name for table, name in on if table == "capacitors" and draft.capacitors[name].other(net) != draft.ground
    ]
    direct = [
        name for table, name in on if table != "capacitors" and draft.table(table)[name].other(net) != draft.ground
    ]
    return bool(through) and not direct and not draft.device_pins(net) and net not in draft.foreign


def _from_loads(draft: Draft) -> None:
    """Nets joined to the rest by capacitors only, with a resistor to ground: outputs and their loads."""
    taken = {port.net for port in draft.ports}
    found = [net for net in natural(draft.present()) if net not in taken and existing_load(draft, net)]
    named = [net for net in found if role_of_net(net) == "output"]
    for net in named or found:
        if role_of_net(net) == "input":
            continue
        load = existing_load(draft, net)
        draft.notes.add(
            "ports", f"{' and '.join(load)} behind a capacitor taken as the load of an output port at {net}"
        )
        draft.ports.append(DraftPort(name=last_segment(net), net=net, role="output", load=load))


def _from_names(draft: Draft) -> None:
    """Nets called IN or OUT, for a direction that nothing else has shown."""
    roles: tuple[PortRole, ...] = ("input", "output")
    present = draft.present()
    for role in roles:
        if any(port.role == role for port in draft.ports):
            continue
        taken = {port.net for port in draft.ports}
        for net in natural(present & draft.netlist.nets.keys()):
            if net in taken or draft.known_volts(net) is not None or role_of_net(net) != role:
                continue
            draft.notes.add("ports", f"{net} taken as an {role} port from its name")
            load = existing_load(draft, net) if role == "output" else ()
            draft.ports.append(DraftPort(name=last_segment(net), net=net, role=role, load=load))


def _is_coaxial(draft: Draft, net: str) -> bool:
    """Whether a coaxial connector or a lossless line ends on a net."""
    return net in draft.lines or any(
        draft.net(pin.net) == net for part in draft.coaxial_parts for pin in part.pins if net != draft.ground
    )
