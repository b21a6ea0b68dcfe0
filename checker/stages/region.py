"""Operating region of transistors, as the report defines it.

Cut-off: |IC| under 1e-3 of what would flow with collector and emitter shorted and the device out (surroundings
linearised at the operating point, exact where they are linear). Saturated: VBC > 0 and IC/IB under 0.9 of its value at
the same VBE with VBC = 0. Reverse-active: VBC forward, VBE not. Else active. Field-effect transistors: active when
|VDS| of the channel >= VOV > 0, ohmic below; body-conducting, gate-conducting where that junction carries over 1 % of
the shorted current. Source is the more negative end (N channel).
"""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np

from checker.arrays import BoolArray, FloatArray
from checker.circuit.types import TRANSISTOR_FAMILIES
from checker.constants import CURRENT_FLOOR_A
from checker.devices import bipolar
from checker.solve.operating import OperatingPoint
from checker.solve.response import Response, small_signal
from checker.words import Region

REGIONS: tuple[Region, ...] = (
    "active",
    "saturated",
    "cut-off",
    "reverse-active",
    "ohmic",
    "body-conducting",
    "gate-conducting",
)
CUT_OFF = 1e-3
SUSPECT_A = 1e-3
"""Only devices of less current than this are asked whether they are cut off [A]."""
SATURATED = 0.9
UNLIMITED_A = 1e-3
"""Stands for the shorted current where nothing but the device limits it: a collector and an emitter both at supplies,
or at one through a coil. Cut off is then what carries under a microampere."""
LEAST_OHM = 1e-3
"""Under this the surroundings are a short for direct current (a coil at `SLOW_HZ` is not quite 0)."""
JUNCTION_CONDUCTS = 1e-2
"""Part of the shorted current from which a gate or body junction counts as conducting."""
NOTICED_A = 1e-12
"""Junction currents below this are leakage and are not looked at [A]."""
REVERSED_V = 1e-6
"""A drain closer to its source than this is not called reversed [V]."""
FETS = ("jfet", "mosfet")
SLOW_HZ = 1e-3
"""The frequency that stands for direct current in a linearised circuit: capacitors of a board are open there."""


def region_codes(point: OperatingPoint) -> FloatArray:
    """Index into `REGIONS`, float64 (S, n); nan without bias."""
    codes = np.zeros((point.circuit.size, 0))
    if "bipolar" in point.plan.placed:
        codes = np.concatenate([codes, _bipolar_codes(point)], axis=1)
    for kind in FETS:
        if kind in point.plan.placed:
            codes = np.concatenate([codes, _fet_codes(point.devices[kind])], axis=1)
    _judge_small_currents(point, codes)
    return np.where(np.isfinite(point.transistor["i_out_a"]), codes, np.nan)


def _bipolar_codes(point: OperatingPoint) -> FloatArray:
    at = _bipolar_junctions(point)
    vbe, vbc = at[..., 0], at[..., 1]
    with np.errstate(invalid="ignore"):
        code = np.where(saturation_edge_v(point) < vbc, REGIONS.index("saturated"), REGIONS.index("active"))
        return np.where((vbc > 0.0) & (vbe <= 0.0), REGIONS.index("reverse-active"), code)


def _fet_codes(table: Mapping[str, FloatArray]) -> FloatArray:
    """By the channel alone."""
    with np.errstate(invalid="ignore"):
        code = np.where(table["channel_v"] >= table["vov_v"], REGIONS.index("active"), REGIONS.index("ohmic"))
        return np.where(table["vov_v"] <= 0.0, REGIONS.index("cut-off"), code).astype(float)


def is_reversed(point: OperatingPoint, device: str) -> BoolArray:
    """Whether a field-effect transistor has its drain at the more negative end (N channel), (S,)."""
    kind, j = point.circuit.find_device(device)
    return np.asarray(point.devices[kind]["vds_v"][:, j] < -REVERSED_V)


def _bipolar_junctions(point: OperatingPoint) -> FloatArray:
    return bipolar.junctions(point.v_v[:, point.plan.placed["bipolar"].nodes], point.circuit.bipolars.polarity)


