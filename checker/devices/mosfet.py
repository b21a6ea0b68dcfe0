"""MOSFET of level 1 after Shichman and Hodges: square-law channel with body effect, body diodes, leads, charges.

Terminals: drain, gate, source, body, inner drain, inner source. Velocity saturation, mobility reduction and avalanche
are not modelled; the law has its hard corner at the threshold, but where a model asks for conduction below it. A power
transistor is the same law with the width, length and transconductance of its card.

Symbol, variable, meaning (all counted for an N channel; a P channel has its voltages and currents times -1):
    VTO, vto    threshold at zero body bias [V], positive for enhancement of either polarity
    KP, kp      ID = KP/2 W/L VOV^2 (1 + LAMBDA VDS) in the active region [A/V^2];   LAMBDA, lambda  [1/V]
    GAMMA, PHI  body effect: VTH = VTO + GAMMA (sqrt(PHI - VBS) - sqrt(PHI))
    COX, cox    capacitance of the gate oxide over the channel [F]; 0 where the oxide is not given
    n, weak     below VTH + n VT the current is that at VOV = n VT times exp((VGS - VTH)/(n VT) - 1); 0: it is none
    ISD, ISS    saturation currents of the body diodes at drain and source [A]

Source: Shichman and Hodges, IEEE J. Solid-State Circuits SC-3(3):285-289 (1968); gate charges after Meyer, RCA Review
32:42-63 (1971); conduction below threshold after Swanson and Meindl, IEEE J. Solid-State Circuits SC-7(2):146-153
(1972); body diodes and temperature laws after the guide of the SPICE 3F5 program (all from memory).
"""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np

from checker.arrays import FloatArray
from checker.devices.channel import conductance, lead, limited_drain, limited_gate, stamp, take_gm_out
from checker.devices.evaluation import Evaluation
from checker.devices.junction import (
    band_gap_ev,
    capacitance_at,
    critical_v,
    depletion,
    exponential,
    limited,
    potential_at,
    thermal_v,
)
from checker.shape import frozen

TERMINALS, OUTER = 6, 4
INNER = (("rd", 0, 4), ("rs", 2, 5))
D, G, S, B, DI, SI = range(6)
PATHS = ((D, DI), (S, SI), (DI, SI), (B, SI), (B, DI))
CONTROLS = ((G, DI), (G, SI))
TIED = ((B, S),)
"""A body on its source's net is one lead with it."""
FIGURES = ("id_a", "ig_a", "is_a", "vds_v", "vgs_v", "power_w")


@frozen
class Core:
    """At (vgs, vds, vbs), each float64 (S, n): channel current `i_d` [A] and its derivatives [S]; threshold `vth` [V]
    at the more negative end; body diodes `i_bd`, `i_bs` [A] with `g_bd`, `g_bs` [S]."""

    i_d: FloatArray
    d_vgs: FloatArray
    d_vds: FloatArray
    d_vbs: FloatArray
    vth: FloatArray
    i_bd: FloatArray
    g_bd: FloatArray
    i_bs: FloatArray
    g_bs: FloatArray


def at_temperature(p: Mapping[str, FloatArray], t_k: FloatArray, tnom_k: FloatArray) -> dict[str, FloatArray]:
    """Parameters (S, n) moved to the device temperatures `t_k` (S, n) [K]; adds `vt`.

    Mobility falls as T^-1.5; the threshold moves with the potential PHI and half the band gap.
    """
    q = dict(p)
    vt, vt_nom = thermal_v(t_k), thermal_v(tnom_k)
    gap, gap_nom = band_gap_ev(t_k), band_gap_ev(tnom_k)
    q["vt"] = vt
    q["kp"] = p["kp"] * (t_k / tnom_k) ** -1.5
    q["phi"] = potential_at(p["phi"], t_k, tnom_k)
    flat = 0.5 * p["channel"] * (gap_nom - gap) + 0.5 * (q["phi"] - p["phi"])
    q["vto"] = p["vto"] + flat + p["gamma"] * (np.sqrt(q["phi"]) - np.sqrt(p["phi"]))
    grown = np.exp((gap_nom / vt_nom - gap / vt) / p["n"])
    q["isd"], q["iss"] = p["isd"] * grown, p["iss"] * grown
    q["pb"] = potential_at(p["pb"], t_k, tnom_k)
    for name, grading in (("cbd", "mj"), ("cbs", "mj"), ("cbdsw", "mjsw"), ("cbssw", "mjsw")):
        q[name] = capacitance_at(p[name], p[grading], p["pb"], q["pb"], t_k, tnom_k)
    return q


