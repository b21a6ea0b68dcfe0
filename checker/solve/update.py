"""Low-rank changes of an inverse, and what is done where such a change would lose its digits.

Z' = Z - Z_D (1 + dY Z_DD)^-1 dY Z_D. Opening a link that holds two nets together (a coupling capacitor far above its
corner) makes 1 + dY Z_DD nearly singular and a difference of large numbers besides. Where that costs more digits than we can
spare, those frequencies are inverted afresh, part by unconnected part, so that a net that the change leaves floating
reads nan and harms no other.

Source of the update: Sherman-Morrison-Woodbury identity; Golub and Van Loan, *Matrix Computations*, section 2.1
(from memory).
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from checker.solve.counters import COUNTERS
from checker.solve.plan import Sets

FloatArray = NDArray[np.float64]
ComplexArray = NDArray[np.complex128]
IntArray = NDArray[np.int64]

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
    weak = np.asarray(_loss(small, np.abs(delta) @ np.abs(z_d[..., at, :])) > LARGEST_LOSS, dtype=bool)
    small = np.where(weak[..., None, None], np.eye(len(at)), small)
    new = z - z_d @ np.linalg.solve(small, delta @ z[..., at, :])
    if weak.any():
        touched = np.flatnonzero((z_d[weak] != 0.0).any(axis=(0, 2)))
        block = np.ix_(np.flatnonzero(weak.ravel()), touched, touched)
        flat = new.reshape(-1, *new.shape[-2:])
        flat[block] = inverse_by_parts(y.reshape(flat.shape)[block])
    return new, y


def _loss(small: ComplexArray, terms: FloatArray) -> FloatArray:
    """Largest term that was summed into the small matrix over its smallest singular value; 0 where not finite."""
    known = np.isfinite(small).all(axis=(-1, -2))
    safe = np.where(known[..., None, None], small, np.eye(small.shape[-1]))
    least = np.linalg.svd(safe, compute_uv=False)[..., -1]
    size = np.maximum(1.0, np.where(known, terms.max(axis=(-1, -2)), 0.0))
    return np.asarray(np.where(known, size / np.maximum(least, 1e-300), 0.0), dtype=float)


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
    scaled = safe / np.where(rows == 0.0, 1.0, rows)
    good = np.asarray(np.linalg.cond(scaled) <= SINGULAR, dtype=bool)[:, None, None]
    inverse = np.linalg.inv(np.where(good, scaled, np.eye(a.shape[-1]))) / np.where(rows == 0.0, 1.0, rows).swapaxes(-1, -2)
    return np.asarray(np.where(good, inverse, np.nan), dtype=complex)
