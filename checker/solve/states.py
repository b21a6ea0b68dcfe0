"""Has a board more than one rest? Islands of several transistors are started from every on/off pattern of theirs.

The signs of det J over all solutions of an island sum to one (after the sign of the passive network), so a solution of
negative sign proves two more. Where several rests are found, the one that a slow supply ramp reaches is reported.
"""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from checker.circuit.types import Branches, Circuit, Devices
from checker.devices.family import TRANSISTORS
from checker.solve.assemble import Assembler
from checker.solve.newton import BY_SOURCES, follow, iterate
from checker.solve.operating import Island, OperatingPoint, operating_point
from checker.solve.poles import seat

FloatArray = NDArray[np.float64]

MOST_DEVICES = 8
"""Islands of more transistors are not enumerated; their search stays partial."""
SEED_PASSES = 60
NO_REST = "an amplifier's output is balanced between its two limits, which is no rest; a state must say which"
SAME_V = 1e-6
"""Solutions closer than this at every node are one [V]."""


def searched(point: OperatingPoint) -> OperatingPoint:
    """The same point with `states` and `exhaustive` of its islands settled (scenario 0 alone)."""
    members = _members(point)
    several = {k: d for k, d in members.items() if 2 <= len(d) <= MOST_DEVICES}
    if not several:
        return point
    x, good = _seeded(point, several)
    found = {k: _distinct(point, k, x, good) for k in several}
    if all(len(rows) <= 1 for rows in found.values()):
        return _marked(point, found)
    return _marked(_ramped(point, [k for k, rows in found.items() if len(rows) > 1]), found)


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


def _seeded(point: OperatingPoint, several: dict[int, list[tuple[str, int]]]) -> tuple[FloatArray, NDArray[np.bool_]]:
    """Solutions from every pattern: x (seeds, U) and converged (seeds, islands)."""
    seeds = 2 ** max(len(devices) for devices in several.values())
    device_k = {kind: np.repeat(t[:1], seeds, axis=0) for kind, t in point.device_k.items()}
    assembler = Assembler(_copies(point.circuit, seeds), point.plan, device_k)
    start = {kind: at.copy() for kind, at in zip(point.plan.placed, assembler.start(), strict=True)}
    idle_at = {kind: TRANSISTORS[kind]().off(assembler.p[kind]) for kind in start if kind in TRANSISTORS}
    for devices in several.values():
        for bit, (kind, j) in enumerate(devices):
            off = (np.arange(seeds) >> bit) & 1 == 1
            start[kind][off, j] = idle_at[kind][off, j]
    x = np.zeros((seeds, point.plan.n_unknown))
    idle = np.ones((seeds, len(assembler.island_sizes)), dtype=bool)
    idle[:, list(several)] = False
    out, done, _ = iterate(assembler, x, tuple(start.values()), idle, limit=SEED_PASSES)
    return out, done & ~idle


def _distinct(point: OperatingPoint, island: int, x: FloatArray, good: NDArray[np.bool_]) -> list[FloatArray]:
    """Different solutions of an island, each (n,), the point's own among them."""
    rows = _rows(point, island)
    kept = [point.solved.x[0, rows]]
    for solution in x[good[:, island]][:, rows]:
        if all(float(np.max(np.abs(solution - other))) > SAME_V for other in kept):
            kept.append(solution)
    return kept


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


def _marked(point: OperatingPoint, found: dict[int, list[FloatArray]]) -> OperatingPoint:
    """Islands with the number of rests. An odd number of solutions holds one balance less than rests than half."""
    islands: list[Island] = list(point.islands)
    for k, rows in found.items():
        # n solutions whose signs sum to one: (n + 1)/2 are rests, the others balance points between them.
        islands[k] = replace(islands[k], states=(len(rows) + 1) // 2, exhaustive=True)
    return replace(point, islands=tuple(islands))


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


def _tipping(point: OperatingPoint, real: NDArray[np.complex128]) -> set[int]:
    """Islands with an amplifier that sits in a growing real pole: a trigger balanced between its limits."""
    if "opamp" not in point.plan.placed:
        return set()
    inner = set(point.plan.placed["opamp"].nodes[:, -1].tolist())
    held = {int(node) for pole in real for node in seat(point, pole) if int(node) in inner}
    return {k for k, island in enumerate(point.plan.islands) if held & set(island.nodes) and point.islands[k].ok[0]}


def settled(point: OperatingPoint, growing: NDArray[np.complex128]) -> OperatingPoint:
    """The same point with balances that are no rest refused: islands of several rests while a real pole grows."""
    real = growing[np.abs(growing.imag) <= 1e-6 * np.abs(growing)]
    if not real.size:
        return point
    several = {k: island for k, island in enumerate(point.islands) if island.states > 1 and island.ok[0]}
    reasons = {
        k: f"{i.states} rests, and the balance between them is none; a state must say which" for k, i in several.items()
    }
    reasons |= {k: NO_REST for k in _tipping(point, real) if k not in reasons}
    if not reasons:
        return point
    refused = operating_point(point.circuit, near=point, refuse=reasons)
    islands = tuple(
        replace(new, states=old.states, exhaustive=old.exhaustive)
        for new, old in zip(refused.islands, point.islands, strict=True)
    )
    return replace(refused, islands=islands)
