"""Recognition of all stages of a board, in the order: role, direction, links, groups, labels."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace

import numpy as np

from checker.circuit.types import Port
from checker.quantity.show import show
from checker.solve.operating import OperatingPoint
from checker.solve.response import Response
from checker.stages.bias_roles import bias_label, switch_evidence
from checker.stages.direction import Direction, direction, exit_weights
from checker.stages.evidence import stage_evidence
from checker.stages.groups import find_groups
from checker.stages.links import input_link, output_link
from checker.stages.region import REGIONS, region_codes
from checker.stages.role import BIAS_BELOW, SIGNAL_FROM, Part, participation
from checker.stages.scene import Scene, make_scene
from checker.stages.types import Group, Link, Recognition, Stage
from checker.words import Configuration, Region, Terminal

CONFIGURATIONS: Mapping[tuple[Terminal, Terminal], Configuration] = {
    ("base", "collector"): "common-emitter",
    ("emitter", "collector"): "common-base",
    ("base", "emitter"): "common-collector",
    ("gate", "drain"): "common-source",
    ("source", "drain"): "common-gate",
    ("gate", "source"): "common-drain",
}


SPLITTING = ("common-emitter", "common-collector", "common-source", "common-drain")
"""A device with its signal entering at the control terminal may leave at both others."""


def recognise(
    point: OperatingPoint,
    response: Response,
    ports: tuple[Port, ...],
    states: Mapping[str, Mapping[str, Region]],
    *,
    oscillating: Mapping[str, float] | None = None,
) -> Recognition:
    """Find stages, links and groups.

    `response`: nominal, at a few frequencies of the band (an odd number, f0 in the middle). `ports`: with roles.
    `states`: device -> state name -> region, for the declared states. `oscillating`: devices that keep an oscillation
    going, with its frequency [Hz] as the linearised circuit has it.
    """
    scene = make_scene(point.circuit, point, response, ports)
    parts = {name: participation(scene, name) for name in scene.devices}
    regions = _regions(point)
    live = {n: p for n, p in parts.items() if p is not None and _carries(p) and regions[n] is not None}
    ways = {name: direction(scene, name, part) for name, part in live.items()}
    groups = find_groups(scene, ways)
    stages = []
    for index, name in enumerate(scene.devices):
        member_of = tuple(g.id for g in groups if name in g.devices)
        if oscillating and name in oscillating:
            stages.append(_oscillator(name, index, oscillating[name], member_of))
        elif name in ways:
            stages.append(_signal_stage(scene, name, index, live[name], ways, member_of))
        else:
            stages.append(_quiet_stage(scene, name, index, parts[name], regions[name], states, member_of))
    known = tuple(_name_others(stage, stages) for stage in stages)
    paths = tuple((path.source.name, path.to.name) for path in scene.paths)
    return Recognition(
        stages=tuple(sorted(known, key=lambda s: s.id)),
        groups=tuple(_linked(group, known) for group in groups),
        paths=paths,
    )


def _carries(part: Part) -> bool:
    return part.typical >= SIGNAL_FROM


def _regions(point: OperatingPoint) -> dict[str, Region | None]:
    codes = region_codes(point)[0]
    names = point.circuit.transistors.names
    return {n: REGIONS[int(c)] if np.isfinite(c) else None for n, c in zip(names, codes, strict=True)}


def _signal_stage(
    scene: Scene, name: str, index: int, part: Part, ways: Mapping[str, Direction], groups: tuple[str, ...]
) -> Stage:
    way = ways[name]
    entering = input_link(scene, name, way, part.path, ways)
    leaving = output_link(scene, name, way, part.path, ways)
    label = CONFIGURATIONS.get((way.entry, way.exit), "unclassified")
    if label in SPLITTING and _splits(scene, name, part):
        label = "phase-splitter"
    reason = "" if label != "unclassified" else f"signal both enters and leaves at the {way.entry}"
    return Stage(
        id=name,
        device=name,
        index=index,
        configuration=label,
        role="signal",
        confidence=_confidence(part, way),
        reason=reason,
        entry=way.entry,
        exit=way.exit,
        input_link=entering,
        output_link=leaving,
        port_in=part.path.source.name,
        port_out=part.path.to.name,
        groups=groups,
        evidence=stage_evidence(scene, name, label, way, part, (entering, leaving)),
    )


def _oscillator(name: str, index: int, f_hz: float, groups: tuple[str, ...]) -> Stage:
    """A device that keeps an oscillation going: small-signal figures of a path mean nothing there."""
    return Stage(
        id=name,
        device=name,
        index=index,
        configuration="oscillator",
        role="signal",
        confidence=0.8,
        groups=groups,
        evidence=(f"an oscillation near {show(f_hz, 'Hz')} grows, and does not without this device",),
    )


def _splits(scene: Scene, name: str, part: Part) -> bool:
    """Opposite exits at two output ports of one input, both of them carried by the device."""
    exits = set()
    for path in scene.paths:
        if path.source.name == part.path.source.name:
            weights = exit_weights(scene, name, path)[:, len(path.h) // 2]
            if weights.max() > 0.0:
                exits.add(int(np.argmax(weights)))
    return len(exits) == 2


def _confidence(part: Part, way: Direction) -> float:
    """Agreement over the frequencies, lowered where a choice was close or the participation middling."""
    margin = min(1.0, min(way.entry_margin_db, way.exit_margin_db) / 10.0)
    weight = min(1.0, part.typical / SIGNAL_FROM - 0.2)
    return round(float(way.agreement * (0.5 + 0.5 * margin) * max(0.3, weight)), 2)


def _quiet_stage(
    scene: Scene,
    name: str,
    index: int,
    part: Part | None,
    region: Region | None,
    states: Mapping[str, Mapping[str, Region]],
    groups: tuple[str, ...],
) -> Stage:
    """A device that carries no signal, or whose bias is not known."""
    base = Stage(
        id=name, device=name, index=index, groups=groups, configuration="unclassified", role="bias", confidence=0.0
    )
    if region is None:
        return replace(base, reason=_no_bias(scene, name))
    seen = {**states.get(name, {}), "": region}
    switch = switch_evidence(scene, name, seen)
    if switch is not None:
        confidence = 0.95 if len(seen) > 1 else 0.6
        return replace(base, configuration="switch", role=switch[0], confidence=confidence, evidence=switch[1])
    label, why = bias_label(scene, name, region)
    weight = part.typical if part is not None else 0.0
    confidence = 0.9 if weight < BIAS_BELOW else 0.5
    evidence = (why,) if part is None else (why, f"participation in the signal paths {weight:.2f}")
    reason = why if label == "unclassified" else ""
    if not scene.paths:
        evidence = (*evidence, "no signal path is known on this board")
    return replace(base, configuration=label, confidence=confidence, reason=reason, evidence=evidence)


def _no_bias(scene: Scene, name: str) -> str:
    """The first terminal without a voltage says why the device has no operating point."""
    for node in scene.nodes(name):
        why = scene.point.reason(scene.circuit.nets[node])
        if why:
            return why
    return "no operating point"


def _name_others(stage: Stage, stages: list[Stage]) -> Stage:
    """Fill in what stands at the far end of a coupling element: the stage that shares it, else the port."""

    def named(link: Link | None, side: str, port: str) -> Link | None:
        if link is None or link.other:
            return link
        for other in stages:
            match = getattr(other, side)
            if other.id != stage.id and match is not None and match.part == link.part:
                return replace(link, other=other.id)
        return replace(link, other=port)

    return replace(
        stage,
        input_link=named(stage.input_link, "output_link", stage.port_in),
        output_link=named(stage.output_link, "input_link", stage.port_out),
    )


def _linked(group: Group, stages: tuple[Stage, ...]) -> Group:
    """Give a group the outer links of its first and last device."""
    by_id = {stage.id: stage for stage in stages}
    head = by_id[group.entry[0]] if group.entry else None
    tail = by_id[group.exit[0]] if group.exit else None
    return replace(
        group,
        input_link=head.input_link if head else None,
        output_link=tail.output_link if tail else None,
        port_in=head.port_in if head else "",
        port_out=tail.port_out if tail else "",
    )
