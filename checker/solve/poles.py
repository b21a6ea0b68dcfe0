"""Natural frequencies of the linearised circuit: is the operating point one that the board would stay at?

Generalised eigenvalues of (G + s C) x = 0 by shift and invert: with A = (G + sigma C)^-1 C an eigenvalue lambda of A is
a pole at s = sigma - 1/lambda. One shift sees poles of its own order of magnitude exactly and very fast or slow ones
not at all, so shifts stand four decades apart and each answers for its neighbourhood.
"""

from __future__ import annotations

import numpy as np

from checker.arrays import ComplexArray, FloatArray, IntArray
from checker.solve.admittance import device_pencils
from checker.solve.operating import OperatingPoint

SHIFTS = (1e0, 1e3, 1e6, 1e9, 1e12)
REACH = 3e4
"""A shift answers for poles within this factor of it."""
MARGIN = 1e-6
"""A pole counts as growing if its real part is more than this part of its magnitude: under it is arithmetic."""


def growing_poles(point: OperatingPoint, without: str = "") -> ComplexArray:
    """Poles of scenario 0 with positive real part [rad/s]; `without`: a device whose pencil is left out.

    Devices without bias are left out: their islands have no figures anyway.
    """
    g, c, names = _live(point, without)
    if not len(names) or not np.any(c):
        return np.zeros(0, dtype=complex)
    found: list[complex] = []
    for shift in SHIFTS:
        try:
            eigen = np.linalg.eigvals(np.linalg.solve(g + shift * c, c))
        except np.linalg.LinAlgError:
            continue
        eigen = eigen[np.abs(eigen) > 1e-12 * np.abs(eigen).max(initial=0.0)]
        poles = shift - 1.0 / eigen[np.abs(eigen) > 0.0]
        near = (np.abs(poles) < shift * REACH) & (np.abs(poles) > shift / REACH)
        for pole in poles[near & (poles.real > MARGIN * np.abs(poles))].tolist():
            if all(abs(pole - other) > 1e-3 * abs(pole) for other in found):
                found.append(pole)
    return np.array(sorted(found, key=lambda s: (s.real, s.imag)), dtype=complex)


def seat(point: OperatingPoint, pole: complex) -> IntArray:
    """Nodes (inner ones included) that hold a pole: those whose share in it is a tenth of the largest at least.

    The share of an unknown is the product of its right and left eigenvector through C, both from one inverse iteration
    beside the pole. Reference: G. C. Verghese et al., IEEE Trans. PAS-101(9):3117-3125 (1982), participation factors
    (from memory).
    """
    g, c, names = _live(point, "")
    beside = g + pole * (1.0 + 1e-7) * c
    start = np.ones(len(names), dtype=complex)
    try:
        right = np.linalg.solve(beside, c @ np.linalg.solve(beside, start))
        left = np.linalg.solve(beside.T, c.T @ np.linalg.solve(beside.T, start))
    except np.linalg.LinAlgError:
        return np.zeros(0, dtype=np.int64)
    share = np.abs(left * (c @ right)) + np.abs(right * (c.T @ left))
    held = (share >= 0.1 * share.max(initial=0.0)) & (names < point.plan.n_nodes)
    return np.asarray(names[held], dtype=np.int64)


def _live(point: OperatingPoint, without: str) -> tuple[FloatArray, FloatArray, IntArray]:
    """The pencil without rows that are zero, and which unknowns are left."""
    g, c, names = _pencil(point, without)
    live = np.flatnonzero(np.abs(g).sum(axis=1) + np.abs(c).sum(axis=1) > 0.0)
    return g[np.ix_(live, live)], c[np.ix_(live, live)], names[live]


def _pencil(point: OperatingPoint, without: str) -> tuple[FloatArray, FloatArray, IntArray]:
    """G and C (u, u) of scenario 0: free nodes, inner nodes, floating sources and inductors; and their numbers."""
    c, plan = point.circuit, point.plan
    in_tree = {step.source for step in plan.known}
    floating = [j for j in range(len(c.voltages.names)) if j not in in_tree]
    n = plan.n_nodes
    first = n + len(floating) + len(c.inductors.names)
    size = first + len(c.four_poles.names)
    g, cap = np.zeros((size, size)), np.zeros((size, size))
    for matrix, table, value in (
        (g, c.resistors.nodes, 1.0 / c.resistors.value[0]),
        (cap, c.capacitors.nodes, c.capacitors.value[0]),
    ):
        for (a, b), y in zip(table.tolist(), value.tolist(), strict=True):
            matrix[a, a] += y
            matrix[b, b] += y
            matrix[a, b] -= y
            matrix[b, a] -= y
    for kind, (dg, dc) in device_pencils(point).items():
        placed = plan.placed[kind]
        for j, nodes in enumerate(placed.nodes):
            if placed.table.names[j] != without and np.isfinite(dg[0, j]).all():
                np.add.at(g, np.ix_(nodes, nodes), dg[0, j])
                np.add.at(cap, np.ix_(nodes, nodes), dc[0, j])
    _branches(point, floating, g, cap, n)
    if c.four_poles.names:
        from checker.solve.four_poles import add_to_pencil

        add_to_pencil(c, {j: n + k for k, j in enumerate(floating)}, first, g, cap)
    free = np.flatnonzero(~np.concatenate([plan.is_known, np.zeros(size - n, dtype=bool)]))
    return g[np.ix_(free, free)], cap[np.ix_(free, free)], free


def _branches(point: OperatingPoint, floating: list[int], g: FloatArray, cap: FloatArray, n: int) -> None:
    c = point.circuit
    first = n + len(floating)
    ends = [c.voltages.nodes[j].tolist() for j in floating] + c.inductors.nodes.tolist()
    for row, (a, b) in enumerate(ends, start=n):
        g[a, row] += 1.0
        g[b, row] -= 1.0
        g[row, a] += 1.0
        g[row, b] -= 1.0
    for j, henry in enumerate(c.inductors.value[0].tolist()):
        cap[first + j, first + j] -= henry
    for j, (p, q) in enumerate(c.couplings.pair.tolist()):
        mutual = c.couplings.k[0, j] * np.sqrt(c.inductors.value[0, p] * c.inductors.value[0, q])
        cap[first + p, first + q] -= mutual
        cap[first + q, first + p] -= mutual
