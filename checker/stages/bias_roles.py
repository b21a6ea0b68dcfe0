"""Labels of devices that carry no signal: what they do for the others, and switches."""

from __future__ import annotations

import numpy as np

from checker.stages.scene import Scene
from checker.stages.wiring import decouplers, resistors_between, resistors_on
from checker.words import Configuration, Region, Role

SWITCHED: tuple[Region, ...] = ("cut-off", "saturated", "ohmic")
NO_DRAIN_V = 0.1
"""Under this a channel is a resistor whatever the signal does [V]."""


def bias_label(scene: Scene, device: str, region: Region | None) -> tuple[Configuration, str]:
    """Configuration of a device that carries no signal, and the sentence that says why."""
    c, b, e = scene.nodes(device)
    output, control, common = scene.words(device)
    if c == b:
        return "diode-connected", f"{control} and {output} on one net"
    if region is None:
        return "unclassified", "no operating point"
    circuit = scene.circuit
    if resistors_between(circuit, c, b) and resistors_between(circuit, b, e) and not scene.silent[c]:
        return "vbe-multiplier", f"a divider from {output} to {common} holds the {control}"
    if region in ("active", "ohmic") and _self_biased(scene, device):
        return "current-source", f"{region}, its {control} at the far end of its own {common} resistor"
    if region == "ohmic" and _without_drain_voltage(scene, device):
        return "variable-resistor", "next to no voltage from drain to source; the gate sets the channel's resistance"
    if region == "active" and scene.silent[c] and not scene.silent[e]:
        return "regulator", f"{output} on a supply, {common} feeds a net from a held {control}"
    if region == "active" and not scene.silent[c]:
        return "current-source", f"active, {output} feeds {circuit.nets[c]} with the current that its {common} sets"
    return "unclassified", f"{region} and outside every signal path"


def _self_biased(scene: Scene, device: str) -> bool:
    """A field-effect transistor that conducts at no gate voltage, its gate on its source or one resistor away: a
    two-terminal current source, whichever end the load is on."""
    _, gate, source = scene.nodes(device)
    if scene.words(device)[1] != "gate" or (scene.silent[gate] and not scene.silent[source]):
        return False
    return gate == source or bool(resistors_between(scene.circuit, gate, source))


def _without_drain_voltage(scene: Scene, device: str) -> bool:
    return bool(abs(scene.point.transistor["v_out_v"][0, scene.devices.index(device)]) < NO_DRAIN_V)


def switch_evidence(scene: Scene, device: str, regions: dict[str, Region]) -> tuple[Role, tuple[str, ...]] | None:
    """A switch goes between cut-off and saturation (or the ohmic region) over the declared states, or rests cut off
    with nothing but a resistor on its base and no signal of its own.
    None where it is no switch. `regions`: by state name."""
    seen = {region for region in regions.values() if region in SWITCHED}
    if "cut-off" in seen and len(seen) > 1:
        words = ", ".join(f"{region} in state {name}" for name, region in sorted(regions.items()) if name)
        return "switch", (words,)
    rest = regions.get("")
    c, b, e = scene.nodes(device)
    _, control, common = scene.words(device)
    if rest not in SWITCHED or not _emitter_fixed(scene, e) or b in (c, e):
        return None
    if decouplers(scene, b) or not resistors_on(scene.circuit, b):
        return None
    return "switch", (f"{rest} at rest, {common} on a supply, {control} driven through a resistor",)


def _emitter_fixed(scene: Scene, node: int) -> bool:
    if scene.silent[node]:
        return True
    small = [
        scene.circuit.resistors.value[0, scene.circuit.resistors.names.index(name)]
        for name, far in resistors_on(scene.circuit, node)
        if scene.silent[far]
    ]
    return bool(small) and float(np.min(small)) < 1.0