def start(p: Mapping[str, FloatArray]) -> FloatArray:
    """First (vgs, vds, vbs), float64 (S, n, 3): a volt of overdrive, in the active region."""
    return np.stack([p["vto"] + 1.0, np.full_like(p["vto"], 2.0), np.zeros_like(p["vto"])], axis=-1)


def ends(p: Mapping[str, FloatArray]) -> tuple[FloatArray, FloatArray]:
    """(vgs, vds, vbs), each (S, n, 3), of a channel wide open, and of one that does not conduct."""
    none = np.zeros_like(p["vto"])
    return (
        np.stack([p["vto"] + 3.0, none + 0.05, none], axis=-1),
        np.stack([p["vto"] - 1.0, none + 2.0, none], axis=-1),
    )


def junctions(v: FloatArray, polarity: FloatArray) -> FloatArray:
    """(vgs, vds, vbs), float64 (S, n, 3), from terminal voltages (S, n, 6)."""
    return np.stack([polarity * (v[..., x] - v[..., SI]) for x in (G, DI, B)], axis=-1)


def limit(p: Mapping[str, FloatArray], new: FloatArray, old: FloatArray) -> FloatArray:
    """Voltages held to a step that square law and body diodes can follow."""
    out = np.empty_like(new)
    vds = limited_drain(new[..., 1], old[..., 1])
    # The gate is held at the end that acts as source.
    source = vds >= 0.0
    at_source = limited_gate(new[..., 0], old[..., 0], p["vto"])
    over_drain = new[..., 0] - vds
    at_drain = limited_gate(over_drain, old[..., 0] - old[..., 1], p["vto"])
    # What is not held stays as it is to the last digit: a voltage that comes back rounded counts as held.
    at_drain = np.where(at_drain == over_drain, new[..., 0], at_drain + vds)
    out[..., 0] = np.where(source, at_source, at_drain)
    n_vt = p["n"] * p["vt"]
    vbs = limited(new[..., 2], old[..., 2], n_vt, critical_v(p["iss"], n_vt))
    over_body = vbs - vds
    vbd = limited(over_body, old[..., 2] - old[..., 1], n_vt, critical_v(p["isd"], n_vt))
    out[..., 2] = vbs
    out[..., 1] = np.where(vbd == over_body, vds, vbs - vbd)
    return out


def _threshold(p: Mapping[str, FloatArray], vb: FloatArray) -> tuple[FloatArray, FloatArray]:
    """VTH [V] at a body bias over the source, and its derivative; forward bias goes on as the tangent, down to 0."""
    root = np.sqrt(p["phi"])
    inside = np.sqrt(np.maximum(p["phi"] - np.minimum(vb, 0.0), 1e-12))
    tangent = np.maximum(root - 0.5 * vb / root, 0.0)
    arg = np.where(vb <= 0.0, inside, tangent)
    slope = np.where(vb <= 0.0, -0.5 / inside, np.where(tangent > 0.0, -0.5 / root, 0.0))
    return p["vto"] + p["gamma"] * (arg - root), p["gamma"] * slope


