"""Structure around a device: what its terminals share, and what ties them to a supply."""

from __future__ import annotations

import numpy as np

from checker.circuit.types import Circuit
from checker.stages.scene import Scene


def resistors_between(circuit: Circuit, a: int, b: int) -> tuple[str, ...]:
    """Names of resistors that stand directly between two nets."""
    r = circuit.resistors
    hit = ((r.nodes == [a, b]) | (r.nodes == [b, a])).all(axis=1)
    return tuple(r.names[j] for j in np.flatnonzero(hit).tolist())


def resistors_on(circuit: Circuit, node: int) -> tuple[tuple[str, int], ...]:
    """(name, far net) of every resistor on a net."""
    r = circuit.resistors
    out = []
    for j in np.flatnonzero((r.nodes == node).any(axis=1)).tolist():
        a, b = r.nodes[j].tolist()
        out.append((r.names[j], b if a == node else a))
    return tuple(out)


def through_resistors(scene: Scene, node: int) -> set[int]:
    """Nets reached from a net through at most one resistor, the net itself included; silent nets are not entered."""
    near = {far for _, far in resistors_on(scene.circuit, node) if not scene.silent[far]}
    return near | {node}


def decouplers(scene: Scene, node: int) -> tuple[str, ...]:
    """Capacitors from a net to a silent net."""
    c = scene.circuit.capacitors
    out = []
    for j in np.flatnonzero((c.nodes == node).any(axis=1)).tolist():
        a, b = c.nodes[j].tolist()
        far = b if a == node else a
        if scene.silent[far]:
            out.append(c.names[j])
    return tuple(out)
