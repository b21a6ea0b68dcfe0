"""Has a board more than one rest? Islands of several transistors are started from every on/off pattern of theirs.

The signs of det J over all solutions of an island sum to one (after the sign of the passive network), so a solution of
negative sign proves two more. That holds for passive networks around transistors: islands with controlled sources are
not searched. Where several rests are found, the one that a slow supply ramp reaches is reported.
"""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from checker.arrays import BoolArray, ComplexArray, FloatArray
from checker.circuit.types import Branches, Circuit, Devices
from checker.devices.family import TRANSISTORS
from checker.shape import frozen
from checker.solve.assemble import Assembler
from checker.solve.newton import BY_SOURCES, follow, iterate, signs
from checker.solve.operating import Island, OperatingPoint, operating_point
from checker.solve.poles import seat

MOST_DEVICES = 8
"""Islands of more transistors are not enumerated; their search stays partial."""
SEED_PASSES = 60
NO_REST = "an amplifier's output is balanced between its two limits, which is no rest; a state must say which"
SAME_V = 1e-6
"""Solutions closer than this at every node are one [V]."""


def searched(point: OperatingPoint) -> OperatingPoint:
    """The same point with `states` and `exhaustive` of its islands settled (scenario 0 alone)."""
    members = _members(point)
    several = {k: d for k, d in members.items() if 2 <= len(d) <= MOST_DEVICES and not point.plan.islands[k].active}
    if not several:
        return point
    x, good, sign = _seeded(point, several)
    found = {k: _counted(point, k, x, good, sign) for k in several}
    many = [k for k, count in found.items() if count.rests > 1]
    return _marked(_ramped(point, many) if many else point, found)


@frozen
class _Count:
    """What is known of an island's solutions: `rests` at least, `whole` where the signs say that none is missing."""

    rests: int
    whole: bool


def _members(point: OperatingPoint) -> dict[int, list[tuple[str, int]]]:
    """Transistors of each solved island, as (family, place)."""
    count = len(point.assembler.island_sizes)
    placed = [(kind, each) for kind, each in point.plan.placed.items() if kind in TRANSISTORS]
    out: dict[int, list[tuple[str, int]]] = {}
    for k, island in enumerate(point.plan.islands[:count]):
        nodes = set(island.nodes)
        devices = [(kind, j) for kind, each in placed for j, row in enumerate(each.nodes.tolist()) if nodes & set(row)]
        if point.islands[k].ok[0]:
            out[k] = devices
    return out


def _seeded(
    point: OperatingPoint, several: dict[int, list[tuple[str, int]]]
) -> tuple[FloatArray, BoolArray, FloatArray]:
    """Solutions from every pattern: x (seeds, U), converged (seeds, islands), and sign of det J there."""
    seeds = 2 ** max(len(devices) for devices in several.values())
    device_k = {kind: np.repeat(t[:1], seeds, axis=0) for kind, t in point.device_k.items()}
    assembler = Assembler(_copies(point.circuit, seeds), point.plan, device_k)
    start = {kind: at.copy() for kind, at in zip(point.plan.placed, assembler.start(), strict=True)}
    ends = {kind: TRANSISTORS[kind]().ends(assembler.p[kind]) for kind in start if kind in TRANSISTORS}
    for devices in several.values():
        for bit, (kind, j) in enumerate(devices):
            off = (np.arange(seeds) >> bit) & 1
            for here, seed in enumerate(ends[kind]):
                start[kind][off == here, j] = seed[off == here, j]
    x = np.zeros((seeds, point.plan.n_unknown))
    idle = np.ones((seeds, len(assembler.island_sizes)), dtype=bool)
    idle[:, list(several)] = False
    out, done, _ = iterate(assembler, x, tuple(start.values()), idle, limit=SEED_PASSES)
    return out, done & ~idle, signs(assembler, out)


