"""Bipolar transistor after Gummel and Poon, with terminal resistances, charges and temperature laws.

Terminals: collector, base, emitter, substrate, inner collector, inner base, inner emitter.
Quasi-saturation and excess phase (PTF) are not modelled.

Symbol, variable, meaning:
    vbe, vbc    inner junction voltages [V], counted positive forward for both polarities
    IF, i_f     forward transport current IS (exp(vbe/(NF VT)) - 1) [A];   IR, i_r  reverse likewise
    qb          normalised base charge;   q1 Early part, q2 high-injection part
    gm, gmu ..  derivatives of the inner collector and base currents

Source: Gummel and Poon, Bell Syst. Tech. J. 49(5):827-852 (1970); parameter names and temperature laws after
Antognetti and Massobrio, *Semiconductor Device Modeling with SPICE*, chapter 2 (from memory).
"""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np

from checker.arrays import FloatArray
from checker.devices.evaluation import Evaluation
from checker.devices.junction import (
    capacitance_at,
    critical_v,
    depletion,
    excess,
    limited,
    potential_at,
    saturation_ratio,
    thermal_v,
)
from checker.shape import frozen

TERMINALS, OUTER = 7, 4
INNER = (("rc", 0, 4), ("rb", 1, 5), ("re", 2, 6))
C, B, E, SUB, CI, BI, EI = range(7)
PATHS = ((C, CI), (B, BI), (E, EI), (CI, BI), (BI, EI), (CI, EI))
"""A base at a known voltage still lets collector and emitter act on each other, hence the last."""
CONTROLS = ()
TIED = ()
FIGURES = ("ic_a", "ib_a", "ie_a", "vce_v", "vbe_v", "power_w")
SMALL_W = 0.25
"""Below this z^2 of base crowding its series is used, above it the closed form; both are exact to 1e-13 there."""
CROWDING = (1.0, -4 / 15, -4 / 105, -8 / 1575, -4 / 6237, -5528 / 70945875, -8 / 868725, -57872 / 54273594375)
"""3 (tan z - z)/(z tan^2 z) in powers of w = z^2, from the series of the tangent; the next term is -1.2e-7 w^8."""


@frozen
class Core:
    """Inner currents at (vbe, vbc) and their derivatives, each float64 (S, n); `ic`, `ib` [A], the rest [S];
    `qb` and its derivatives [1/V]; forward transport current `i_f` [A] and `g_f` [S], reverse `g_r` [S]."""

    ic: FloatArray
    ib: FloatArray
    ic_vbe: FloatArray
    ic_vbc: FloatArray
    ib_vbe: FloatArray
    ib_vbc: FloatArray
    qb: FloatArray
    qb_vbe: FloatArray
    qb_vbc: FloatArray
    i_f: FloatArray
    g_f: FloatArray
    g_r: FloatArray


def at_temperature(p: Mapping[str, FloatArray], t_k: FloatArray, tnom_k: FloatArray) -> dict[str, FloatArray]:
    """Parameters (S, n) moved to the device temperatures `t_k` (S, n) [K]; adds `vt`, and (S, n, 4) stacks
    `i_sat` [A] and `n_vt` [V] of transport forward and reverse, leakage of base-emitter and base-collector."""
    q = dict(p)
    ratio_is = saturation_ratio(p["eg"], p["xti"], t_k, tnom_k)
    ratio_beta = (t_k / tnom_k) ** p["xtb"]
    q["is"] = p["is"] * ratio_is
    q["bf"] = p["bf"] * ratio_beta
    q["br"] = p["br"] * ratio_beta
    q["ise"] = p["ise"] * ratio_is ** (1.0 / p["ne"]) / ratio_beta
    q["isc"] = p["isc"] * ratio_is ** (1.0 / p["nc"]) / ratio_beta
    for cj, vj, mj in (("cje", "vje", "mje"), ("cjc", "vjc", "mjc"), ("cjs", "vjs", "mjs")):
        q[vj] = potential_at(p[vj], t_k, tnom_k)
        q[cj] = capacitance_at(p[cj], p[mj], p[vj], q[vj], t_k, tnom_k)
    q["vt"] = thermal_v(t_k)
    q["i_sat"] = np.stack([q["is"], q["is"], q["ise"], q["isc"]], axis=-1)
    q["n_vt"] = np.stack([p["nf"], p["nr"], p["ne"], p["nc"]], axis=-1) * q["vt"][..., None]
    return q


def start(p: Mapping[str, FloatArray]) -> FloatArray:
    """First junction voltages, float64 (S, n, 2): base-emitter at its critical voltage, base-collector at zero."""
    crit = critical_v(p["is"], p["nf"] * p["vt"])
    return np.stack([crit, np.zeros_like(crit)], axis=-1)


