"""Operating region of bipolars, as the report defines it.

Cut-off: |IC| under 1e-3 of what would flow with collector and emitter shorted and the device out (surroundings
linearised at the operating point, exact where they are linear). Saturated: VBC > 0 and IC/IB under 0.9 of its value at
the same VBE with VBC = 0. Reverse-active: VBC forward, VBE not. Else active.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from checker.devices import bipolar
from checker.solve.operating import OperatingPoint
from checker.solve.response import Response, small_signal
from checker.words import Region

FloatArray = NDArray[np.float64]
REGIONS: tuple[Region, ...] = ("active", "saturated", "cut-off", "reverse-active")
CUT_OFF = 1e-3
SATURATED = 0.9
UNLIMITED_A = 1e-3
"""Stands for the shorted current where nothing but the device limits it: a collector and an emitter both at supplies,
or at one through a coil. Cut off is then what carries under a microampere."""
LEAST_OHM = 1e-3
"""Under this the surroundings are a short for direct current (a coil at `SLOW_HZ` is not quite 0)."""
SLOW_HZ = 1e-3
"""The frequency that stands for direct current in a linearised circuit: capacitors of a board are open there."""


def region_codes(point: OperatingPoint) -> FloatArray:
    """Index into `REGIONS`, float64 (S, n); nan without bias."""
    codes = np.zeros((point.circuit.size, 0))
    if "bipolar" in point.plan.placed:
        codes = np.concatenate([codes, _bipolar_codes(point)], axis=1)
    with np.errstate(invalid="ignore"):
        codes = np.where(_cut_off(point), REGIONS.index("cut-off"), codes)
    return np.where(np.isfinite(point.transistor["i_out_a"]), codes, np.nan)


def _bipolar_codes(point: OperatingPoint) -> FloatArray:
    at = _bipolar_junctions(point)
    vbe, vbc = at[..., 0], at[..., 1]
    with np.errstate(invalid="ignore"):
        code = np.where(saturation_edge_v(point) < vbc, REGIONS.index("saturated"), REGIONS.index("active"))
        return np.where((vbc > 0.0) & (vbe <= 0.0), REGIONS.index("reverse-active"), code)


def _bipolar_junctions(point: OperatingPoint) -> FloatArray:
    return bipolar.junctions(point.v_v[:, point.plan.placed["bipolar"].nodes], point.circuit.bipolars.polarity)


def saturation_edge_v(point: OperatingPoint) -> FloatArray:
    """Inner VBC [V], (S, n), at which IC/IB has fallen to 0.9 of its value at VBC = 0, VBE as it is."""
    p = point.assembler.p["bipolar"]
    at = np.nan_to_num(_bipolar_junctions(point))
    vbe = np.maximum(at[..., 0], 1e-6)
    base = bipolar.core(p, vbe, np.zeros_like(vbe))
    low, width = np.zeros_like(vbe), vbe
    cuts = np.arange(33.0)[:, None, None] / 32.0
    for _ in range(6):
        # One evaluation cuts the bracket in 32: six leave a nanovolt.
        tried = low + cuts * width
        k = bipolar.core(p, vbe, tried)
        keeps = np.sum(k.ic * base.ib >= SATURATED * base.ic * k.ib, axis=0) - 1
        width = width / 32.0
        low = low + np.maximum(keeps, 0) * width
    return low


def headroom_v(point: OperatingPoint) -> FloatArray:
    """How far the output voltage may fall before the device leaves the active region [V], (S, n); negative when it
    has."""
    rooms = [np.zeros((point.circuit.size, 0))]
    if "bipolar" in point.plan.placed:
        rooms.append(saturation_edge_v(point) - _bipolar_junctions(point)[..., 1])
    return np.concatenate(rooms, axis=1)


def _cut_off(point: OperatingPoint) -> NDArray[np.bool_]:
    ic = np.abs(point.transistor["i_out_a"])
    out = np.zeros(ic.shape, dtype=bool)
    suspects = [j for j in range(ic.shape[1]) if np.nanmin(ic[:, j], initial=np.inf) < 1e-3]
    if not suspects:
        return out
    slow = small_signal(point, np.array([SLOW_HZ]))
    for j in suspects:
        out[:, j] = ic[:, j] < CUT_OFF * shorted_current(point, slow, j)
    return out


def shorted_current(point: OperatingPoint, slow: Response, j: int) -> FloatArray:
    """Current [A], (S,), with output and common terminal of transistor `j` shorted and the device out."""
    device = point.circuit.transistors
    c, b, e = device.nodes[j].tolist()
    out = slow.removed([device.names[j]])
    i = {node: point.transistor[key][:, j] for node, key in ((c, "i_out_a"), (b, "i_control_a"), (e, "i_common_a"))}
    vce = point.v_v[:, c] - point.v_v[:, e]
    for node, current in i.items():
        vce = vce + np.real(out.transfer(c, node)[:, 0] - out.transfer(e, node)[:, 0]) * current
    z = np.real(out.between(c, e)[:, 0])
    with np.errstate(divide="ignore", invalid="ignore"):
        return np.where(z > LEAST_OHM, np.abs(vce / z), UNLIMITED_A)