def _counted(point: OperatingPoint, island: int, x: FloatArray, good: BoolArray, sign: FloatArray) -> _Count:
    """Different solutions of an island, the point's own among them, by the sign of det J.

    The signs of all solutions sum to +1: p rests found and n balances prove max(p, n + 1) rests.
    """
    rows = _rows(point, island)
    kept = [(point.solved.x[0, rows], float(signs(point.assembler, point.solved.x)[0, island]))]
    for solution, its_sign in zip(x[good[:, island]][:, rows], sign[good[:, island], island].tolist(), strict=True):
        if all(float(np.max(np.abs(solution - other))) > SAME_V for other, _ in kept):
            kept.append((solution, its_sign))
    positive, negative = (sum(s * want > 0.0 for _, s in kept) for want in (1.0, -1.0))
    return _Count(rests=max(positive, negative + 1), whole=positive - negative == 1)


def _rows(point: OperatingPoint, island: int) -> list[int]:
    """Unknowns of an island's node voltages."""
    return [int(point.plan.unknown[node]) for node in point.plan.islands[island].nodes]


def _ramped(point: OperatingPoint, islands: list[int]) -> OperatingPoint:
    """The rest that a slow ramp of all sources from nothing leads to, in these islands; the others stay."""
    assembler = point.assembler
    idle = np.ones((assembler.scenarios, len(assembler.island_sizes)), dtype=bool)
    idle[:, islands] = False
    x, reached = follow(assembler, point.solved.x, idle, BY_SOURCES)
    if not reached[0, islands].all():
        return point
    return operating_point(point.circuit, near=point, x0=x)


def _marked(point: OperatingPoint, found: dict[int, _Count]) -> OperatingPoint:
    """Islands with the number of rests; a balance between rests, which its negative sign gives away, is refused."""
    sign = signs(point.assembler, point.solved.x)
    fallen = {k: count.rests for k, count in found.items() if count.rests > 1 and sign[0, k] < 0.0}
    out = point if not fallen else operating_point(point.circuit, near=point, refuse=_reasons(fallen))
    islands: list[Island] = list(out.islands)
    for k, count in found.items():
        islands[k] = replace(islands[k], states=count.rests, exhaustive=count.whole)
    return replace(out, islands=tuple(islands))


def _reasons(rests: dict[int, int]) -> dict[int, str]:
    """Why the solution of each of these islands is not printed, by its number of rests."""
    return {
        k: f"{count} rests, and the balance between them is none; a state must say which" for k, count in rests.items()
    }


def _copies(circuit: Circuit, count: int) -> Circuit:
    """The nominal scenario `count` times over."""

    def branches(table: Branches) -> Branches:
        return replace(table, value=np.repeat(table.value[:1], count, axis=0))

    def devices(table: Devices) -> Devices:
        return replace(table, params={k: np.repeat(v[:1], count, axis=0) for k, v in table.params.items()})

    return replace(
        circuit,
        resistors=branches(circuit.resistors),
        capacitors=branches(circuit.capacitors),
        inductors=branches(circuit.inductors),
        voltages=branches(circuit.voltages),
        currents=branches(circuit.currents),
        devices={kind: devices(table) for kind, table in circuit.devices.items()},
        temperature_k=np.repeat(circuit.temperature_k[:1], count),
        scenarios=circuit.scenarios[:1] * count,
    )


def _tipping(point: OperatingPoint, real: ComplexArray) -> set[int]:
    """Islands with an amplifier that sits in a growing real pole: a trigger balanced between its limits."""
    if "opamp" not in point.plan.placed:
        return set()
    inner = set(point.plan.placed["opamp"].nodes[:, -1].tolist())
    held = {int(node) for pole in real for node in seat(point, pole) if int(node) in inner}
    return {k for k, island in enumerate(point.plan.islands) if held & set(island.nodes) and point.islands[k].ok[0]}


def settled(point: OperatingPoint, growing: ComplexArray) -> OperatingPoint:
    """The same point with balances that are no rest refused: islands of several rests while a real pole grows."""
    real = growing[np.abs(growing.imag) <= 1e-6 * np.abs(growing)]
    if not real.size:
        return point
    several = {k: island for k, island in enumerate(point.islands) if island.states > 1 and island.ok[0]}
    reasons = _reasons({k: i.states for k, i in several.items()})
    reasons |= {k: NO_REST for k in _tipping(point, real) if k not in reasons}
    if not reasons:
        return point
    refused = operating_point(point.circuit, near=point, refuse=reasons)
    islands = tuple(
        replace(new, states=old.states, exhaustive=old.exhaustive)
        for new, old in zip(refused.islands, point.islands, strict=True)
    )
    return replace(refused, islands=islands)
