"""Voltages and currents at the links of a stage or group, in one solution.

An `Outer` is anything with an entry, an exit and links: a stage or a group.
"""

from __future__ import annotations

import numpy as np

from checker.arrays import ComplexArray
from checker.circuit.types import Branches, Circuit, Devices, Port
from checker.measure.bench import Bench
from checker.shape import frozen
from checker.solve.response import Drive, Response, port_drive
from checker.stages.terminals import NUMBER
from checker.stages.types import Group, Link
from checker.words import Terminal


@frozen
class Outer:
    """The outside of a stage or group. `entry`, `exit`: (device, terminal); `devices`: its members."""

    id: str
    devices: tuple[str, ...]
    entry: tuple[str, Terminal]
    exit: tuple[str, Terminal]
    input_link: Link
    output_link: Link
    port_in: str
    port_out: str


def outer_of(bench: Bench, ident: str, *, group: bool = False) -> Outer | str:
    """The outside of a stage or group, or the reason why it has none."""
    item = bench.group(ident) if group else bench.stage(ident)
    if isinstance(item, Group):
        entry, leaving, devices = item.entry, item.exit, item.devices
    else:
        if item.role != "signal":
            return f"not applicable: {ident} carries no signal"
        entry = (item.device, item.entry) if item.entry else None
        leaving = (item.device, item.exit) if item.exit else None
        devices = (item.device,)
    if entry is None or leaving is None:
        return f"not applicable: no signal path through {ident}"
    if item.input_link is None:
        return f"no single element brings the signal to {ident}"
    if item.output_link is None:
        return f"no single element takes the signal from {ident}"
    return Outer(
        id=ident,
        devices=devices,
        entry=entry,
        exit=leaving,
        input_link=item.input_link,
        output_link=item.output_link,
        port_in=item.port_in,
        port_out=item.port_out,
    )


def drive_of(bench: Bench, outer: Outer) -> Drive:
    """The drive of the input port that reaches the stage."""
    return port_drive(bench.port(outer.port_in))


def terminal_net(circuit: Circuit, at: tuple[str, Terminal]) -> int:
    """Net of a device terminal."""
    kind, j = circuit.find_device(at[0])
    return int(circuit.devices[kind].nodes[j, NUMBER[at[1]]])


def terminal_index(terminal: Terminal) -> int:
    """Column of a terminal in a transistor's block."""
    return NUMBER[terminal]


def port_current(bench: Bench, response: Response, port: Port, solution: ComplexArray) -> ComplexArray:
    """Current from an input port into the board at its plane, (S, F) [A]."""
    circuit = bench.circuit
    if port.emf < 0:
        return np.ones(solution.shape[:2], dtype=complex)
    if port.series >= 0:
        name = circuit.resistors.names[port.series]
        ends = circuit.resistors.nodes[port.series].tolist()
        return -response.current(name, ends.index(port.node), solution)
    return net_current(response, port.node, solution)


def net_current(response: Response, node: int, solution: ComplexArray) -> ComplexArray:
    """Sum of currents from a net into everything on it but ideal sources, (S, F) [A]."""
    c = response.circuit
    total = np.zeros(solution.shape[:2], dtype=complex)
    tables: list[Branches | Devices] = [c.resistors, c.capacitors, c.inductors, *c.devices.values()]
    for table in tables:
        for j, terminal in zip(*np.nonzero(table.nodes == node), strict=True):
            total = total + response.current(table.names[int(j)], int(terminal), solution)
    return total


def load_current(bench: Bench, port: Port, solution: ComplexArray) -> ComplexArray:
    """Current into the external load of an output port, (S, F) [A]; nan where it has none."""
    if not port.load:
        return np.full(solution.shape[:2], np.nan, dtype=complex)
    r = bench.circuit.resistors
    y = sum(1.0 / r.value[:, r.names.index(name)] for name in port.load)
    return np.asarray(solution[..., port.node] * np.asarray(y)[:, None])


def current_in(bench: Bench, response: Response, outer: Outer, solution: ComplexArray) -> ComplexArray:
    """Current through the input link into the stage, (S, F) [A]."""
    link = outer.input_link
    if link.kind == "port":
        return port_current(bench, response, bench.port(link.other), solution)
    if link.kind == "direct":
        return response.current(outer.entry[0], terminal_index(outer.entry[1]), solution)
    return -response.current(link.part, _end(response.circuit, link.part, link.stage_node), solution)


def current_out(bench: Bench, response: Response, outer: Outer, solution: ComplexArray) -> ComplexArray:
    """Current through the output link out of the stage, (S, F) [A]; nan where there is no load."""
    link = outer.output_link
    if link.kind == "port":
        return load_current(bench, bench.port(link.other), solution)
    if link.kind == "direct":
        assert link.terminal  # noqa: S101 - a direct link names the receiving terminal
        return response.current(link.part, NUMBER[link.terminal], solution)
    return response.current(link.part, _end(response.circuit, link.part, link.stage_node), solution)


def cut_input(response: Response, outer: Outer) -> Response:
    """The circuit with the input link open."""
    link = outer.input_link
    if link.kind == "port":
        return response
    if link.kind == "direct":
        return response.opened(outer.entry[0], terminal_index(outer.entry[1]))
    return response.opened(link.part)


def cut_output(bench: Bench, response: Response, outer: Outer) -> Response:
    """The circuit with the output link open: what lies beyond it is gone."""
    link = outer.output_link
    if link.kind == "port":
        for name in bench.port(link.other).load:
            response = response.opened(name)
        return response
    if link.kind == "direct":
        assert link.terminal  # noqa: S101 - a direct link names the receiving terminal
        return response.opened(link.part, NUMBER[link.terminal])
    return response.opened(link.part)


def _end(circuit: Circuit, part: str, node: int) -> int:
    """Which end of a two-terminal part stands on a net."""
    for table in (circuit.capacitors, circuit.inductors, circuit.resistors):
        if part in table.names:
            return 0 if int(table.nodes[table.names.index(part), 0]) == node else 1
    raise KeyError(part)
