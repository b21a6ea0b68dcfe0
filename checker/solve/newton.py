"""Damped Newton over stacked islands, with the helpers a hard start needs and a certificate without any of them.

Each pass evaluates all devices of all scenarios once and solves every island's small system in a few stacked calls.
Islands that have converged stop moving. Ladder: plain; then steps of a conductance across every junction and to
ground; then steps of all sources together; last, as if every node had a capacitor and the board were switched on. No
helper is left in when convergence is judged.
"""

from __future__ import annotations

from collections.abc import Callable

import numpy as np

from checker.arrays import BoolArray, FloatArray, IntArray
from checker.constants import (
    CURRENT_FLOOR_A,
    FIRST_RUNG,
    KCL_REL,
    MAX_ITERATIONS,
    MAX_RUNGS,
    QUICK_ITERATIONS,
    RUNAWAY,
    RUNG_ITERATIONS,
    SMALLEST_RUNG,
    STEP_ABS_V,
    STEP_REL,
)
from checker.shape import frozen
from checker.solve.assemble import Assembler, Junctions
from checker.solve.counters import COUNTERS


@frozen
class Solved:
    """`x` (S, U); `done` (S, islands): converged without helpers; `step` (S, islands) [V]: the last full undamped
    correction; `kcl` (S, islands): worst current balance. `jacobian`: of scenario 0, a stack of islands a group.
    `helper` (S, islands): place in `HELPERS` of what brought the island there."""

    x: FloatArray
    done: BoolArray
    step: FloatArray
    kcl: FloatArray
    jacobian: tuple[FloatArray, ...]
    helper: IntArray


SOLVES_REL = 1e-9
"""A least-squares step counts as a solution if it leaves no more than this part of the right side."""
HELPERS = ("plain", "conductance", "sources", "settling")
"""The ladder of hard starts, in order."""


def solve(assembler: Assembler, x0: FloatArray | None = None, *, quick: bool = False) -> Solved:
    """Solve all islands of all scenarios; `x0` (S, U) starts from known answers.

    `quick`: no helpers, few passes: for trials of which a failure is only one trial less.
    """
    plan = assembler.plan
    shape = (assembler.scenarios, plan.n_unknown)
    count = sum(g[1] for g in plan.groups)
    x = np.zeros(shape) if x0 is None else x0.copy()
    done = np.zeros((shape[0], count), dtype=bool)
    helper = np.zeros(done.shape, dtype=np.int64)
    if count:
        start = assembler.start() if x0 is None else assembler.junctions(assembler.voltages(x))
        x, done, _ = iterate(assembler, x, start, done, limit=QUICK_ITERATIONS if quick else MAX_ITERATIONS)
        for place, climb in enumerate((_by_conductance, _by_sources, _by_settling), start=1):
            if quick or done.all():
                break
            helper[~done] = place
            x, done = climb(assembler, x, done)
    solved = _certify(assembler, x, done, helper)
    restless = solved.done & (solved.kcl > KCL_REL)
    if restless.any():
        # The voltages stand, but a steep device turns their last step into current: one more pass settles it.
        at = assembler.junctions(assembler.voltages(x))
        x, _, _ = iterate(assembler, x, at, ~restless, limit=1)
        solved = _certify(assembler, x, done, helper)
    return solved


def iterate(
    assembler: Assembler,
    x: FloatArray,
    at: Junctions,
    done: BoolArray,
    *,
    gmin: float = 0.0,
    source_scale: float = 1.0,
    limit: int = MAX_ITERATIONS,
    pull: float = 0.0,
    anchor: FloatArray | None = None,
) -> tuple[FloatArray, BoolArray, Junctions]:
    """Newton passes until every island not yet `done` holds still or has run away, or `limit` passes.

    `pull` [S]: a conductance from each node to where it stands in `anchor` (S, U).
    """
    nodes = assembler.plan.unknown[assembler.plan.unknown >= 0]
    fresh = done.copy()
    lost = np.zeros_like(done)
    for _ in range(limit):
        columns, entries = assembler.contributions(x, at, gmin, source_scale)
        f = assembler.residual(x, columns, source_scale, gmin + pull)
        if anchor is not None:
            f[:, nodes] -= pull * anchor[:, nodes]
        dx = newton_step(assembler, f, assembler.jacobian(entries, gmin + pull))
        lost |= per_island(assembler, np.where(np.isfinite(dx), np.abs(dx), np.inf)) > RUNAWAY
        dx[expand(assembler, fresh | lost)] = 0.0
        x = x + dx
        wanted = assembler.junctions(assembler.voltages(x, source_scale))
        held = assembler.limit(wanted, at)
        still = _still(assembler, x, dx) & _unlimited(assembler, wanted, held, at)
        at = held
        fresh |= still & ~lost
        COUNTERS.newton_passes += 1
        if (fresh | lost).all():
            break
    return x, fresh, at


