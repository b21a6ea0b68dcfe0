"""What recognition looks at: one nominal response at a few frequencies, its drives and its exits."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from checker.circuit.types import Circuit, Port
from checker.shape import frozen
from checker.solve.admittance import passive_admittance
from checker.solve.operating import OperatingPoint
from checker.solve.response import Drive, Response, port_drive

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
    """`response` with S = 1; `paths` sorted by port names; `silent` (n_net,): nets at signal ground; `passive_y`
    (1, F, n, 4, 4): bipolars without gm."""

    circuit: Circuit
    point: OperatingPoint
    response: Response
    paths: tuple[Path, ...]
    silent: NDArray[np.bool_]
    passive_y: ComplexArray

    def without_gm(self, device: str, response: Response | None = None) -> Response:
        """The same circuit with one bipolar's controlled current taken out, everything else of it kept."""
        return (response or self.response).replaced(device, self.passive_y[:, :, self.devices.index(device)])

    def controlled_current(self, device: str, solution: ComplexArray) -> ComplexArray:
        """gm vbe of a bipolar in a solution, complex128 (S, F) [A], counted into the collector."""
        j = self.devices.index(device)
        v = solution[..., self.circuit.bipolars.nodes[j]]
        active = self.response.bipolar_y[:, :, j, 0] - self.passive_y[:, :, j, 0]
        return np.asarray(np.einsum("sfc,sfc->sf", active, v))

    @property
    def devices(self) -> tuple[str, ...]:
        """Names of the bipolars."""
        return self.circuit.bipolars.names

    def nodes(self, device: str) -> tuple[int, int, int]:
        """Collector, base and emitter nets of a device."""
        c, b, e = self.circuit.bipolars.nodes[self.devices.index(device)][:3].tolist()
        return c, b, e


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
        passive_y=passive_admittance(point, response.f_hz),
    )
