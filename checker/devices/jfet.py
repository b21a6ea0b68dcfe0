"""Junction field-effect transistor after Shichman and Hodges: square-law channel, two gate junctions, leads, charges.

Terminals: drain, gate, source, inner drain, inner source. Subthreshold conduction is not modelled; the law has its hard
corner at cut-off. Recombination in the gate junctions, their breakdown, and ionisation by the channel's carriers are
there where a model gives their figures.

Symbol, variable, meaning (all counted for an N channel; a P channel has its voltages and currents times -1):
    VTO, vto    cut-off voltage [V], negative for both polarities
    BETA, beta  ID = BETA VOV^2 (1 + LAMBDA VDS) in the active region [A/V^2];   LAMBDA, lambda  [1/V]
    B, b        doping tail, 1 for the plain square law
    ALPHA, VK   ionisation: ALPHA w exp(-VK/w) of the channel current flows on from drain to gate, w = VDS - VOV > 0
    BV, IBV     breakdown of a gate junction: IBV at -BV, NBV its ideality;   ISR, NR  recombination in it
    a_gs, a_gd  dID/dVGS at VGD, dID/dVGD at VGS [S]

Source: Shichman and Hodges, IEEE J. Solid-State Circuits SC-3(3):285-289 (1968); junction FET form, doping tail and
temperature laws after the guides of the SPICE 2G6 and 3F5 programs (all from memory).
"""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np

from checker.arrays import BoolArray, FloatArray
from checker.devices.channel import conductance, lead, limited_gate, stamp, take_gm_out
from checker.devices.evaluation import Evaluation
from checker.devices.junction import (
    breakdown,
    capacitance_at,
    critical_v,
    depletion,
    exponential,
    limited,
    limited_in_breakdown,
    potential_at,
    recombination,
    saturation_ratio,
    thermal_v,
)
from checker.shape import frozen

TERMINALS, OUTER = 5, 3
INNER = (("rd", 0, 3), ("rs", 2, 4))
D, G, S, DI, SI = range(5)
PATHS = ((D, DI), (S, SI), (DI, SI), (G, SI), (G, DI))
CONTROLS = ()
TIED = ()
FIGURES = ("id_a", "ig_a", "is_a", "vds_v", "vgs_v", "power_w")


@frozen
class Core:
    """Channel and gate currents at (vgs, vgd), each float64 (S, n): `i_d` [A], its derivatives `a_gs`, `a_gd` [S];
    gate junctions `i_gs`, `i_gd` [A] with `g_gs`, `g_gd` [S]; ionisation's current out of the gate `i_ion` [A] with
    `ion_gs`, `ion_gd` [S], from the drain where `forward`, else from the source."""

    i_d: FloatArray
    a_gs: FloatArray
    a_gd: FloatArray
    i_gs: FloatArray
    g_gs: FloatArray
    i_gd: FloatArray
    g_gd: FloatArray
    i_ion: FloatArray
    ion_gs: FloatArray
    ion_gd: FloatArray
    forward: BoolArray


def at_temperature(p: Mapping[str, FloatArray], t_k: FloatArray, tnom_k: FloatArray) -> dict[str, FloatArray]:
    """Parameters (S, n) moved to the device temperatures `t_k` (S, n) [K]; adds `vt`."""
    q = dict(p)
    q["vt"] = thermal_v(t_k)
    q["vto"] = p["vto"] + p["vtotc"] * (t_k - tnom_k)
    q["beta"] = p["beta"] * 1.01 ** (p["betatce"] * (t_k - tnom_k))
    q["is"] = p["is"] * saturation_ratio(p["eg"] / p["n"], p["xti"] / p["n"], t_k, tnom_k)
    q["isr"] = p["isr"] * saturation_ratio(p["eg"] / p["nr"], p["xti"] / p["nr"], t_k, tnom_k)
    q["pb"] = potential_at(p["pb"], t_k, tnom_k)
    for name in ("cgs", "cgd"):
        q[name] = capacitance_at(p[name], p["m"], p["pb"], q["pb"], t_k, tnom_k)
    return q


def start(p: Mapping[str, FloatArray]) -> FloatArray:
    """First (vgs, vgd), float64 (S, n, 2): half open, in the active region."""
    return np.stack([0.5 * p["vto"], p["vto"] - 1.0], axis=-1)


def ends(p: Mapping[str, FloatArray]) -> tuple[FloatArray, FloatArray]:
    """(vgs, vgd), each (S, n, 2), of a channel fully open, and of one that is pinched off."""
    none = np.zeros_like(p["vto"])
    return np.stack([none, none - 0.1], axis=-1), np.stack([p["vto"] - 1.0, p["vto"] - 1.0], axis=-1)


def junctions(v: FloatArray, polarity: FloatArray) -> FloatArray:
    """(vgs, vgd), float64 (S, n, 2), from terminal voltages (S, n, 5)."""
    return np.stack([polarity * (v[..., G] - v[..., SI]), polarity * (v[..., G] - v[..., DI])], axis=-1)