def saturation_edge_v(point: OperatingPoint) -> FloatArray:
    """Inner VBC [V], (S, n), at which IC/IB has fallen to 0.9 of its value at VBC = 0, VBE as it is. Kept."""
    if "saturation edge" not in point.kept:
        point.kept["saturation edge"] = _saturation_edge_v(point)
    return point.kept["saturation edge"]  # type: ignore[no-any-return]


def _saturation_edge_v(point: OperatingPoint) -> FloatArray:
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
    tables = [point.devices[kind] for kind in FETS if kind in point.devices]
    rooms += [table["channel_v"] - np.maximum(table["vov_v"], 0.0) for table in tables]
    return np.concatenate(rooms, axis=1)


def _judge_small_currents(point: OperatingPoint, codes: FloatArray) -> None:
    """Write cut-off, and conduction of gate and body, into `codes` (S, n): all against the shorted current."""
    names = point.circuit.transistors.names
    current = np.abs(point.transistor["i_out_a"])
    gate, body = _junction_currents(point)
    with np.errstate(invalid="ignore"):
        small = (current < SUSPECT_A) | (gate > NOTICED_A) | (body > NOTICED_A)
    suspects = [j for j in range(len(names)) if small[:, j].any()]
    if not suspects:
        return
    slow = small_signal(point, np.array([SLOW_HZ]))
    for j in suspects:
        shorted = shorted_current(point, slow, j)
        with np.errstate(invalid="ignore"):
            for word, where in (
                ("cut-off", (current[:, j] < CUT_OFF * shorted) | (current[:, j] < CURRENT_FLOOR_A)),
                ("gate-conducting", gate[:, j] > JUNCTION_CONDUCTS * shorted),
                ("body-conducting", body[:, j] > JUNCTION_CONDUCTS * shorted),
            ):
                codes[where, j] = REGIONS.index(word)


def _junction_currents(point: OperatingPoint) -> tuple[FloatArray, FloatArray]:
    """Forward current of gate and body junctions of every transistor, (S, n) [A]; 0 for bipolars."""
    gates, bodies = [np.zeros((point.circuit.size, 0))], [np.zeros((point.circuit.size, 0))]
    for kind in TRANSISTOR_FAMILIES:
        if kind in point.plan.placed:
            table, count = point.devices[kind], len(point.circuit.devices[kind].names)
            none = np.zeros((point.circuit.size, count))
            gates.append(table["ig_a"] * point.circuit.devices[kind].polarity if kind in FETS else none)
            bodies.append(table["body_a"] if kind in FETS else none)
    return np.concatenate(gates, axis=1), np.concatenate(bodies, axis=1)


def shorted_current(point: OperatingPoint, slow: Response, j: int) -> FloatArray:
    """Current [A], (S,), with output and common terminal of transistor `j` shorted and the device out."""
    device = point.circuit.transistors
    c, b, e = device.nodes[j].tolist()
    block = slow.block(device.names[j])
    nodes = (c, b, e, *block.nodes[3:])
    z = np.stack([np.stack([slow.transfer(to, of)[:, 0] for of in nodes], -1) for to in nodes], -2)
    y = block.y[:, 0]
    # The device taken out of its own few nets: Z' = Z + Z (1 - Y Z)^-1 Y Z (Sherman, Morrison and Woodbury).
    lost = np.asarray(~(np.isfinite(z).all(axis=(-1, -2)) & np.isfinite(y).all(axis=(-1, -2))), dtype=bool)
    z[lost], y = 0.0, np.where(lost[:, None, None], 0.0, y)
    try:
        out = np.real(z + z @ np.linalg.solve(np.eye(len(nodes)) - y @ z, y @ z))
    except np.linalg.LinAlgError:
        return np.full(len(lost), np.nan)  # what is left without the device floats: no current can be told
    vce = point.v_v[:, c] - point.v_v[:, e]
    for place, key in ((0, "i_out_a"), (1, "i_control_a"), (2, "i_common_a")):
        vce = vce + (out[:, 0, place] - out[:, 2, place]) * point.transistor[key][:, j]
    r = out[:, 0, 0] - out[:, 0, 2] - out[:, 2, 0] + out[:, 2, 2]
    with np.errstate(divide="ignore", invalid="ignore"):
        return np.where(lost, np.nan, np.where(r > LEAST_OHM, np.abs(vce / r), UNLIMITED_A))
