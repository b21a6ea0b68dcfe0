"""What recognition looks at: one nominal response at a few frequencies, its drives and its exits."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from checker.circuit.types import Circuit, Port, Transistors
from checker.shape import frozen
from checker.solve.operating import OperatingPoint
from checker.solve.response import Drive, Response, port_drive
from checker.stages.terminals import NUMBER, WORDS
from checker.words import Terminal

ComplexArray = NDArray[np.complex128]


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
    """`response` with S = 1; `paths` sorted by port names; `silent` (n_net,): nets at signal ground."""

    circuit: Circuit
    point: OperatingPoint
    response: Response
    paths: tuple[Path, ...]
    silent: NDArray[np.bool_]
    transistors: Transistors

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


def signal_grounds(circuit: Circuit, response: Response) -> NDArray[np.bool_]:
    """Nets that carry no signal by construction: ground and nets fixed by sources that drive nothing."""
    silent = response.known.copy()
    driven = {port.emf for port in circuit.ports if port.emf >= 0}
    for node, parent, source, _ in response.tree:
        silent[node] = silent[parent] and source not in driven
    silent[0] = True
    return silent


def make_scene(circuit: Circuit, point: OperatingPoint, response: Response, ports: tuple[Port, ...]) -> Scene:
    """Solve the drive of every input port once. Scenario 0 alone is looked at."""
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
        transistors=circuit.transistors,
    )
