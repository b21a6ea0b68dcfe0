"""Which resistors set which stage's current: one stack of slightly changed circuits, one Newton step."""

from __future__ import annotations

import numpy as np

from checker.arrays import FloatArray
from checker.circuit.changes import with_changes
from checker.circuit.types import Change, Scenario
from checker.shape import frozen
from checker.solve.operating import OperatingPoint, one_step

NUDGE = 1e-6
"""Small enough that one Newton step tells the slope, large enough that rounding leaves it nine digits."""
CHUNK = 128
"""Scenarios solved at a time: bounds memory on boards of many resistors."""


@frozen
class Influence:
    """`slope` (n_resistors, n_devices): d ln |IC| / d ln R at the nominal; 0 where there is none."""

    resistors: tuple[str, ...]
    devices: tuple[str, ...]
    slope: FloatArray

    def order(self, device: str) -> tuple[str, ...]:
        """Resistors that move a device's current, the strongest first."""
        column = np.abs(self.slope[:, self.devices.index(device)])
        order = np.argsort(-column, kind="stable")
        return tuple(self.resistors[j] for j in order.tolist() if column[j] > 1e-3)


def influence(point: OperatingPoint) -> Influence:
    """From a solution of the nominal scenario alone."""
    circuit = point.circuit
    names = tuple(name for name in circuit.resistors.names if name in circuit.parts)
    devices = circuit.transistors.names
    slope = np.zeros((len(names), len(devices)))
    for first in range(0, len(names) if devices else 0, CHUNK):
        part = names[first : first + CHUNK]
        changes = [
            Scenario(name=n, kind="sample", changes=(Change(part=n, property="factor", value=1.0 + NUDGE),))
            for n in part
        ]
        # The step of the unchanged circuit is what its own solution still lacked; it is no part of the slope.
        stepped = one_step(with_changes(circuit, (Scenario(name="nominal"), *changes)), point)
        moved = np.log(np.maximum(np.abs(stepped), 1e-30))
        slope[first : first + len(part)] = np.nan_to_num((moved[1:] - moved[0]) / np.log1p(NUDGE))
    return Influence(resistors=names, devices=devices, slope=slope)
