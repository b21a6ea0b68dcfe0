"""Devices that act as one, found by their wiring and confirmed by the directions of the signal."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from itertools import combinations

import numpy as np

from checker.stages.direction import Direction
from checker.stages.scene import Scene
from checker.stages.types import Group
from checker.stages.wiring import resistors_on, through_resistors
from checker.words import GroupLabel


def find_groups(scene: Scene, ways: Mapping[str, Direction]) -> tuple[Group, ...]:
    """All groups of two devices, sorted by id; a pair carries one label, the first that fits."""
    out = []
    for pair in combinations(sorted(name for name in scene.devices if _biased(scene, name)), 2):
        for label, first, second, evidence in _labels(scene, ways, *pair):
            out.append(_group(label, first, second, evidence, ways))
            break
    return tuple(sorted(out, key=lambda g: g.id))


def _biased(scene: Scene, device: str) -> bool:
    """Whether a device has an operating point: without one nothing is said of it, groups included."""
    return bool(np.isfinite(scene.point.bipolar["ic_a"][0, scene.devices.index(device)]))


def _labels(scene: Scene, ways: Mapping[str, Direction], p: str, q: str) -> Iterator[tuple[GroupLabel, str, str, str]]:
    for a, b in ((p, q), (q, p)):
        if _mirror(scene, a, b):
            yield "current-mirror", a, b, f"{a} has base on collector; bases joined, emitters on the same supply"
    for a, b in ((p, q), (q, p)):
        yield from _compound(scene, ways, a, b)
    for joined, outer, place in (("emitter", "collector", 2), ("collector", "emitter", 0)):
        if _push_pull(scene, p, q, ways, place):
            yield "push-pull", p, q, f"opposite polarities, {joined}s joined, {outer}s on opposite supplies"
    if _differential(scene, p, q):
        yield "differential-pair", p, q, "emitters joined to a common tail, bases apart"
    for a, b in ((p, q), (q, p)):
        if _feeds(scene, ways, a, b):
            yield "direct-coupled-pair", a, b, f"collector of {a} is the base of {b}"


def _group(label: GroupLabel, first: str, second: str, evidence: str, ways: Mapping[str, Direction]) -> Group:
    """Entry of the device that signal reaches first, exit of the one it leaves last."""
    head, tail = (first, second) if label != "differential-pair" else _heads(first, second, ways)
    return Group(
        id="+".join(sorted((first, second))),
        configuration=label,
        devices=tuple(sorted((first, second))),
        entry=(head, ways[head].entry) if head in ways else None,
        exit=(tail, ways[tail].exit) if tail in ways else None,
        evidence=(evidence,),
    )


def _heads(a: str, b: str, ways: Mapping[str, Direction]) -> tuple[str, str]:
    """Of a pair driven on one side, the driven device first."""
    if b in ways and ways[b].entry == "base" and (a not in ways or ways[a].entry == "emitter"):
        return b, a
    return a, b


def _polarity(scene: Scene, device: str) -> float:
    return float(scene.circuit.bipolars.polarity[scene.devices.index(device)])


def _mirror(scene: Scene, a: str, b: str) -> bool:
    """`a` diode-connected (directly), `b` beside it."""
    ca, ba, ea = scene.nodes(a)
    cb, bb, eb = scene.nodes(b)
    if ca != ba or ba != bb or cb == bb or _polarity(scene, a) != _polarity(scene, b):
        return False
    return bool(_supplies(scene, ea) & _supplies(scene, eb))


def _supplies(scene: Scene, node: int) -> set[int]:
    """Fixed nets that a net is, or reaches through one resistor."""
    if scene.silent[node]:
        return {node}
    return {far for _, far in resistors_on(scene.circuit, node) if scene.silent[far]}


def _compound(
    scene: Scene, ways: Mapping[str, Direction], a: str, b: str
) -> Iterator[tuple[GroupLabel, str, str, str]]:
    """`a` drives `b` directly."""
    ca, _, ea = scene.nodes(a)
    cb, bb, eb = scene.nodes(b)
    same = _polarity(scene, a) == _polarity(scene, b)
    shared = ca == cb or (scene.silent[ca] and _both_followers(ways, a, b))
    if same and bb in through_resistors(scene, ea) and ea != eb and shared:
        yield "darlington", a, b, f"emitter of {a} drives the base of {b}"
    if not same and bb in through_resistors(scene, ca) and cb in through_resistors(scene, ea) and not scene.silent[ea]:
        yield (
            "complementary-feedback-pair",
            a,
            b,
            f"collector of {a} drives {b}, whose collector returns to its emitter",
        )
    # A quiet device under a signal device is its current source; two quiet ones are a cascoded source.
    held = (_enters(ways, b, "emitter") or scene.silent[bb]) and (a in ways or b not in ways)
    if eb in through_resistors(scene, ca) and not scene.silent[ca] and ca != bb and held:
        yield "cascode", a, b, f"collector of {a} feeds the emitter of {b}, whose base is held"


def _both_followers(ways: Mapping[str, Direction], a: str, b: str) -> bool:
    return a in ways and b in ways and ways[a].exit == "emitter" and ways[b].exit == "emitter"


def _enters(ways: Mapping[str, Direction], device: str, terminal: str) -> bool:
    return device in ways and ways[device].entry == terminal


def _push_pull(scene: Scene, p: str, q: str, ways: Mapping[str, Direction], place: int) -> bool:
    """`place`: of the joined terminals, 0 collectors or 2 emitters; the others stand on different supplies."""
    joined_p, joined_q = scene.nodes(p)[place], scene.nodes(q)[place]
    outer_p, outer_q = (_supplies(scene, scene.nodes(device)[2 - place]) for device in (p, q))
    if _polarity(scene, p) == _polarity(scene, q) or not outer_p or not outer_q or outer_p & outer_q:
        return False
    joined = bool(through_resistors(scene, joined_p) & through_resistors(scene, joined_q))
    return joined and not scene.silent[joined_p] and _enters(ways, p, "base") and _enters(ways, q, "base")


def _differential(scene: Scene, p: str, q: str) -> bool:
    """Same polarity, emitters on one net or joined through equal resistors to one; bases and collectors apart."""
    cp, bp, ep = scene.nodes(p)
    cq, bq, eq = scene.nodes(q)
    if _polarity(scene, p) != _polarity(scene, q) or bp == bq or cp == cq == ep:
        return False
    if scene.silent[ep] or scene.silent[eq]:
        return False
    if bq in through_resistors(scene, cp) or bp in through_resistors(scene, cq):
        return False  # one drives the other: a trigger or a latch
    return (
        bool(through_resistors(scene, ep) & through_resistors(scene, eq)) and ep not in (bq, cq) and eq not in (bp, cp)
    )


def _feeds(scene: Scene, ways: Mapping[str, Direction], a: str, b: str) -> bool:
    ca, _, _ = scene.nodes(a)
    _, bb, _ = scene.nodes(b)
    if scene.silent[ca] or a not in ways or b not in ways or ways[a].exit != "collector" or ways[b].entry != "base":
        return False
    return bb in through_resistors(scene, ca)