def core(p: Mapping[str, FloatArray], vgs: FloatArray, vds: FloatArray, vbs: FloatArray) -> Core:
    """Currents and derivatives at (S, n) [V]; drain and source change places where VDS < 0."""
    forward = vds >= 0.0
    x = np.abs(vds)
    vg, vb = np.where(forward, vgs, vgs - vds), np.where(forward, vbs, vbs - vds)
    vth, vth_vb = _threshold(p, vb)
    over = vg - vth
    vov, fade = np.maximum(over, 0.0), np.ones_like(over)
    n_vt = p["weak"] * p["vt"]
    below = (over < n_vt) & (n_vt > 0.0)
    knee = np.where(below, n_vt, 1.0)
    if np.any(below):
        # The law at VOV = n VT, fading as the exponential below.
        vov = np.where(below, knee, vov)
        fade = np.exp(np.where(below, over / knee - 1.0, 0.0))
    beta = p["kp"] * p["w"] / p["l"]
    u = np.minimum(x, vov)
    early = 1.0 + p["lambda"] * x
    shape = u * (vov - 0.5 * u)
    # d shape/d vov: in the ohmic region u = VDS, beyond pinch-off u = VOV; both give u.
    i = beta * early * shape * fade
    i_g = beta * early * u
    i_x = beta * (p["lambda"] * shape + early * np.where(x < vov, vov - u, 0.0)) * fade
    i_g = np.where(below, i / knee, i_g)
    i_b = -i_g * vth_vb
    n_vt = p["n"] * p["vt"]
    e_d, de_d = exponential((vbs - vds) / n_vt)
    e_s, de_s = exponential(vbs / n_vt)
    return Core(
        i_d=np.where(forward, i, -i),
        d_vgs=np.where(forward, i_g, -i_g),
        d_vds=np.where(forward, i_x, i_g + i_b + i_x),
        d_vbs=np.where(forward, i_b, -i_b),
        vth=vth,
        i_bd=p["isd"] * (e_d - 1.0),
        g_bd=p["isd"] * de_d / n_vt,
        i_bs=p["iss"] * (e_s - 1.0),
        g_bs=p["iss"] * de_s / n_vt,
    )


def evaluate(
    p: Mapping[str, FloatArray], polarity: FloatArray, v: FloatArray, at: FloatArray, gmin: float
) -> Evaluation:
    """Currents and conductances, linearised at voltages `at` (S, n, 3), taken to terminals `v` (S, n, 6)."""
    k = core(p, at[..., 0], at[..., 1], at[..., 2])
    now = junctions(v, polarity)
    d = now - at
    vbd, d_bd = now[..., 2] - now[..., 1], d[..., 2] - d[..., 1]
    channel = k.i_d + k.d_vgs * d[..., 0] + k.d_vds * d[..., 1] + k.d_vbs * d[..., 2] + gmin * now[..., 1]
    i_bd = k.i_bd + k.g_bd * d_bd + gmin * vbd
    i_bs = k.i_bs + k.g_bs * d[..., 2] + gmin * now[..., 2]
    i = np.zeros((*channel.shape, TERMINALS))
    i[..., DI] = polarity * (channel - i_bd)
    i[..., B] = polarity * (i_bd + i_bs)
    i[..., SI] = -polarity * (channel + i_bs)
    g = np.zeros((*channel.shape, TERMINALS, TERMINALS))
    for row, sign in ((DI, 1.0), (SI, -1.0)):
        for column, y in ((G, k.d_vgs), (DI, k.d_vds + gmin), (B, k.d_vbs)):
            g[..., row, column] += sign * y
            g[..., row, SI] -= sign * y
    stamp(g, B, DI, k.g_bd + gmin)
    stamp(g, B, SI, k.g_bs + gmin)
    lead(i, g, v, (D, DI), conductance(p["rd"]))
    lead(i, g, v, (S, SI), conductance(p["rs"]))
    return Evaluation(i=i, g=g)


def _meyer(p: Mapping[str, FloatArray], vov: FloatArray, x: FloatArray) -> tuple[FloatArray, FloatArray, FloatArray]:
    """Oxide capacitance gate to source end, to drain end and to body [F] at overdrive (of either sign) and |VDS|."""
    cox, phi = p["cox"], p["phi"]
    on = np.maximum(vov, 0.0)
    u = np.minimum(x, on)
    wide = np.maximum(2.0 * on - u, 1e-12)
    on_s = cox / 1.5 * (1.0 - ((on - u) / wide) ** 2)
    on_d = cox / 1.5 * (1.0 - (on / wide) ** 2)
    under_s = cox / 1.5 * np.clip(1.0 + 2.0 * vov / phi, 0.0, 1.0)
    under_b = cox * np.clip(-vov / phi, 0.0, 1.0)
    above = vov > 0.0
    return np.where(above, on_s, under_s), np.where(above, on_d, 0.0), np.where(above, 0.0, under_b)


