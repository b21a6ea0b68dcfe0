"""The sentences that let a person check a recognition."""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np

from checker.quantity.show import show
from checker.stages.direction import Direction
from checker.stages.role import Part
from checker.stages.scene import Scene
from checker.stages.terminals import COMMON, CONTROL, OUTPUT
from checker.stages.types import Link
from checker.stages.wiring import decouplers
from checker.words import Configuration

HELD: Mapping[Configuration, int] = {
    "common-base": CONTROL,
    "common-emitter": COMMON,
    "common-collector": OUTPUT,
    "common-gate": CONTROL,
    "common-source": COMMON,
    "common-drain": OUTPUT,
}
"""The terminal that a configuration holds at signal ground."""


def stage_evidence(
    scene: Scene, device: str, label: Configuration, way: Direction, part: Part, links: tuple[Link | None, Link | None]
) -> tuple[str, ...]:
    """What speaks for the label of a signal device."""
    middle = len(part.weight) // 2
    path = f"{part.path.source.name} to {part.path.to.name}"
    out = [f"carries the signal from {path}: participation {part.weight[middle]:.2f}"]
    out.append(_way("enters at the", way.entry, way.entry_margin_db, links[0]))
    out.append(_way("leaves at the", way.exit, way.exit_margin_db, links[1]))
    held = HELD.get(label)
    if held is not None:
        out.append(_held(scene, device, held))
    return tuple(out)


def _way(verb: str, terminal: str, margin_db: float, link: Link | None) -> str:
    through = ""
    if link is not None:
        through = {"direct": " directly", "port": " at the port"}.get(link.kind, f" through {link.part}")
    return f"signal {verb} {terminal}{through} ({min(margin_db, 99.0):.0f} dB clear of the other)"


def _held(scene: Scene, device: str, terminal: int) -> str:
    """How well the common terminal is held at signal ground: impedance of its net with the device out."""
    node = scene.nodes(device)[terminal]
    word = scene.words(device)[terminal]
    if scene.silent[node]:
        return f"{word} at signal ground on {scene.circuit.nets[node]}"
    out = scene.response.removed([device])
    middle = len(scene.response.f_hz) // 2
    z = abs(out.impedance(node)[0, middle])
    f = show(float(scene.response.f_hz[middle]), "Hz")
    by = decouplers(scene, node)
    through = f" through {', '.join(by)}" if by else ""
    if not np.isfinite(z):
        return f"{word} net impedance not known"
    return f"{word} sees {show(float(z), 'Ω')} to signal ground{through} at {f}"