def newton_step(assembler: Assembler, f: FloatArray, flat: FloatArray) -> FloatArray:
    """Correction (S, U) of every island; nan where an island's Jacobian is singular."""
    dx = np.zeros_like(f)
    for (first, count, size), block in zip(assembler.plan.groups, assembler.block_views(flat), strict=True):
        rows = slice(first, first + count * size)
        rhs = -f[:, rows].reshape(-1, count, size, 1)
        COUNTERS.solves += block.shape[0] * count
        dx[:, rows] = _solve_stack(block, rhs).reshape(-1, count * size)
    return dx


def _solve_stack(a: FloatArray, b: FloatArray) -> FloatArray:
    """Stacked solve; a singular member gets its least-squares step where that solves it, else nan; the others are
    unharmed. (A step that leaves a residual would look like standing still.)"""
    try:
        return np.asarray(np.linalg.solve(a, b), dtype=float)
    except np.linalg.LinAlgError:
        out = np.zeros_like(b)
        for where in np.ndindex(a.shape[:-2]):
            try:
                out[where] = np.linalg.solve(a[where], b[where])
            except np.linalg.LinAlgError:
                step = np.linalg.lstsq(a[where], b[where], rcond=None)[0]
                left = np.abs(a[where] @ step - b[where]).max()
                out[where] = step if left <= SOLVES_REL * np.abs(b[where]).max() else np.nan
        return out


def expand(assembler: Assembler, per_island: BoolArray) -> BoolArray:
    """(S, islands) -> (S, U)."""
    return np.repeat(per_island, assembler.island_sizes, axis=1)


def per_island(assembler: Assembler, values: FloatArray) -> FloatArray:
    """Largest value of each island's unknowns: (S, U) -> (S, islands)."""
    out = [
        values[:, first : first + count * size].reshape(-1, count, size).max(axis=2)
        for first, count, size in assembler.plan.groups
    ]
    return np.concatenate(out, axis=1) if out else np.zeros((values.shape[0], 0))


def _still(assembler: Assembler, x: FloatArray, dx: FloatArray) -> BoolArray:
    """Islands whose last step is within the tolerance."""
    excess = np.abs(dx) / (STEP_ABS_V + STEP_REL * np.abs(x))
    return per_island(assembler, np.where(np.isfinite(excess), excess, np.inf)) <= 1.0


def _unlimited(assembler: Assembler, wanted: Junctions, held: Junctions, before: Junctions) -> BoolArray:
    """Islands none of whose junctions was held back, or still moves after the linearisation."""
    moved = [np.zeros((assembler.scenarios, 0))]
    for new, kept, old in zip(wanted, held, before, strict=True):
        far = (new != kept) | (np.abs(new - old) > 1e-7 + 1e-7 * np.abs(new))
        moved.append(far.any(axis=-1).astype(float))
    return np.asarray(assembler.by_island.largest(np.concatenate(moved, axis=1)) == 0.0)


@frozen
class _Helper:
    """A one-parameter family of easier problems: `gmin(t)` [S] and `scale(t)` of all sources, t from 0 to 1."""

    gmin: Callable[[float], float]
    scale: Callable[[float], float]


BY_CONDUCTANCE = _Helper(gmin=lambda t: 10.0 ** (-2.0 - 11.0 * t) if t < 1.0 else 0.0, scale=lambda _t: 1.0)
BY_SOURCES = _Helper(gmin=lambda _t: 0.0, scale=lambda t: t)


def follow(assembler: Assembler, x: FloatArray, done: BoolArray, helper: _Helper) -> tuple[FloatArray, BoolArray]:
    """Follow the helper from t = 0 to 1 with a step that halves on failure and doubles on success.

    Islands that fail at the smallest step are given up; the others go on.
    """
    given_up = done.copy()
    state = np.where(expand(assembler, done), x, 0.0), assembler.start()
    if helper.scale(0.0) == 0.0:
        state = state[0], assembler.junctions(assembler.voltages(state[0], 0.0))
    t, step = 0.0, 0.0
    for _ in range(MAX_RUNGS):
        aim = min(1.0, t + step)
        trial, good, at = iterate(
            assembler,
            *state,
            given_up,
            gmin=helper.gmin(aim),
            source_scale=helper.scale(aim),
            limit=RUNG_ITERATIONS,
        )
        if not good.all() and step > SMALLEST_RUNG:
            step *= 0.5
            continue
        given_up |= ~good
        lost = expand(assembler, ~good)
        state, t, step = (np.where(lost, x, trial), at), aim, 2.0 * step if step else FIRST_RUNG
        if t >= 1.0 or given_up.all():
            break
    reached = done | (~given_up & (t >= 1.0))
    return np.where(expand(assembler, reached), state[0], x), reached