def limit(p: Mapping[str, FloatArray], new: FloatArray, old: FloatArray) -> FloatArray:
    """Both gate voltages held to a step that exponential and square law can follow."""
    n_vt = p["n"] * p["vt"]
    crit = critical_v(p["is"], n_vt)
    out = np.empty_like(new)
    for j in (0, 1):
        held = limited_gate(limited(new[..., j], old[..., j], n_vt, crit), old[..., j], p["vto"])
        out[..., j] = limited_in_breakdown(new[..., j], old[..., j], held, p["bv"], p["nbv"] * p["vt"])
    return out


def _law(p: Mapping[str, FloatArray], vg: FloatArray, x: FloatArray) -> tuple[FloatArray, FloatArray, FloatArray]:
    """ID [A] at gate voltage `vg` over the more negative end and x = |VDS| [V], with its two derivatives [S]."""
    vov = np.maximum(vg - p["vto"], 0.0)
    b, tail = p["b"], (1.0 - p["b"]) / (p["pb"] - p["vto"])
    u = np.minimum(x, vov)
    # Beyond pinch-off the law stands still in VDS: with u = min(VDS, VOV) one form serves both regions.
    shape = u * (u * (tail * u - b) + vov * (2.0 * b + 3.0 * tail * (vov - u)))
    d_vov = u * (2.0 * b + 6.0 * tail * vov - 3.0 * tail * u)
    d_u = 3.0 * tail * u**2 - 2.0 * b * u + vov * (2.0 * b + 3.0 * tail * vov) - 6.0 * tail * vov * u
    ohmic = x < vov
    d_vov = np.where(ohmic, d_vov, d_vov + d_u)
    early = 1.0 + p["lambda"] * x
    d_x = p["lambda"] * shape + np.where(ohmic, early * d_u, 0.0)
    return p["beta"] * early * shape, p["beta"] * early * d_vov, p["beta"] * d_x