def ends(p: Mapping[str, FloatArray]) -> tuple[FloatArray, FloatArray]:
    """Junction voltages (S, n, 2) of a transistor that conducts, and of one that does not."""
    return start(p), np.zeros((*p["is"].shape, 2))


def junctions(v: FloatArray, polarity: FloatArray) -> FloatArray:
    """(vbe, vbc), float64 (S, n, 2), from terminal voltages (S, n, 7)."""
    return np.stack([polarity * (v[..., BI] - v[..., EI]), polarity * (v[..., BI] - v[..., CI])], axis=-1)


def limit(p: Mapping[str, FloatArray], new: FloatArray, old: FloatArray) -> FloatArray:
    """Both junction voltages held to a step that their exponentials can follow."""
    out = np.empty_like(new)
    for j, n in ((0, "nf"), (1, "nr")):
        n_vt = p[n] * p["vt"]
        out[..., j] = limited(new[..., j], old[..., j], n_vt, critical_v(p["is"], n_vt))
    return out


def core(p: Mapping[str, FloatArray], vbe: FloatArray, vbc: FloatArray) -> Core:
    """Inner currents and derivatives at junction voltages (S, n) [V]."""
    # The four exponentials (transport both ways, leakage both ways) in one stack: a quarter of the calls.
    v = np.empty((*np.broadcast_shapes(vbe.shape, vbc.shape), 4))
    v[..., 0], v[..., 1], v[..., 2], v[..., 3] = vbe, vbc, vbe, vbc
    e, de = excess(v / p["n_vt"])
    i, g = p["i_sat"] * e, p["i_sat"] * de / p["n_vt"]
    i_f, i_r, i_le, i_lc = i[..., 0], i[..., 1], i[..., 2], i[..., 3]
    g_f, g_r, g_le, g_lc = g[..., 0], g[..., 1], g[..., 2], g[..., 3]
    # An Early denominator at or below zero is outside the model; hold it there during wild iterates.
    early = np.maximum(1.0 - vbc / p["vaf"] - vbe / p["var"], 1e-3)
    inside = early > 1e-3
    q1 = 1.0 / early
    q1_vbe = np.where(inside, q1**2 / p["var"], 0.0)
    q1_vbc = np.where(inside, q1**2 / p["vaf"], 0.0)
    q2 = np.maximum(i_f / p["ikf"] + i_r / p["ikr"], -0.2499)
    root = np.sqrt(1.0 + 4.0 * q2)
    qb = 0.5 * q1 * (1.0 + root)
    qb_vbe = 0.5 * q1_vbe * (1.0 + root) + q1 / root * g_f / p["ikf"]
    qb_vbc = 0.5 * q1_vbc * (1.0 + root) + q1 / root * g_r / p["ikr"]
    i_t = (i_f - i_r) / qb
    return Core(
        ic=i_t - i_r / p["br"] - i_lc,
        ib=i_f / p["bf"] + i_le + i_r / p["br"] + i_lc,
        ic_vbe=(g_f - i_t * qb_vbe) / qb,
        ic_vbc=(-g_r - i_t * qb_vbc) / qb - g_r / p["br"] - g_lc,
        ib_vbe=g_f / p["bf"] + g_le,
        ib_vbc=g_r / p["br"] + g_lc,
        qb=qb,
        qb_vbe=qb_vbe,
        qb_vbc=qb_vbc,
        i_f=i_f,
        g_f=g_f,
        g_r=g_r,
    )


def base_resistance(p: Mapping[str, FloatArray], k: Core) -> tuple[FloatArray, FloatArray, FloatArray]:
    """Base resistance [ohm], derivatives to vbe and vbc [ohm/V]; falls with qb, or with IB where IRB is given."""
    span = p["rb"] - p["rbm"]
    by_charge = p["rbm"] + span / k.qb
    slope_q = -span / k.qb**2
    if not np.any(np.isfinite(p["irb"])):
        return by_charge, slope_q * k.qb_vbe, slope_q * k.qb_vbc
    by_current, slope_i = _crowded(p, k.ib, span)
    crowd = np.isfinite(p["irb"])
    return (
        np.where(crowd, by_current, by_charge),
        np.where(crowd, slope_i * k.ib_vbe, slope_q * k.qb_vbe),
        np.where(crowd, slope_i * k.ib_vbc, slope_q * k.qb_vbc),
    )


