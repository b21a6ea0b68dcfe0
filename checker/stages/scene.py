"""What recognition looks at: one nominal response at a few frequencies, its drives and its exits."""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np

from checker.arrays import BoolArray, ComplexArray
from checker.circuit.types import Circuit, Port, Transistors
from checker.shape import frozen
from checker.solve.admittance import passive_admittance
from checker.solve.operating import OperatingPoint
from checker.solve.response import Drive, Response, port_drive
from checker.stages.terminals import NUMBER, WORDS
from checker.words import Terminal

LEAK = 1e-9
"""Of a net's own admittance: nine digits above arithmetic's end, and nine under what anyone would notice."""


@frozen
class Path:
    """From an input port to an output port: `h` complex128 (F,), voltage at the output plane for the unit drive."""

    source: Port
    to: Port
    drive: Drive
    solution: ComplexArray
    h: ComplexArray


@frozen
class Scene:
    """`response` with S = 1; `paths` sorted by port names; `silent` (n_net,): nets at signal ground; `passive_y`
    (1, F, n, 4, 4): bipolars without gm."""

    circuit: Circuit
    point: OperatingPoint
    response: Response
    paths: tuple[Path, ...]
    silent: BoolArray
    passive_y: Mapping[str, ComplexArray]
    transistors: Transistors

    def without_gm(self, device: str, response: Response | None = None) -> Response:
        """The same circuit with one transistor's controlled current taken out, everything else of it kept."""
        kind, j = self.circuit.find_device(device)
        return (response or self.response).replaced(device, self.passive_y[kind][:, :, j])

    def controlled_current(self, device: str, solution: ComplexArray) -> ComplexArray:
        """gm times the control voltage in a solution, complex128 (S, F) [A], counted into the output terminal."""
        kind, j = self.circuit.find_device(device)
        v = solution[..., self.circuit.devices[kind].nodes[j]]
        active = self.response.device_y[kind][:, :, j, 0] - self.passive_y[kind][:, :, j, 0]
        return np.asarray(np.einsum("sfc,sfc->sf", active, v))

    @property
    def devices(self) -> tuple[str, ...]:
        """Names of the transistors."""
        return self.transistors.names

    def nodes(self, device: str) -> tuple[int, int, int]:
        """Output, control and common net of a device (collector, base, emitter; drain, gate, source)."""
        c, b, e = self.transistors.nodes[self.devices.index(device)].tolist()
        return c, b, e

    def polarity(self, device: str) -> float:
        """+1 for NPN and N channel, else -1."""
        return float(self.transistors.polarity[self.devices.index(device)])

    def words(self, device: str) -> tuple[Terminal, Terminal, Terminal]:
        """What output, control and common terminal of a device are called."""
        return WORDS[self.transistors.families[self.devices.index(device)]]

    def net(self, device: str, terminal: Terminal) -> int:
        """The net of a device's terminal."""
        return self.nodes(device)[NUMBER[terminal]]

    def admittance(self, device: str) -> ComplexArray:
        """Admittances between the three terminals, complex128 (F, 3, 3) [S]."""
        j = self.devices.index(device)
        return self.response.device_y[self.transistors.families[j]][0, :, self.transistors.places[j], :3, :3]


def signal_grounds(circuit: Circuit, response: Response) -> BoolArray:
    """Nets that carry no signal by construction: ground and nets fixed by sources that drive nothing."""
    silent = response.known.copy()
    driven = {port.emf for port in circuit.ports if port.emf >= 0}
    for node, parent, source, _ in response.tree:
        silent[node] = silent[parent] and source not in driven
    silent[0] = True
    return silent


def anchored(circuit: Circuit, response: Response) -> Response:
    """Nets that transistors alone hold, with a leak of a billionth of what these present there.

    Without it such a net has no voltage once a device is taken out or lifted, where the others are ideal sources.
    """
    tables = (circuit.resistors, circuit.capacitors, circuit.inductors, circuit.voltages, circuit.diodes)
    others = {node for table in tables for node in table.nodes.ravel().tolist()}
    others |= set(circuit.four_poles.nodes.ravel().tolist())
    transistors = circuit.transistors
    terminals = transistors.nodes.tolist()
    alone = sorted({node for row in terminals for node in row if node not in others and response.row[node] >= 0})
    if not alone:
        return response
    y = np.zeros((*response.z.shape[:2], len(alone)), dtype=complex)
    for kind, j, row in zip(transistors.families, transistors.places, terminals, strict=True):
        for t, node in enumerate(row):
            if node in alone:
                y[..., alone.index(node)] += LEAK * np.abs(np.nan_to_num(response.device_y[kind][:, :, j, t, t]))
    return response.loaded(tuple(alone), y)


def make_scene(circuit: Circuit, point: OperatingPoint, response: Response, ports: tuple[Port, ...]) -> Scene:
    """Solve the drive of every input port once. Scenario 0 alone is looked at."""
    response = anchored(circuit, response)
    paths = []
    for source in (p for p in ports if p.role == "input"):
        drive = port_drive(source)
        solution = response.solution(drive)
        for to in (p for p in ports if p.role == "output" and p.name != source.name):
            h = solution[0, :, to.node]
            if np.isfinite(h).all() and np.any(np.abs(h) > 0.0):
                paths.append(Path(source=source, to=to, drive=drive, solution=solution, h=h))
    return Scene(
        circuit=circuit,
        point=point,
        response=response,
        paths=tuple(paths),
        silent=signal_grounds(circuit, response),
        passive_y=passive_admittance(point, response.f_hz),
        transistors=circuit.transistors,
    )
