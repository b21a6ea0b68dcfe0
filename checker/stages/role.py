"""Does a device carry signal? Participation in the transfer between ports, and its share of the load's current."""

from __future__ import annotations

import numpy as np

from checker.arrays import FloatArray
from checker.shape import frozen
from checker.stages.scene import Path, Scene

SIGNAL_FROM = 0.3
"""A device without which the transfer changes by this much, or which feeds this much of the load, carries signal."""
BIAS_BELOW = 0.2


@frozen
class Part:
    """How much a device takes part: `weight` (F,) the larger of both measures, `path` the path where it is most."""

    weight: FloatArray
    path: Path

    @property
    def typical(self) -> float:
        """The middle one of the weights (an odd number of frequencies)."""
        return float(np.sort(self.weight)[len(self.weight) // 2])


def participation(scene: Scene, device: str) -> Part | None:
    """The strongest path of a device; None where no path exists or none could be computed."""
    best: Part | None = None
    if not np.isfinite(scene.admittance(device)).all():
        return None
    passive = scene.without_gm(device)
    for path in scene.paths:
        without = passive.voltages(path.drive)[0, :, path.to.node]
        change = np.abs(1.0 - without / path.h)
        share = _share(scene, device, path)
        if np.any(share > change):
            share = share * _reaches(scene, device, path)
        weight = np.maximum(change, share)
        if np.isfinite(weight).all() and (best is None or weight.max() > best.weight.max()):
            best = Part(weight=weight, path=path)
    return best


def _share(scene: Scene, device: str, path: Path) -> FloatArray:
    """|gm vbe| over the current that the output port's own impedance and load take from the driving point."""
    current = np.abs(scene.controlled_current(device, path.solution)[0])
    load = _load_admittance(scene, path)
    driven = np.abs(path.h) * load
    # Below the load's own current the share is meaningless (a port without a load): only change counts there.
    return np.where(driven > 0.0, current / np.maximum(driven, 1e-30), 0.0)


def _load_admittance(scene: Scene, path: Path) -> FloatArray:
    total = np.zeros(len(path.h))
    for name in path.to.load:
        j = scene.circuit.resistors.names.index(name)
        total = total + 1.0 / scene.circuit.resistors.value[0, j]
    return total


def _reaches(scene: Scene, device: str, path: Path) -> FloatArray:
    """1 where the device's controlled current explains a part of the output voltage, else 0.

    A current source's own current is no share of the load: what it injects must arrive at the port.
    """
    c, b, e = scene.nodes(device)
    current = np.abs(scene.controlled_current(device, path.solution)[0])
    response = scene.response
    # In a feedback pair the loop takes back what is injected: what drives this device's base must not answer.
    for name in scene.devices:
        if name != device and b in (scene.nodes(name)[0], scene.nodes(name)[2]):
            response = scene.without_gm(name, response)
    z = response.transfer(path.to.node, e)[0] - response.transfer(path.to.node, c)[0]
    return np.asarray(np.abs(current * z) > 0.1 * np.abs(path.h), dtype=float)
