"""Where the signal enters a device and where it leaves.

Words are those of the bipolar; drain, gate and source of a field-effect transistor go the same way. Entry: the whole
device is taken out; of the voltages that its surroundings then offer at base, emitter and collector, which one drives
the junction once the device is back? (Taking out gm alone is not enough: the kept junction impedance bridges base and
emitter and misleads at RF and in feedback pairs.) Exit: a current injected at the collector alone, then at the emitter
alone; the larger effect at the output port.
"""

from __future__ import annotations

import numpy as np

from checker.arrays import FloatArray
from checker.shape import frozen
from checker.stages.role import Part
from checker.stages.scene import Path, Scene
from checker.words import Terminal


@frozen
class Direction:
    """`entry`, `exit` terminals; `agreement` 0..1 over the frequencies looked at; `margin_db` of the weaker choice."""

    entry: Terminal
    exit: Terminal
    agreement: float
    entry_margin_db: float
    exit_margin_db: float


def direction(scene: Scene, device: str, part: Part) -> Direction:
    """Entry and exit of a signal device along its strongest path."""
    drive_be, effect_ce = entry_weights(scene, device, part.path), exit_weights(scene, device, part.path)
    entries = np.where(drive_be[1] >= drive_be[2], 1, 2)
    exits = np.where(effect_ce[0] >= effect_ce[1], 0, 2)
    middle, words = len(entries) // 2, scene.words(device)
    agreement = float(np.mean((entries == entries[middle]) & (exits == exits[middle])))
    return Direction(
        entry=words[int(entries[middle])],
        exit=words[int(exits[middle])],
        agreement=agreement,
        entry_margin_db=_margin(drive_be[1][middle], drive_be[2][middle]),
        exit_margin_db=_margin(effect_ce[0][middle], effect_ce[1][middle]),
    )


def entry_weights(scene: Scene, device: str, path: Path) -> FloatArray:
    """|vbe| that each terminal's open-circuit voltage causes alone, float64 (3, F): collector, base, emitter."""
    terminals = list(scene.nodes(device))
    out = scene.response.removed([device])
    v0 = out.voltages(path.drive)[0][:, terminals]
    z = np.stack([np.stack([out.transfer(a, b)[0] for b in terminals], -1) for a in terminals], -2)
    y = scene.admittance(device)
    back = np.linalg.inv(np.eye(3) + z @ y)
    vbe = (back[:, 1, :] - back[:, 2, :]) * v0
    return np.asarray(np.abs(vbe.T), dtype=float)


def exit_weights(scene: Scene, device: str, path: Path) -> FloatArray:
    """|v| at the output port for 1 A injected at the collector, and at the emitter: float64 (2, F)."""
    c, _, e = scene.nodes(device)
    out = scene.response.removed([device])
    at_port = np.stack([out.transfer(path.to.node, c)[0], out.transfer(path.to.node, e)[0]])
    return np.asarray(np.abs(at_port), dtype=float)


def _margin(a: float, b: float) -> float:
    big, small = max(a, b), min(a, b)
    return float(min(20.0 * np.log10(big / small), 200.0)) if small > 0.0 < big else 200.0
