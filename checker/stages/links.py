"""The elements that carry the signal into and out of a stage.

From the entry (exit) net the walk goes through series resistors and coils inside the stage until it meets a coupling
capacitor, a winding, another signal device, or the port. Where several elements stand on a net, the signal is said to
use the one whose opening leaves least of it at the output port.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping

import numpy as np

from checker.shape import frozen
from checker.stages.direction import Direction
from checker.stages.scene import Path, Scene
from checker.stages.terminals import NUMBER
from checker.stages.types import Link
from checker.words import Terminal

CARRIES = 0.5
"""An element carries the signal if opening it leaves less than this part of it."""


@frozen
class Step:
    """One way off a net: `part` and, for a device, `terminal`; `far` the net at its other end."""

    kind: str
    part: str
    far: int
    terminal: int = 0


def input_link(scene: Scene, device: str, way: Direction, path: Path, found: Mapping[str, Direction]) -> Link | None:
    """The link that feeds a device's entry; None where no single element does."""
    start = scene.net(device, way.entry)
    exits = {name: scene.net(name, other.exit) for name, other in found.items() if name != device}
    return _walk(scene, path, start, exits, {device}, upstream=True, own=(device, way.entry))


def output_link(scene: Scene, device: str, way: Direction, path: Path, found: Mapping[str, Direction]) -> Link | None:
    """The link through which a device's exit feeds what follows; None where no single element does."""
    start = scene.net(device, way.exit)
    entries = {name: scene.net(name, other.entry) for name, other in found.items() if name != device}
    return _walk(scene, path, start, entries, {device}, upstream=False, own=(device, way.exit), found=found)


def _walk(
    scene: Scene,
    path: Path,
    start: int,
    others: Mapping[str, int],
    used: set[str],
    *,
    upstream: bool,
    own: tuple[str, Terminal],
    found: Mapping[str, Direction] | None = None,
) -> Link | None:
    node = start
    port = path.source if upstream else path.to
    for _ in range(16):
        if node == port.node:
            return Link(kind="port", part=port.part, stage_node=node, far_node=node, other=port.name)
        met = [name for name, net in others.items() if net == node]
        if met and upstream:
            return Link(kind="direct", part=own[0], stage_node=start, far_node=node, other=met[0], terminal=own[1])
        step = _best(scene, path, node, met, used, found)
        if step is None:
            return None
        used.add(step.part)
        if step.kind == "device":
            terminal = scene.words(step.part)[step.terminal]
            return Link(
                kind="direct", part=step.part, stage_node=node, far_node=node, other=step.part, terminal=terminal
            )
        if step.kind == "capacitor":
            return Link(kind="capacitor", part=step.part, stage_node=node, far_node=step.far, other="")
        if step.kind == "winding":
            return Link(kind="winding", part=step.part, stage_node=node, far_node=step.far, other="")
        node = step.far
    return None


def _best(
    scene: Scene, path: Path, node: int, met: list[str], used: set[str], found: Mapping[str, Direction] | None
) -> Step | None:
    steps = list(ways_off(scene, node, used))
    if found is not None:
        steps += [Step(kind="device", part=name, far=node, terminal=NUMBER[found[name].entry]) for name in met]
    left = [_left_without(scene, path, step) for step in steps]
    if not steps or min(left) > CARRIES:
        return None
    return steps[int(np.argmin(left))]


def ways_off(scene: Scene, node: int, used: set[str]) -> Iterator[Step]:
    """Two-terminal elements from a net to nets that carry signal, and coupled windings."""
    c = scene.circuit
    coupled = set(c.couplings.pair.ravel().tolist())
    for kind, table in (("capacitor", c.capacitors), ("resistor", c.resistors), ("inductor", c.inductors)):
        for j in np.flatnonzero((table.nodes == node).any(axis=1)).tolist():
            a, b = table.nodes[j].tolist()
            name = table.names[j]
            if a == b or name in used:
                continue
            far = b if a == node else a
            if kind == "inductor" and j in coupled:
                yield Step(kind="winding", part=name, far=far)
            elif not scene.silent[far]:
                yield Step(kind=kind, part=name, far=far)


def _left_without(scene: Scene, path: Path, step: Step) -> float:
    """How much of the signal is left at the output port with an element opened (mid frequency)."""
    opened = scene.response.opened(step.part, step.terminal)
    h = opened.voltages(path.drive)[0, :, path.to.node]
    middle = len(path.h) // 2
    ratio = abs(h[middle] / path.h[middle])
    return float(ratio) if np.isfinite(ratio) else np.inf