def _crowded(p: Mapping[str, FloatArray], ib: FloatArray, span: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Current-crowding form: RBM + 3 (RB - RBM)(tan z - z)/(z tan^2 z), and its derivative to IB.

    z = 6 sqrt(y)/(1 + sqrt(1 + 144 y/pi^2)), y = IB/IRB. At small z, where tan z - z has no digits left, its series.
    """
    crowd = np.isfinite(p["irb"])
    irb = np.where(crowd, p["irb"], 1.0)
    y = np.maximum(ib, 0.0) / irb
    root = np.sqrt(1.0 + 144.0 / np.pi**2 * y)
    w = 36.0 * y / (1.0 + root) ** 2
    dw_dy = 36.0 / (1.0 + root) ** 2 * (1.0 - 144.0 / np.pi**2 * y / (root * (1.0 + root)))
    small = w < SMALL_W
    z = np.sqrt(np.where(small, SMALL_W, w))
    tan = np.tan(z)
    shape = 3.0 * (tan - z) / (z * tan**2)
    slope = (3.0 / z - shape * (1.0 / z + 2.0 * (1.0 + tan**2) / tan)) / (2.0 * z)
    series, steepness = np.zeros_like(w), np.zeros_like(w)
    for term in CROWDING[::-1]:
        steepness = steepness * w + series
        series = series * w + term
    shape = np.where(small, series, shape)
    slope = np.where(small, steepness, slope)
    return p["rbm"] + span * shape, np.where(ib > 0.0, span * slope * dw_dy / irb, 0.0)


def _conductance(r: FloatArray) -> FloatArray:
    return np.where(r > 0.0, 1.0 / np.where(r > 0.0, r, 1.0), 0.0)


def evaluate(
    p: Mapping[str, FloatArray], polarity: FloatArray, v: FloatArray, at: FloatArray, gmin: float
) -> Evaluation:
    """Currents and conductances, linearised at junction voltages `at` (S, n, 2), taken to terminals `v` (S, n, 7)."""
    k = core(p, at[..., 0], at[..., 1])
    now = junctions(v, polarity)
    d = now - at
    ic = k.ic + k.ic_vbe * d[..., 0] + k.ic_vbc * d[..., 1] - gmin * now[..., 1]
    ib = k.ib + k.ib_vbe * d[..., 0] + k.ib_vbc * d[..., 1] + gmin * (now[..., 0] + now[..., 1])
    g = np.zeros((*ic.shape, TERMINALS, TERMINALS))
    _inner(g, k, gmin)
    g_c, g_e = _conductance(p["rc"]), _conductance(p["re"])
    i = np.zeros((*ic.shape, TERMINALS))
    i[..., CI], i[..., BI], i[..., EI] = polarity * ic, polarity * ib, -polarity * (ic + ib)
    for outer, inner, cond in ((C, CI, g_c), (E, EI, g_e)):
        drop = cond * (v[..., outer] - v[..., inner])
        i[..., outer] += drop
        i[..., inner] -= drop
        _stamp(g, outer, inner, cond)
    _base_lead(p, polarity, k, v, d, i, g)
    return Evaluation(i=i, g=g)


def _inner(g: FloatArray, k: Core, gmin: float) -> None:
    """Stamp the inner transistor. Signs of both polarities cancel: currents and voltages turn together."""
    c_be, c_bc = k.ic_vbe, k.ic_vbc - gmin
    b_be, b_bc = k.ib_vbe + gmin, k.ib_vbc + gmin
    for row, be, bc in ((CI, c_be, c_bc), (BI, b_be, b_bc), (EI, -c_be - b_be, -c_bc - b_bc)):
        g[..., row, BI] += be + bc
        g[..., row, EI] -= be
        g[..., row, CI] -= bc


def _stamp(g: FloatArray, a: int, b: int, y: FloatArray) -> None:
    g[..., a, a] += y
    g[..., b, b] += y
    g[..., a, b] -= y
    g[..., b, a] -= y


def _base_lead(
    p: Mapping[str, FloatArray],
    polarity: FloatArray,
    k: Core,
    v: FloatArray,
    d: FloatArray,
    i: FloatArray,
    g: FloatArray,
) -> None:
    """Add the base resistance, whose value follows the junction voltages."""
    r, r_vbe, r_vbc = base_resistance(p, k)
    cond = _conductance(r)
    across = v[..., B] - v[..., BI]
    to_be, to_bc = -(cond**2) * r_vbe * across, -(cond**2) * r_vbc * across
    lead = cond * across + to_be * d[..., 0] + to_bc * d[..., 1]
    i[..., B] += lead
    i[..., BI] -= lead
    _stamp(g, B, BI, cond)
    for row, sign in ((B, 1.0), (BI, -1.0)):
        g[..., row, BI] += sign * polarity * (to_be + to_bc)
        g[..., row, EI] -= sign * polarity * to_be
        g[..., row, CI] -= sign * polarity * to_bc


def without_gm(g: FloatArray, gm: FloatArray) -> FloatArray:
    """The conductance matrix (S, n, 7, 7) with the controlled current gm vbe taken out; `gm` (S, n) [S]."""
    out = g.copy()
    for row, sign in ((CI, -1.0), (EI, 1.0)):
        out[..., row, BI] += sign * gm
        out[..., row, EI] -= sign * gm
    return out


def charges(p: Mapping[str, FloatArray], vbe: FloatArray, vbc: FloatArray) -> tuple[FloatArray, FloatArray, FloatArray]:
    """Inner capacitances [F]: dQbe/dvbe, dQbe/dvbc (transit-time part), dQbc/dvbc, at junction voltages (S, n)."""
    k = core(p, vbe, vbc)
    forward = np.maximum(k.i_f, 1e-150)
    part = np.where(k.i_f > 0.0, forward / (forward + p["itf"]), 0.0)
    swell = np.where(np.isfinite(p["vtf"]), np.exp(np.clip(vbc / (1.44 * p["vtf"]), -200.0, 80.0)), 1.0)
    rise = p["xtf"] * part**2 * swell
    tau = p["tf"] * (1.0 + rise)
    d_part = np.where(k.i_f > 0.0, p["itf"] / (forward + p["itf"]) ** 2, 0.0)
    d_tau_if = p["tf"] * p["xtf"] * 2.0 * part * d_part * swell
    d_tau_vbc = np.where(np.isfinite(p["vtf"]), p["tf"] * rise / (1.44 * p["vtf"]), 0.0)
    base = k.i_f / k.qb
    be = tau * (k.g_f - base * k.qb_vbe) / k.qb + d_tau_if * k.g_f * base
    be_bc = d_tau_vbc * base - tau * base * k.qb_vbc / k.qb
    be = be + depletion(vbe, p["cje"], p["vje"], p["mje"], p["fc"])
    bc = p["tr"] * k.g_r + p["xcjc"] * depletion(vbc, p["cjc"], p["vjc"], p["mjc"], p["fc"])
    return be, be_bc, bc


def capacitance(p: Mapping[str, FloatArray], polarity: FloatArray, v: FloatArray) -> FloatArray:
    """Capacitance matrix, float64 (S, n, 7, 7) [F], at terminal voltages `v`."""
    j = junctions(v, polarity)
    be, be_bc, bc = charges(p, j[..., 0], j[..., 1])
    v_outer = polarity * (v[..., B] - v[..., CI])
    outer = (1.0 - p["xcjc"]) * depletion(v_outer, p["cjc"], p["vjc"], p["mjc"], p["fc"])
    c = np.zeros((*be.shape, TERMINALS, TERMINALS))
    _stamp(c, BI, EI, be)
    for row, sign in ((BI, 1.0), (EI, -1.0)):
        c[..., row, BI] += sign * be_bc
        c[..., row, CI] -= sign * be_bc
    _stamp(c, BI, CI, bc)
    _stamp(c, B, CI, outer)
    v_sc = polarity * (v[..., SUB] - v[..., CI])
    _stamp(c, SUB, CI, depletion(v_sc, p["cjs"], p["vjs"], p["mjs"], np.zeros_like(v_sc)))
    return c


def figures(p: Mapping[str, FloatArray], polarity: FloatArray, v: FloatArray) -> dict[str, FloatArray]:
    """ic_a, ib_a, ie_a [A] into the terminals, vbe_v, vce_v, vbc_v [V] at the outer terminals times the polarity,
    power_w [W]; each (S, n)."""
    at = junctions(v, polarity)
    k = core(p, at[..., 0], at[..., 1])
    c, b, e = v[..., C], v[..., B], v[..., E]
    ic, ib = polarity * k.ic, polarity * k.ib
    return {
        "ic_a": ic,
        "ib_a": ib,
        "ie_a": -(ic + ib),
        "vbe_v": polarity * (b - e),
        "vce_v": polarity * (c - e),
        "vbc_v": polarity * (b - c),
        "power_w": ic * (c - e) + ib * (b - e),
    }


def small_signal(p: Mapping[str, FloatArray], polarity: FloatArray, v: FloatArray) -> dict[str, FloatArray]:
    """Intrinsic gm = dIC/dVBE at VCE, g_pi = dIB/dVBE at VCE, g_o = dIC/dVCE [S], c = all base charge over VBE [F]."""
    at = junctions(v, polarity)
    k = core(p, at[..., 0], at[..., 1])
    be, be_bc, bc = charges(p, at[..., 0], at[..., 1])
    gm = k.ic_vbe + k.ic_vbc
    # Under 1e-15 of gm it is what the blocked collector junction leaves in arithmetic.
    g_o = np.where(-k.ic_vbc > 1e-15 * np.abs(gm), -k.ic_vbc, 0.0)
    return {"gm": gm, "g_pi": k.ib_vbe + k.ib_vbc, "g_o": np.where(np.isfinite(gm), g_o, np.nan), "c": be + be_bc + bc}
