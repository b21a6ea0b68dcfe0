"""Low-rank changes of an inverse, and what is done where such a change would lose its digits.

Z' = Z - Z_D (1 + dY Z_DD)^-1 dY Z_D. Opening a link that holds two nets together (a coupling capacitor far above its
corner) makes 1 + dY Z_DD nearly singular: the answer is then a difference of two nearly equal numbers. The condition
of that small matrix tells; such frequencies are inverted afresh, part by unconnected part, so that a net that the
change leaves floating reads nan and harms no other.

Source of the update: Sherman-Morrison-Woodbury identity; Golub and Van Loan, *Matrix Computations*, section 2.1
(from memory).
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from checker.solve.counters import COUNTERS
from checker.solve.plan import Sets

ComplexArray = NDArray[np.complex128]
IntArray = NDArray[np.int64]

LARGEST_LOSS = 1e6
"""Growth through the small matrix's inverse beyond which an update is not trusted: at 1e6 it leaves ten digits."""
SINGULAR = 1e15
"""Condition (rows scaled) at which a part of the circuit counts as floating."""


def updated(z: ComplexArray, y: ComplexArray, at: IntArray, delta: ComplexArray) -> tuple[ComplexArray, ComplexArray]:
    """(Z', Y') after adding `delta` (S, F, k, k) at unknowns `at` (k,); z, y complex128 (S, F, u, u)."""
    y = y.copy()
    y[..., at[:, None], at[None, :]] += delta
    z_d = z[..., :, at]
    small = np.eye(len(at)) + delta @ z_d[..., at, :]
    back, weak = _back(small)
    new = z - z_d @ (back @ (delta @ z[..., at, :]))
    if weak.any():
        new[weak] = inverse_by_parts(y[weak])
    return new, y


def _back(small: ComplexArray) -> tuple[ComplexArray, NDArray[np.bool_]]:
    """Inverse of the small matrices, and where it loses too many digits: |inverse| against a matrix of size one, so
    that a single number near zero counts as well. Where it does, the identity stands in; nan stays nan."""
    size = small.shape[-1]
    known = np.isfinite(small).all(axis=(-1, -2))
    singular = known & (np.abs(np.linalg.det(np.where(known[..., None, None], small, np.eye(size)))) == 0.0)
    safe = np.where((known & ~singular)[..., None, None], small, np.eye(size))
    back = np.linalg.inv(safe)
    loss = np.maximum(np.abs(safe).sum(axis=-1).max(axis=-1), 1.0) * np.abs(back).sum(axis=-1).max(axis=-1)
    weak = singular | (known & ~(loss <= LARGEST_LOSS))
    back = np.where(weak[..., None, None], np.eye(size), back)
    return np.where(known[..., None, None], back, np.nan), weak


def inverse_by_parts(y: ComplexArray) -> ComplexArray:
    """Inverses (K, u, u) of matrices of one pattern, each unconnected part by itself; nan in a singular part."""
    joined = (y != 0.0).any(axis=0)
    sets = Sets(len(joined))
    for a, b in np.argwhere(joined):
        sets.join(int(a), int(b))
    members: dict[int, list[int]] = {}
    for unknown in range(len(joined)):
        members.setdefault(sets.find(unknown), []).append(unknown)
    out = np.zeros_like(y)
    for part in members.values():
        rows = np.array(part)
        out[:, rows[:, None], rows[None, :]] = _inverse(y[:, rows[:, None], rows[None, :]])
        COUNTERS.factorisations += y.shape[0]
    return out


def _inverse(a: ComplexArray) -> ComplexArray:
    """Inverse with rows and columns scaled to size one first; nan where the scaled matrix is singular."""
    finite = np.isfinite(a).all(axis=(-1, -2))
    safe = np.where(finite[:, None, None], a, np.eye(a.shape[-1]))
    rows = np.abs(safe).max(axis=-1, keepdims=True)
    empty = (rows == 0.0).any(axis=(-1, -2))
    rows = np.where(rows == 0.0, 1.0, rows)
    scaled = safe / rows
    bad = ~finite | empty | ~(np.linalg.cond(scaled) <= SINGULAR)
    scaled[bad] = np.eye(a.shape[-1])
    out: ComplexArray = np.linalg.inv(scaled) / rows.swapaxes(-1, -2)
    out[bad] = np.nan
    return out
