"""Small-signal admittance of devices at their outer terminals, at the certified operating point.

Inner nodes are eliminated (Kron reduction), so that a device can be removed, or one of its terminals opened, as a
block of its outer terminals alone.
"""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np

from checker.arrays import ComplexArray, FloatArray
from checker.devices.family import TRANSISTORS
from checker.solve.frequencies import angular
from checker.solve.operating import OperatingPoint
from checker.solve.plan import Placed

Pencils = Mapping[str, tuple[FloatArray, FloatArray]]


def device_pencils(point: OperatingPoint) -> Pencils:
    """Family -> (G, C) of its devices (S, n, k, k) [S, F]; nan where there is no bias. Kept."""
    if "pencils" not in point.kept:
        point.kept["pencils"] = {kind: _pencil(point, kind, placed) for kind, placed in point.plan.placed.items()}
    return point.kept["pencils"]  # type: ignore[no-any-return]


def _pencil(point: OperatingPoint, kind: str, placed: Placed) -> tuple[FloatArray, FloatArray]:
    p, polarity, model = point.assembler.p[kind], point.circuit.devices[kind].polarity, placed.model
    v = point.v_v[:, placed.nodes]
    safe = np.nan_to_num(v)
    g = model.evaluate(p, polarity, safe, model.junctions(safe, polarity), 0.0).g
    c = model.capacitance(p, polarity, safe)
    lost = ~np.isfinite(v).all(axis=-1)
    g[lost] = np.nan
    c[lost] = np.nan
    return g, c


def intrinsic(point: OperatingPoint, kind: str) -> Mapping[str, FloatArray]:
    """gm, g_pi, g_o [S] and control capacitance c [F] of a family of transistors, (S, n); nan without bias. Kept."""
    key = f"intrinsic {kind}"
    if key not in point.kept:
        placed = point.plan.placed[kind]
        p, polarity = point.assembler.p[kind], point.circuit.devices[kind].polarity
        point.kept[key] = TRANSISTORS[kind]().small_signal(p, polarity, point.v_v[:, placed.nodes])
    return point.kept[key]  # type: ignore[no-any-return]


def passive_admittance(point: OperatingPoint, f_hz: FloatArray) -> dict[str, ComplexArray]:
    """Y of the transistors with their controlled current taken out, by family, complex128 (S, F, n, k, k) [S]."""
    pencils = device_pencils(point)
    return {
        kind: outer_admittance(
            point.plan.placed[kind],
            model().without_gm(pencils[kind][0], intrinsic(point, kind)["gm"]),
            pencils[kind][1],
            f_hz,
        )
        for kind, model in TRANSISTORS.items()
        if kind in pencils
    }


def outer_admittance(placed: Placed, g: FloatArray, c: FloatArray, f_hz: FloatArray) -> ComplexArray:
    """Y of each device at its outer terminals, complex128 (S, F, n, outer, outer) [S]."""
    y = g[:, None] + angular(f_hz)[None, :, None, None, None] * c[:, None]
    k, outer = placed.nodes.shape[1], placed.model.OUTER
    for _, out, inside in placed.model.INNER:
        same = placed.nodes[:, inside] == placed.nodes[:, out]
        y[:, :, same, out, :] += y[:, :, same, inside, :]
        y[:, :, same, :, out] += y[:, :, same, :, inside]
        y[:, :, same, inside, :] = 0.0
        y[:, :, same, :, inside] = 0.0
        y[:, :, same, inside, inside] = 1.0
    for a, b in placed.model.TIED:
        one = placed.nodes[:, a] == placed.nodes[:, b]
        y[:, :, one, b, :] += y[:, :, one, a, :]
        y[:, :, one, :, b] += y[:, :, one, :, a]
        y[:, :, one, a, :] = 0.0
        y[:, :, one, :, a] = 0.0
    lost = ~np.isfinite(y).all(axis=(-1, -2))
    y[lost] = np.eye(k)
    reduced = y[..., :outer, :outer] - y[..., :outer, outer:] @ np.linalg.solve(
        y[..., outer:, outer:], y[..., outer:, :outer]
    )
    reduced[lost] = np.nan
    return reduced