def _by_conductance(assembler: Assembler, x: FloatArray, done: BoolArray) -> tuple[FloatArray, BoolArray]:
    return follow(assembler, x, done, BY_CONDUCTANCE)


def _by_sources(assembler: Assembler, x: FloatArray, done: BoolArray) -> tuple[FloatArray, BoolArray]:
    return follow(assembler, x, done, BY_SOURCES)


def _by_settling(assembler: Assembler, x: FloatArray, done: BoolArray) -> tuple[FloatArray, BoolArray]:
    from checker.solve.settling import settle

    return settle(assembler, x, done)


def _certify(assembler: Assembler, x: FloatArray, done: BoolArray, helper: IntArray) -> Solved:
    """One more full step without any helper from `x`; its size and the current balance there are the proof.

    Currents too small for their balance to be resolved at a node's voltage count as the smallest that could be.
    """
    at = assembler.junctions(assembler.voltages(x))
    columns, entries = assembler.contributions(x, at)
    flat = assembler.jacobian(entries)
    f = assembler.residual(x, columns)
    dx = newton_step(assembler, f, flat)
    node = np.zeros(x.shape[1], dtype=bool)
    node[assembler.plan.unknown[assembler.plan.unknown >= 0]] = True
    floor = np.maximum(CURRENT_FLOOR_A, assembler.rounding(x, entries) / KCL_REL)
    balance = np.where(node, np.abs(f) / np.maximum(assembler.largest(columns), floor), 0.0)
    step = np.where(node, np.abs(dx), 0.0)
    step_isl = per_island(assembler, step)
    with np.errstate(over="ignore"):  # a step beyond all numbers is not within them either
        within = per_island(assembler, np.where(node, step / (STEP_ABS_V + STEP_REL * np.abs(x)), 0.0)) <= 1.0
    kcl = per_island(assembler, balance)
    jacobian = tuple(block[0].copy() for block in assembler.block_views(flat))
    return Solved(x=x, done=done & within, step=step_isl, kcl=kcl, jacobian=jacobian, helper=helper)


def conditions(solved: Solved) -> tuple[FloatArray, FloatArray]:
    """Condition (2-norm, after scaling rows and columns) and sign of the determinant of each island, (islands,), of
    scenario 0, which the report certifies."""
    found, signs = [np.zeros(0)], [np.zeros(0)]
    for a in solved.jacobian:
        scale = np.sqrt(np.maximum(np.abs(a).max(axis=-1, keepdims=True), 1e-300))
        scaled = a / scale / np.sqrt(np.maximum(np.abs(a).max(axis=-2, keepdims=True), 1e-300))
        COUNTERS.factorisations += 2 * a.shape[0]
        finite = np.isfinite(scaled).all(axis=(-1, -2))
        found.append(np.where(finite, np.linalg.cond(np.where(finite[..., None, None], scaled, 0.0)), np.inf))
        with np.errstate(divide="ignore"):
            signs.append(np.where(finite, np.linalg.slogdet(a)[0], 0.0))
    return np.concatenate(found), np.concatenate(signs)


def signs(assembler: Assembler, x: FloatArray) -> FloatArray:
    """Sign of det J at `x` (S, U), (S, islands), with each branch equation's own -1 taken out: a stable rest has +1."""
    _, entries = assembler.contributions(x, assembler.junctions(assembler.voltages(x)))
    with np.errstate(divide="ignore"):  # the sign of a singular matrix is zero
        out = [np.linalg.slogdet(block)[0] for block in assembler.block_views(assembler.jacobian(entries))]
    count = len(assembler.island_sizes)
    branches = np.array([i.size - len(i.nodes) for i in assembler.plan.islands[:count]])
    raw = np.concatenate(out, axis=1) if out else np.zeros((x.shape[0], 0))
    return np.asarray(raw * (1.0 - 2.0 * (branches % 2)))