def _gate(p: Mapping[str, FloatArray], v: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Current [A] and conductance [S] of one gate junction at its voltage [V]."""
    n_vt = p["n"] * p["vt"]
    e, de = exponential(v / n_vt)
    i, g = p["is"] * (e - 1.0), p["is"] * de / n_vt
    if np.any(p["isr"]):
        i_r, g_r = recombination(v, p["isr"], p["nr"] * p["vt"], p["pb"], p["m"])
        i, g = i + i_r, g + g_r
    if np.any(np.isfinite(p["bv"])):
        i_b, g_b = breakdown(v, p["bv"], p["ibv"], p["nbv"] * p["vt"])
        i, g = i + i_b, g + g_b
    return i, g


def _ionised(
    p: Mapping[str, FloatArray], vg: FloatArray, x: FloatArray, law: tuple[FloatArray, FloatArray, FloatArray]
) -> tuple[FloatArray, FloatArray, FloatArray]:
    """Ionisation's current [A] and its derivatives to `vg` and `x` [S], of the channel current `law` at them."""
    i, i_g, i_x = law
    if not np.any(p["alpha"]):
        none = np.zeros_like(i)
        return none, none, none
    beyond = x - np.maximum(vg - p["vto"], 0.0)
    inside = beyond > 0.0
    w = np.where(inside, beyond, 1.0)
    share = np.where(inside, p["alpha"] * w * np.exp(-p["vk"] / w), 0.0)
    steep = share * (1.0 + p["vk"] / w) / w
    return i * share, i_g * share - i * np.where(vg > p["vto"], steep, 0.0), i_x * share + i * steep


def core(p: Mapping[str, FloatArray], vgs: FloatArray, vgd: FloatArray) -> Core:
    """Currents and derivatives at gate voltages (S, n) [V]; drain and source change places where VDS < 0."""
    forward = vgs >= vgd
    vg, x = np.maximum(vgs, vgd), np.abs(vgs - vgd)
    law = _law(p, vg, x)
    i, i_g, i_x = law
    ion, ion_g, ion_x = _ionised(p, vg, x, law)
    i_gs, g_gs = _gate(p, vgs)
    i_gd, g_gd = _gate(p, vgd)
    return Core(
        i_d=np.where(forward, i, -i),
        a_gs=np.where(forward, i_g + i_x, i_x),
        a_gd=np.where(forward, -i_x, -i_g - i_x),
        i_gs=i_gs,
        g_gs=g_gs,
        i_gd=i_gd,
        g_gd=g_gd,
        i_ion=ion,
        ion_gs=np.where(forward, ion_g + ion_x, -ion_x),
        ion_gd=np.where(forward, -ion_x, ion_g + ion_x),
        forward=forward,
    )


def evaluate(
    p: Mapping[str, FloatArray], polarity: FloatArray, v: FloatArray, at: FloatArray, gmin: float
) -> Evaluation:
    """Currents and conductances, linearised at gate voltages `at` (S, n, 2), taken to terminals `v` (S, n, 5)."""
    k = core(p, at[..., 0], at[..., 1])
    now = junctions(v, polarity)
    d = now - at
    channel = k.i_d + k.a_gs * d[..., 0] + k.a_gd * d[..., 1]
    i_gs = k.i_gs + k.g_gs * d[..., 0] + gmin * now[..., 0]
    i_gd = k.i_gd + k.g_gd * d[..., 1] + gmin * now[..., 1]
    ion = k.i_ion + k.ion_gs * d[..., 0] + k.ion_gd * d[..., 1]
    i = np.zeros((*channel.shape, TERMINALS))
    i[..., DI] = polarity * (channel - i_gd + np.where(k.forward, ion, 0.0))
    i[..., G] = polarity * (i_gs + i_gd - ion)
    i[..., SI] = -polarity * (channel + i_gs - np.where(k.forward, 0.0, ion))
    g = np.zeros((*channel.shape, TERMINALS, TERMINALS))
    from_drain, from_source = np.where(k.forward, 1.0, 0.0), np.where(k.forward, 0.0, 1.0)
    for row, sign, share in ((DI, 1.0, from_drain), (SI, -1.0, from_source), (G, 0.0, -1.0)):
        to_gs, to_gd = sign * k.a_gs + share * k.ion_gs, sign * k.a_gd + share * k.ion_gd
        g[..., row, G] += to_gs + to_gd
        g[..., row, SI] -= to_gs
        g[..., row, DI] -= to_gd
    stamp(g, G, SI, k.g_gs + gmin)
    stamp(g, G, DI, k.g_gd + gmin)
    lead(i, g, v, (D, DI), conductance(p["rd"]))
    lead(i, g, v, (S, SI), conductance(p["rs"]))
    return Evaluation(i=i, g=g)


def _capacitances(p: Mapping[str, FloatArray], at: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Depletion capacitance gate to source and gate to drain [F]."""
    cgs = depletion(at[..., 0], p["cgs"], p["pb"], p["m"], p["fc"])
    return cgs, depletion(at[..., 1], p["cgd"], p["pb"], p["m"], p["fc"])


def capacitance(p: Mapping[str, FloatArray], polarity: FloatArray, v: FloatArray) -> FloatArray:
    """Capacitance matrix, float64 (S, n, 5, 5) [F], at terminal voltages `v`."""
    cgs, cgd = _capacitances(p, junctions(v, polarity))
    c = np.zeros((*cgs.shape, TERMINALS, TERMINALS))
    stamp(c, G, SI, cgs)
    stamp(c, G, DI, cgd)
    return c


def without_gm(g: FloatArray, gm: FloatArray) -> FloatArray:
    """The conductance matrix (S, n, 5, 5) with the controlled current gm vgs taken out; `gm` (S, n) [S]."""
    return take_gm_out(g, gm, DI, G, SI)


def small_signal(p: Mapping[str, FloatArray], polarity: FloatArray, v: FloatArray) -> dict[str, FloatArray]:
    """Intrinsic gm = dID/dVGS at VDS, g_pi = dIG/dVGS, g_o = dID/dVDS at VGS [S], c = all gate capacitance [F]."""
    at = junctions(v, polarity)
    k = core(p, at[..., 0], at[..., 1])
    cgs, cgd = _capacitances(p, at)
    return {"gm": k.a_gs + k.a_gd, "g_pi": k.g_gs + k.g_gd, "g_o": -k.a_gd, "c": cgs + cgd}


def figures(p: Mapping[str, FloatArray], polarity: FloatArray, v: FloatArray) -> dict[str, FloatArray]:
    """id_a, ig_a, is_a [A] into the terminals, vds_v, vgs_v [V] at the outer terminals times the polarity, power_w [W];
    vov_v and channel_v [V]: overdrive, and |VDS| of the channel itself; body_a [A]: 0; each (S, n)."""
    at = junctions(v, polarity)
    k = core(p, at[..., 0], at[..., 1])
    d, g, s = v[..., D], v[..., G], v[..., S]
    i_d = polarity * (k.i_d - k.i_gd + np.where(k.forward, k.i_ion, 0.0))
    i_g = polarity * (k.i_gs + k.i_gd - k.i_ion)
    return {
        "id_a": i_d,
        "ig_a": i_g,
        "is_a": -(i_d + i_g),
        "vds_v": polarity * (d - s),
        "vgs_v": polarity * (g - s),
        "power_w": i_d * (d - s) + i_g * (g - s),
        "vov_v": np.maximum(at[..., 0], at[..., 1]) - p["vto"],
        "channel_v": np.abs(at[..., 0] - at[..., 1]),
        "body_a": np.zeros_like(i_d),
    }
