"""Devices that act as one, found by their wiring and confirmed by the directions of the signal."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from itertools import combinations

import numpy as np

from checker.stages.direction import Direction
from checker.stages.scene import Scene
from checker.stages.terminals import COMMON, CONTROL, NUMBER, OUTPUT
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
    return bool(np.isfinite(scene.point.transistor["i_out_a"][0, scene.devices.index(device)]))


def _labels(scene: Scene, ways: Mapping[str, Direction], p: str, q: str) -> Iterator[tuple[GroupLabel, str, str, str]]:
    for a, b in ((p, q), (q, p)):
        if _mirror(scene, a, b):
            yield (
                "current-mirror",
                a,
                b,
                _words(scene, a, "{a} has {ctl} on {out}; {ctl}s joined, {com}s on the same supply", b),
            )
    for a, b in ((p, q), (q, p)):
        yield from _compound(scene, ways, a, b)
    for joined, outer, place in (("{com}", "{out}", COMMON), ("{out}", "{com}", OUTPUT)):
        if _push_pull(scene, p, q, ways, place):
            yield (
                "push-pull",
                p,
                q,
                _words(scene, p, f"opposite polarities, {joined}s joined, {outer}s on opposite supplies"),
            )
    if _differential(scene, p, q):
        yield "differential-pair", p, q, _words(scene, p, "{com}s joined to a common tail, {ctl}s apart")
    for a, b in ((p, q), (q, p)):
        if _feeds(scene, ways, a, b):
            yield "direct-coupled-pair", a, b, _words(scene, a, "{out} of {a} is the {ctl_b} of {b}", b)


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
    if _enters(ways, b, CONTROL) and (a not in ways or _enters(ways, a, COMMON)):
        return b, a
    return a, b


def _words(scene: Scene, a: str, text: str, b: str = "") -> str:
    """A sentence with the terminal words of a device (and, with _b, of a second) filled in."""
    out, ctl, com = scene.words(a)
    out_b, ctl_b, com_b = scene.words(b or a)
    return text.format(a=a, b=b, out=out, ctl=ctl, com=com, out_b=out_b, ctl_b=ctl_b, com_b=com_b)


def _alike(scene: Scene, a: str, b: str) -> bool:
    """Of one polarity, and both bipolar or both not."""
    return scene.polarity(a) == scene.polarity(b) and scene.words(a) == scene.words(b)


def _mirror(scene: Scene, a: str, b: str) -> bool:
    """`a` diode-connected (directly), `b` beside it."""
    ca, ba, ea = scene.nodes(a)
    cb, bb, eb = scene.nodes(b)
    if ca != ba or ba != bb or cb == bb or not _alike(scene, a, b):
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
    same = scene.polarity(a) == scene.polarity(b)
    shared = ca == cb or (scene.silent[ca] and _both_followers(ways, a, b))
    if same and bb in through_resistors(scene, ea) and ea != eb and shared:
        yield "darlington", a, b, _words(scene, a, "{com} of {a} drives the {ctl_b} of {b}", b)
    if not same and bb in through_resistors(scene, ca) and cb in through_resistors(scene, ea) and not scene.silent[ea]:
        yield (
            "complementary-feedback-pair",
            a,
            b,
            _words(scene, a, "{out} of {a} drives {b}, whose {out_b} returns to its {com}", b),
        )
    # A quiet device under a signal device is its current source; two quiet ones are a cascoded source.
    held = (_enters(ways, b, COMMON) or scene.silent[bb]) and (a in ways or b not in ways)
    if eb in through_resistors(scene, ca) and not scene.silent[ca] and ca != bb and held:
        yield "cascode", a, b, _words(scene, a, "{out} of {a} feeds the {com_b} of {b}, whose {ctl_b} is held", b)


def _both_followers(ways: Mapping[str, Direction], a: str, b: str) -> bool:
    return a in ways and b in ways and NUMBER[ways[a].exit] == NUMBER[ways[b].exit] == COMMON


def _enters(ways: Mapping[str, Direction], device: str, terminal: int) -> bool:
    return device in ways and NUMBER[ways[device].entry] == terminal


def _push_pull(scene: Scene, p: str, q: str, ways: Mapping[str, Direction], place: int) -> bool:
    """`place`: of the joined terminals, output or common; the others stand on different supplies."""
    joined_p, joined_q = scene.nodes(p)[place], scene.nodes(q)[place]
    outer_p, outer_q = (_supplies(scene, scene.nodes(device)[COMMON - place]) for device in (p, q))
    if scene.polarity(p) == scene.polarity(q) or not outer_p or not outer_q or outer_p & outer_q:
        return False
    joined = bool(through_resistors(scene, joined_p) & through_resistors(scene, joined_q))
    return joined and not scene.silent[joined_p] and _enters(ways, p, CONTROL) and _enters(ways, q, CONTROL)


def _differential(scene: Scene, p: str, q: str) -> bool:
    """Same polarity, emitters on one net or joined through equal resistors to one; bases and collectors apart."""
    cp, bp, ep = scene.nodes(p)
    cq, bq, eq = scene.nodes(q)
    if not _alike(scene, p, q) or bp == bq or cp == cq == ep:
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
    if scene.silent[ca] or a not in ways or NUMBER[ways[a].exit] != OUTPUT or not _enters(ways, b, CONTROL):
        return False
    return bb in through_resistors(scene, ca)