def _capacitances(
    p: Mapping[str, FloatArray], at: FloatArray
) -> tuple[FloatArray, FloatArray, FloatArray, FloatArray, FloatArray]:
    """cgs, cgd, cgb, cbd, cbs [F]: Meyer's and the overlaps, and the depletion of the body diodes."""
    k = core(p, at[..., 0], at[..., 1], at[..., 2])
    forward = at[..., 1] >= 0.0
    vg = np.where(forward, at[..., 0], at[..., 0] - at[..., 1])
    near, far, body = _meyer(p, vg - k.vth, np.abs(at[..., 1]))
    vbd, vbs = at[..., 2] - at[..., 1], at[..., 2]
    cbd, cbs = (depletion(v, p[name], p["pb"], p["mj"], p["fc"]) for v, name in ((vbd, "cbd"), (vbs, "cbs")))
    if np.any(p["cbdsw"]) or np.any(p["cbssw"]):
        cbd = cbd + depletion(vbd, p["cbdsw"], p["pb"], p["mjsw"], p["fc"])
        cbs = cbs + depletion(vbs, p["cbssw"], p["pb"], p["mjsw"], p["fc"])
    return (
        np.where(forward, near, far) + p["cgso"] * p["w"],
        np.where(forward, far, near) + p["cgdo"] * p["w"],
        body + p["cgbo"] * p["l"],
        cbd,
        cbs,
    )


def capacitance(p: Mapping[str, FloatArray], polarity: FloatArray, v: FloatArray) -> FloatArray:
    """Capacitance matrix, float64 (S, n, 6, 6) [F], at terminal voltages `v`."""
    values = _capacitances(p, junctions(v, polarity))
    c = np.zeros((*values[0].shape, TERMINALS, TERMINALS))
    for (a, b), value in zip(((G, SI), (G, DI), (G, B), (B, DI), (B, SI)), values, strict=True):
        stamp(c, a, b, value)
    return c


def without_gm(g: FloatArray, gm: FloatArray) -> FloatArray:
    """The conductance matrix (S, n, 6, 6) with the controlled current gm vgs taken out; `gm` (S, n) [S]."""
    return take_gm_out(g, gm, DI, G, SI)


def small_signal(p: Mapping[str, FloatArray], polarity: FloatArray, v: FloatArray) -> dict[str, FloatArray]:
    """Intrinsic gm = dID/dVGS at VDS, g_pi = 0, g_o = dID/dVDS at VGS [S], c = all gate capacitance [F]."""
    at = junctions(v, polarity)
    k = core(p, at[..., 0], at[..., 1], at[..., 2])
    cgs, cgd, cgb, _, _ = _capacitances(p, at)
    return {"gm": k.d_vgs, "g_pi": np.zeros_like(k.d_vgs), "g_o": k.d_vds, "c": cgs + cgd + cgb}


def figures(p: Mapping[str, FloatArray], polarity: FloatArray, v: FloatArray) -> dict[str, FloatArray]:
    """id_a, ig_a, is_a [A] into the terminals (source and body together), vds_v, vgs_v [V] at the outer terminals times
    the polarity, power_w [W]; vov_v and channel_v [V]: overdrive, and |VDS| of the channel itself; body_a [A]: the
    larger forward current of the body diodes; each (S, n)."""
    at = junctions(v, polarity)
    k = core(p, at[..., 0], at[..., 1], at[..., 2])
    d, g, s, b = v[..., D], v[..., G], v[..., S], v[..., B]
    i_d, i_b = polarity * (k.i_d - k.i_bd), polarity * (k.i_bd + k.i_bs)
    forward = at[..., 1] >= 0.0
    return {
        "id_a": i_d,
        "ig_a": np.where(np.isfinite(i_d), 0.0, np.nan),
        "is_a": -i_d,
        "vds_v": polarity * (d - s),
        "vgs_v": polarity * (g - s),
        "power_w": i_d * (d - s) + i_b * (b - s),
        "vov_v": np.where(forward, at[..., 0], at[..., 0] - at[..., 1]) - k.vth,
        "channel_v": np.abs(at[..., 1]),
        "body_a": np.maximum(k.i_bd, k.i_bs),
    }
