"""Low-rank changes of an inverse, and what is done where such a change would lose its digits.

Z' = Z - Z_D (1 + dY Z_DD)^-1 dY Z_D. Opening a link that holds two nets together (a coupling capacitor far above its
corner) makes 1 + dY Z_DD nearly singular, and a difference of large numbers besides. Where that costs more digits
than can be spared, those frequencies are inverted afresh, part by unconnected part, so that a net that the change
leaves floating reads nan and harms no other.

Source of the update: Sherman-Morrison-Woodbury identity; Golub and Van Loan, *Matrix Computations*, section 2.1
(from memory).
"""

from __future__ import annotations

import numpy as np

from checker.arrays import BoolArray, ComplexArray, FloatArray, IntArray
from checker.solve.counters import COUNTERS
from checker.solve.plan import Sets

LARGEST_LOSS = 1e8
"""Loss of digits beyond which an update is not trusted: at 1e8 it leaves eight of sixteen."""
SINGULAR = 1e15
"""Condition (rows scaled) at which a part of the circuit counts as floating."""


def updated(z: ComplexArray, y: ComplexArray, at: IntArray, delta: ComplexArray) -> tuple[ComplexArray, ComplexArray]:
    """(Z', Y') after adding `delta` (S, F, k, k) at unknowns `at` (k,); z, y complex128 (S, F, u, u)."""
    y = y.copy()
    y[..., at[:, None], at[None, :]] += delta
    z_d = z[..., :, at]
    small = np.eye(len(at)) + delta @ z_d[..., at, :]
    back, weak = _back(small, np.abs(delta) @ np.abs(z_d[..., at, :]))
    new = z - z_d @ (back @ (delta @ z[..., at, :]))
    if weak.any():
        touched = np.flatnonzero((z_d[weak] != 0.0).any(axis=(0, 2)))
        block = np.ix_(np.flatnonzero(weak.ravel()), touched, touched)
        flat = new.reshape(-1, *new.shape[-2:])
        flat[block] = inverse_by_parts(y.reshape(flat.shape)[block])
    return new, y


def _back(small: ComplexArray, terms: FloatArray) -> tuple[ComplexArray, BoolArray]:
    """Inverse of the small matrices, and where it loses too many digits; the identity stands in there, nan stays nan.

    Loss: the largest term that was summed into the matrix, times the size (1-norm) of its inverse.
    """
    identity = np.eye(small.shape[-1], dtype=complex)
    known = np.asarray(np.isfinite(small).all(axis=(-1, -2)))
    small = np.where(known[..., None, None], small, identity)
    singular = np.zeros(known.shape, dtype=bool)
    try:
        back = np.asarray(np.linalg.inv(small))
    except np.linalg.LinAlgError:
        singular = np.asarray(np.linalg.det(small) == 0.0)
        back = np.asarray(np.linalg.inv(np.where(singular[..., None, None], identity, small)))
    size = np.maximum(1.0, np.where(known, terms.max(axis=(-1, -2)), 0.0))
    weak = singular | (known & ~(size * np.abs(back).sum(axis=-2).max(axis=-1) <= LARGEST_LOSS))
    back = np.where(weak[..., None, None], identity, back)
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
    finite = np.isfinite(a).all(axis=(-1, -2), keepdims=True)
    safe = np.where(finite, a, 0.0)
    rows = np.abs(safe).max(axis=-1, keepdims=True)
    rows = np.where(rows == 0.0, 1.0, rows)
    scaled = safe / rows
    good = np.asarray(np.linalg.cond(scaled) <= SINGULAR, dtype=bool)[:, None, None]
    inverse = np.linalg.inv(np.where(good, scaled, np.eye(a.shape[-1]))) / rows.swapaxes(-1, -2)
    return np.asarray(np.where(good, inverse, np.nan), dtype=complex)
