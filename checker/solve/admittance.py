"""Small-signal admittance of devices at their outer terminals, at the certified operating point.

Inner nodes are eliminated (Kron reduction), so that a device can be removed, or one of its terminals opened, as a
block of its outer terminals alone.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from checker.devices import bipolar, diode
from checker.solve.frequencies import angular
from checker.solve.operating import OperatingPoint
from checker.solve.plan import Placed

FloatArray = NDArray[np.float64]
ComplexArray = NDArray[np.complex128]


def device_pencils(point: OperatingPoint) -> tuple[tuple[FloatArray, FloatArray], tuple[FloatArray, FloatArray]]:
    """(G, C) of all bipolars (S, n, 7, 7) and all diodes (S, n, 3, 3) [S, F]; nan where there is no bias. Kept."""
    if "pencils" not in point.kept:
        point.kept["pencils"] = _pencils(point)
    return point.kept["pencils"]  # type: ignore[no-any-return]


def _pencils(point: OperatingPoint) -> tuple[tuple[FloatArray, FloatArray], tuple[FloatArray, FloatArray]]:
    a, plan = point.assembler, point.plan
    out = []
    for module, placed, p in ((bipolar, plan.bipolars, a.p_bipolar), (diode, plan.diodes, a.p_diode)):
        polarity = placed.table.polarity
        v = point.v_v[:, placed.nodes]
        safe = np.nan_to_num(v)
        at = module.junctions(safe, polarity)
        g = module.evaluate(p, polarity, safe, at, 0.0).g
        c = module.capacitance(p, polarity, safe)
        lost = ~np.isfinite(v).all(axis=-1)
        g[lost] = np.nan
        c[lost] = np.nan
        out.append((g, c))
    return out[0], out[1]


def transconductance(point: OperatingPoint) -> FloatArray:
    """gm = dIC/dVBE at constant VCE of every bipolar, float64 (S, n) [S]; nan without bias."""
    placed = point.plan.bipolars
    v = point.v_v[:, placed.nodes]
    at = bipolar.junctions(v, placed.table.polarity)
    k = bipolar.core(point.assembler.p_bipolar, at[..., 0], at[..., 1])
    return k.ic_vbe + k.ic_vbc


def passive_admittance(point: OperatingPoint, f_hz: FloatArray) -> ComplexArray:
    """Y of the bipolars with their controlled current gm vbe taken out, complex128 (S, F, n, 4, 4) [S]."""
    (g, c), _ = device_pencils(point)
    return outer_admittance(point.plan.bipolars, bipolar.without_gm(g, transconductance(point)), c, f_hz, 4)


def outer_admittance(placed: Placed, g: FloatArray, c: FloatArray, f_hz: FloatArray, outer: int) -> ComplexArray:
    """Y of each device at its `outer` first terminals, complex128 (S, F, n, outer, outer) [S]."""
    y = g[:, None] + angular(f_hz)[None, :, None, None, None] * c[:, None]
    k = placed.nodes.shape[1]
    pairs = bipolar.INNER if k == bipolar.TERMINALS else diode.INNER
    for _, out, inside in pairs:
        same = placed.nodes[:, inside] == placed.nodes[:, out]
        y[:, :, same, out, :] += y[:, :, same, inside, :]
        y[:, :, same, :, out] += y[:, :, same, :, inside]
        y[:, :, same, inside, :] = 0.0
        y[:, :, same, :, inside] = 0.0
        y[:, :, same, inside, inside] = 1.0
    lost = ~np.isfinite(y).all(axis=(-1, -2))
    y[lost] = np.eye(k)
    reduced = y[..., :outer, :outer] - y[..., :outer, outer:] @ np.linalg.solve(
        y[..., outer:, outer:], y[..., outer:, :outer]
    )
    reduced[lost] = np.nan
    return reduced
