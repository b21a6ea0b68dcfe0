"""Labels of devices that carry no signal: what they do for the others, and switches."""

from __future__ import annotations

import numpy as np

from checker.stages.scene import Scene
from checker.stages.wiring import decouplers, resistors_between, resistors_on
from checker.words import Configuration, Region, Role

SWITCHED: tuple[Region, ...] = ("cut-off", "saturated")


def bias_label(scene: Scene, device: str, region: Region | None) -> tuple[Configuration, str]:
    """Configuration of a device that carries no signal, and the sentence that says why."""
    c, b, e = scene.nodes(device)
    if c == b:
        return "diode-connected", "base and collector on one net"
    if region is None:
        return "unclassified", "no operating point"
    circuit = scene.circuit
    if resistors_between(circuit, c, b) and resistors_between(circuit, b, e) and not scene.silent[c]:
        return "vbe-multiplier", "a divider from collector to emitter holds the base"
    if region == "active" and scene.silent[c] and not scene.silent[e]:
        return "regulator", "collector on a supply, emitter feeds a net from a held base"
    if region == "active" and not scene.silent[c]:
        return "current-source", f"active, collector feeds {circuit.nets[c]} with the current that its emitter sets"
    return "unclassified", f"{region} and outside every signal path"


def switch_evidence(scene: Scene, device: str, regions: dict[str, Region]) -> tuple[Role, tuple[str, ...]] | None:
    """A switch goes between cut-off and saturation over the declared states, or rests cut off with nothing but a
    resistor on its base and no signal of its own. None where it is no switch. `regions`: by state name."""
    seen = {region for region in regions.values() if region in SWITCHED}
    if {"cut-off", "saturated"} <= seen:
        words = ", ".join(f"{region} in state {name}" for name, region in sorted(regions.items()) if name)
        return "switch", (words,)
    rest = regions.get("")
    c, b, e = scene.nodes(device)
    if rest not in SWITCHED or not _emitter_fixed(scene, e) or c == b:
        return None
    if decouplers(scene, b) or not resistors_on(scene.circuit, b):
        return None
    return "switch", (f"{rest} at rest, emitter on a supply, base driven through a resistor",)


def _emitter_fixed(scene: Scene, node: int) -> bool:
    if scene.silent[node]:
        return True
    small = [
        scene.circuit.resistors.value[0, scene.circuit.resistors.names.index(name)]
        for name, far in resistors_on(scene.circuit, node)
        if scene.silent[far]
    ]
    return bool(small) and float(np.min(small)) < 1.0
