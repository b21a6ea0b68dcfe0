"""Junction diode: exponential with high injection and recombination, breakdown, series resistance, charge.

Terminals: anode, cathode, inner anode (behind RS). Voltages in volts, currents in amperes. Schottky diodes and LEDs are
the same equations with their own IS, N and EG. Breakdown: I = -IBV exp(-(V + BV)/(NBV VT)); a soft knee, as low-voltage
Zener diodes have it, has NBV well above 1; BV moves by TBV1 per kelvin.

Source: Antognetti and Massobrio, *Semiconductor Device Modeling with SPICE*, chapter 1 (from memory).
"""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np

from checker.arrays import FloatArray
from checker.devices.evaluation import Evaluation
from checker.devices.junction import (
    breakdown,
    capacitance_at,
    critical_v,
    depletion,
    excess,
    limited,
    limited_in_breakdown,
    potential_at,
    recombination,
    saturation_ratio,
    thermal_v,
)

TERMINALS, OUTER = 3, 2
INNER = (("rs", 0, 2),)
"""Series resistance, outer terminal, inner terminal."""
PATHS = ((0, 2), (2, 1))
CONTROLS = ()
TIED = ()


def at_temperature(p: Mapping[str, FloatArray], t_k: FloatArray, tnom_k: FloatArray) -> dict[str, FloatArray]:
    """Parameters (S, n) moved to the device temperatures `t_k` (S, n) [K]; adds `vt`."""
    q = dict(p)
    is_ratio = saturation_ratio(p["eg"] / p["n"], p["xti"] / p["n"], t_k, tnom_k)
    q["is"] = p["is"] * is_ratio
    q["isr"] = p["isr"] * saturation_ratio(p["eg"] / p["nr"], p["xti"] / p["nr"], t_k, tnom_k)
    q["vj"] = potential_at(p["vj"], t_k, tnom_k)
    q["cjo"] = capacitance_at(p["cjo"], p["m"], p["vj"], q["vj"], t_k, tnom_k)
    q["bv"] = p["bv"] * (1.0 + p["tbv1"] * (t_k - tnom_k))
    q["vt"] = thermal_v(t_k)
    return q


def start(p: Mapping[str, FloatArray]) -> FloatArray:
    """First junction voltages, float64 (S, n, 1): at the critical voltage, so that diodes begin conducting."""
    return critical_v(p["is"], p["n"] * p["vt"])[..., None]


def junctions(v: FloatArray, _polarity: FloatArray) -> FloatArray:
    """Junction voltage (S, n, 1) from terminal voltages (S, n, 3)."""
    return (v[..., 2] - v[..., 1])[..., None]


def limit(p: Mapping[str, FloatArray], new: FloatArray, old: FloatArray) -> FloatArray:
    """Junction voltages held to a step that the exponential, forward or in breakdown, can follow."""
    n_vt = p["n"] * p["vt"]
    crit = critical_v(p["is"], n_vt)
    forward = limited(new[..., 0], old[..., 0], n_vt, crit)
    return limited_in_breakdown(new[..., 0], old[..., 0], forward, p["bv"], p["nbv"] * p["vt"])[..., None]


def current(p: Mapping[str, FloatArray], v: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Junction current [A] and conductance [S] at junction voltage v (S, n) [V]."""
    n_vt = p["n"] * p["vt"]
    e, de = excess(v / n_vt)
    i_f = p["is"] * e
    g_f = p["is"] * de / n_vt
    root = np.sqrt(1.0 + np.maximum(i_f, 0.0) / p["ikf"])
    g_h = np.where(i_f > 0.0, g_f * (1.0 / root - 0.5 * i_f / p["ikf"] / root**3), g_f)
    i_r, g_r = recombination(v, p["isr"], p["nr"] * p["vt"], p["vj"], p["m"])
    i_b, g_b = breakdown(v, p["bv"], p["ibv"], p["nbv"] * p["vt"])
    return i_f / root + i_r + i_b, g_h + g_r + g_b


def evaluate(
    p: Mapping[str, FloatArray], polarity: FloatArray, v: FloatArray, at: FloatArray, gmin: float
) -> Evaluation:
    """Currents and conductances, linearised at junction voltages `at` (S, n, 1), taken to terminals `v` (S, n, 3)."""
    vd = junctions(v, polarity)[..., 0]
    i_j, g_j = current(p, at[..., 0])
    i_d = i_j + g_j * (vd - at[..., 0]) + gmin * vd
    g_d = g_j + gmin
    g_s = np.where(p["rs"] > 0.0, 1.0 / np.where(p["rs"] > 0.0, p["rs"], 1.0), 0.0)
    i_s = g_s * (v[..., 0] - v[..., 2])
    i = np.stack([i_s, -i_d, i_d - i_s], axis=-1)
    g = np.zeros((*vd.shape, 3, 3))
    g[..., 0, 0] = g_s
    g[..., 0, 2] = g[..., 2, 0] = -g_s
    g[..., 2, 2] = g_s + g_d
    g[..., 1, 1] = g_d
    g[..., 2, 1] = g[..., 1, 2] = -g_d
    return Evaluation(i=i, g=g)


def capacitance(p: Mapping[str, FloatArray], polarity: FloatArray, v: FloatArray) -> FloatArray:
    """Capacitance matrix, float64 (S, n, 3, 3) [F], at terminal voltages `v`."""
    vd = junctions(v, polarity)[..., 0]
    _, g = current(p, vd)
    c_d = p["tt"] * np.maximum(g, 0.0) + depletion(vd, p["cjo"], p["vj"], p["m"], p["fc"])
    c = np.zeros((*vd.shape, 3, 3))
    c[..., 2, 2] = c[..., 1, 1] = c_d
    c[..., 2, 1] = c[..., 1, 2] = -c_d
    return c


def figures(p: Mapping[str, FloatArray], polarity: FloatArray, v: FloatArray) -> dict[str, FloatArray]:
    """i_a [A] from anode to cathode, v_v [V] across, power_w [W]; each (S, n)."""
    i, _ = current(p, junctions(v, polarity)[..., 0])
    across = v[..., 0] - v[..., 1]
    i = np.where(np.isfinite(across), i, np.nan)
    return {"i_a": i, "v_v": across, "power_w": i * across}
