"""The devices once more, written afresh from the textbook equations, for floats and for mpmath numbers alike.

Nothing here imports the program. Currents are written as explicit functions of the two inner junction voltages; the
lead resistances then give the terminal voltages explicitly, so that a circuit's hand-written equations need no inner
nodes: its unknowns are node voltages and, for each device, its junction voltages.

Source of the equations: Antognetti and Massobrio, *Semiconductor Device Modeling with SPICE*, McGraw-Hill (1988),
chapters 1 and 2; Gummel and Poon, Bell Syst. Tech. J. 49(5):827-852 (1970) (both from memory).
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Any

import mpmath as mp

from tests.bench import BIPOLAR, DIODE

Num = Any
"""float, mpf or mpc."""
K_OVER_Q = mp.mpf("1.380649e-23") / mp.mpf("1.602176634e-19")


def _exp(x: Num) -> Num:
    return math.exp(min(x, 300.0)) if isinstance(x, float) else mp.exp(x)


def _sqrt(x: Num) -> Num:
    return math.sqrt(max(x, 0.0)) if isinstance(x, float) else mp.sqrt(x)


def _tan(x: Num) -> Num:
    return math.tan(x) if isinstance(x, float) else mp.tan(x)


def _full(defaults: dict[str, float], given: dict[str, float]) -> dict[str, Num]:
    p = {**defaults, **{k.rstrip("_"): v for k, v in given.items()}}
    if "rb" in given and "rbm" not in given:
        p["rbm"] = p["rb"]
    return {k: mp.mpf(v) for k, v in p.items()}


def _gap(t: Num) -> Num:
    return 1.16 - 7.02e-4 * t * t / (t + 1108.0)


def _moved_junction(cj: Num, vj: Num, m: Num, t: Num, t0: Num) -> tuple[Num, Num]:
    vt = K_OVER_Q * t
    new = vj * t / t0 - 3 * vt * mp.log(t / t0) - _gap(t0) * t / t0 + _gap(t)
    return cj * (1 + m * (4e-4 * (t - t0) + 1 - new / vj)), new


def depletion_charge(v: Num, cj: Num, vj: Num, m: Num, fc: Num) -> Num:
    """Integral of the depletion capacitance from zero, linear capacitance above fc vj."""
    if v < fc * vj:
        return cj * vj * (1 - (1 - v / vj) ** (1 - m)) / (1 - m)
    f1 = vj * (1 - (1 - fc) ** (1 - m)) / (1 - m)
    f2, f3 = (1 - fc) ** (1 + m), 1 - fc * (1 + m)
    return cj * (f1 + (f3 * (v - fc * vj) + m / (2 * vj) * (v * v - (fc * vj) ** 2)) / f2)


@dataclass
class Bias:
    """Currents into collector and base, out of the emitter; outer junction voltages; all counted as in an NPN."""

    ic: Num
    ib: Num
    ie: Num
    be: Num
    bc: Num


@dataclass
class Phasors:
    """As `Bias`, for the small signal: currents at the outer terminals, voltages between them."""

    ic: Num
    ib: Num
    ie: Num
    be: Num
    bc: Num


class Transistor:
    """One transistor at a temperature; all signs as in an NPN (a PNP's equations turn signs by hand)."""

    def __init__(self, given: dict[str, float], t_c: float = 27.0, tnom_c: float = 27.0) -> None:
        p = _full(dict(BIPOLAR), given)
        t, t0 = mp.mpf(t_c) + mp.mpf("273.15"), mp.mpf(tnom_c) + mp.mpf("273.15")
        self.vt_exact = K_OVER_Q * t
        grow = (t / t0) ** p["xti"] * mp.exp(p["eg"] / self.vt_exact * (t / t0 - 1))
        gain = (t / t0) ** p["xtb"]
        p["ise"] = p["ise"] / gain * grow ** (1 / mp.mpf(p["ne"]))
        p["isc"] = p["isc"] / gain * grow ** (1 / mp.mpf(p["nc"]))
        p["is"], p["bf"], p["br"] = p["is"] * grow, p["bf"] * gain, p["br"] * gain
        for c, v, m in (("cje", "vje", "mje"), ("cjc", "vjc", "mjc"), ("cjs", "vjs", "mjs")):
            p[c], p[v] = _moved_junction(p[c], p[v], p[m], t, t0)
        self.exact = p
        self.rough = {k: float(v) for k, v in p.items()}

    def _inner(self, vbe: Num, vbc: Num) -> tuple[Num, Num, Num, Num]:
        """Collector and base current, base charge, forward transport current."""
        rough = isinstance(vbe, float)
        p, vt = (self.rough, float(self.vt_exact)) if rough else (self.exact, self.vt_exact)
        fwd = p["is"] * (_exp(vbe / (p["nf"] * vt)) - 1)
        rev = p["is"] * (_exp(vbc / (p["nr"] * vt)) - 1)
        leak_e = p["ise"] * (_exp(vbe / (p["ne"] * vt)) - 1)
        leak_c = p["isc"] * (_exp(vbc / (p["nc"] * vt)) - 1)
        q1 = 1 / (1 - vbc / p["vaf"] - vbe / p["var"])
        q2 = fwd / p["ikf"] + rev / p["ikr"]
        qb = q1 / 2 * (1 + _sqrt(1 + 4 * q2))
        ic = (fwd - rev) / qb - rev / p["br"] - leak_c
        ib = fwd / p["bf"] + leak_e + rev / p["br"] + leak_c
        return ic, ib, qb, fwd

    def _rb(self, ib: Num, qb: Num) -> Num:
        p = self.rough if isinstance(ib, float) else self.exact
        if math.isinf(p["irb"]):
            return p["rbm"] + (p["rb"] - p["rbm"]) / qb
        if ib <= 0:
            return p["rb"]
        pi2 = mp.pi**2 if not isinstance(ib, float) else math.pi**2
        z = (_sqrt(1 + 144 * ib / (pi2 * p["irb"])) - 1) / (24 / pi2 * _sqrt(ib / p["irb"]))
        return p["rbm"] + 3 * (p["rb"] - p["rbm"]) * (_tan(z) - z) / (z * _tan(z) ** 2)

    def at(self, vbe: Num, vbc: Num) -> Bias:
        """Terminal quantities at inner junction voltages."""
        p = self.rough if isinstance(vbe, float) else self.exact
        ic, ib, qb, _ = self._inner(vbe, vbc)
        ie, drop_b = ic + ib, self._rb(ib, qb) * ib
        return Bias(ic=ic, ib=ib, ie=ie, be=vbe + drop_b + p["re"] * ie, bc=vbc + drop_b - p["rc"] * ic)

    def _q_be(self, vbe: Num, vbc: Num) -> Num:
        p = self.exact
        _, _, qb, fwd = self._inner(vbe, vbc)
        rise = mp.mpf(0)
        if p["xtf"] and fwd > 0:
            swell = 1 if math.isinf(p["vtf"]) else mp.exp(vbc / (mp.mpf("1.44") * p["vtf"]))
            rise = p["xtf"] * (fwd / (fwd + p["itf"])) ** 2 * swell
        return p["tf"] * (1 + rise) * fwd / qb + depletion_charge(vbe, p["cje"], p["vje"], p["mje"], p["fc"])

    def _q_bc(self, vbc: Num) -> Num:
        p = self.exact
        rev = p["is"] * (mp.exp(vbc / (p["nr"] * self.vt_exact)) - 1)
        return p["tr"] * rev + p["xcjc"] * depletion_charge(vbc, p["cjc"], p["vjc"], p["mjc"], p["fc"])

    def linear(self, vbe: Num, vbc: Num, v_collector: Num = 1) -> Linear:
        """Small-signal parameters by numerical differentiation at 30 digits.

        `v_collector`: outer collector voltage over the substrate, counted as in an NPN.
        """
        return Linear(self, mp.mpf(vbe), mp.mpf(vbc), mp.mpf(v_collector))


class Linear:
    """The transistor linearised at a bias."""

    def __init__(self, q: Transistor, vbe: Num, vbc: Num, v_collector: Num) -> None:
        p = q.exact
        be, bc = (1, 0), (0, 1)
        self.g_c = [mp.diff(lambda a, b: q._inner(a, b)[0], (vbe, vbc), n) for n in (be, bc)]
        self.g_b = [mp.diff(lambda a, b: q._inner(a, b)[1], (vbe, vbc), n) for n in (be, bc)]
        self.c_be = [mp.diff(q._q_be, (vbe, vbc), n) for n in (be, bc)]
        self.c_bc = mp.diff(q._q_bc, vbc)
        ic, ib, qb, _ = q._inner(vbe, vbc)
        self.rb, self.ib_dc = q._rb(ib, qb), ib
        self.drb = [mp.diff(lambda a, b: q._rb(q._inner(a, b)[1], q._inner(a, b)[2]), (vbe, vbc), n) for n in (be, bc)]
        self.rc, self.re = p["rc"], p["re"]
        v_outer = vbc + self.rb * ib
        self.c_bx = (1 - mp.mpf(p["xcjc"])) * mp.diff(
            lambda v: depletion_charge(v, p["cjc"], p["vjc"], p["mjc"], p["fc"]), v_outer
        )
        v_sub = -(v_collector - p["rc"] * ic)
        self.c_js = mp.mpf(0)
        if p["cjs"]:
            self.c_js = (
                p["cjs"] * (1 - v_sub / p["vjs"]) ** -p["mjs"]
                if v_sub < 0
                else p["cjs"] * (1 + p["mjs"] * v_sub / p["vjs"])
            )

    def at(self, s: Num, vb: Num, vbe: Num, vbc: Num) -> Phasors:
        """Terminal phasors for base phasor `vb` and inner junction phasors, at s = j omega."""
        i_b = self.g_b[0] * vbe + self.g_b[1] * vbc
        i_c = self.g_c[0] * vbe + self.g_c[1] * vbc
        j_be = s * (self.c_be[0] * vbe + self.c_be[1] * vbc)
        j_bc = s * self.c_bc * vbc
        lead_b = i_b + j_be + j_bc
        drop_b = self.rb * lead_b + self.ib_dc * (self.drb[0] * vbe + self.drb[1] * vbc)
        v_ci = vb - drop_b - vbc
        j_bx, j_cs = s * self.c_bx * (vb - v_ci), s * self.c_js * v_ci
        lead_c = i_c - j_bc - j_bx + j_cs
        lead_e = i_c + i_b + j_be
        return Phasors(
            ic=lead_c,
            ib=lead_b + j_bx,
            ie=lead_e,
            be=drop_b + vbe + self.re * lead_e,
            bc=drop_b + vbc - self.rc * lead_c,
        )


class Diode:
    """One diode at a temperature."""

    def __init__(self, given: dict[str, float], t_c: float = 27.0, tnom_c: float = 27.0) -> None:
        p = _full(dict(DIODE), given)
        t, t0 = mp.mpf(t_c) + mp.mpf("273.15"), mp.mpf(tnom_c) + mp.mpf("273.15")
        self.vt_exact = K_OVER_Q * t
        grow = (t / t0) ** p["xti"] * mp.exp(p["eg"] / self.vt_exact * (t / t0 - 1))
        p["is"], p["isr"] = p["is"] * grow ** (1 / mp.mpf(p["n"])), p["isr"] * grow ** (1 / mp.mpf(p["nr"]))
        p["cjo"], p["vj"] = _moved_junction(p["cjo"], p["vj"], p["m"], t, t0)
        p["bv"] = p["bv"] * (1 + p["tbv1"] * (t - t0))
        self.exact = p
        self.rough = {k: float(v) for k, v in p.items()}

    def current(self, vd: Num) -> Num:
        """Current at the inner junction voltage."""
        rough = isinstance(vd, float)
        p, vt = (self.rough, float(self.vt_exact)) if rough else (self.exact, self.vt_exact)
        ideal = p["is"] * (_exp(vd / (p["n"] * vt)) - 1)
        injected = ideal * _sqrt(p["ikf"] / (p["ikf"] + ideal)) if math.isfinite(p["ikf"]) and ideal > 0 else ideal
        generated = p["isr"] * (_exp(vd / (p["nr"] * vt)) - 1) * ((1 - vd / p["vj"]) ** 2 + 0.005) ** (p["m"] / 2)
        broken = p["ibv"] * _exp(-(vd + p["bv"]) / (p["nbv"] * vt)) if math.isfinite(p["bv"]) else 0
        return injected + generated - broken

    def outer(self, vd: Num) -> Num:
        """Voltage across the terminals."""
        p = self.rough if isinstance(vd, float) else self.exact
        return vd + p["rs"] * self.current(vd)

    def linear(self, vd: Num) -> DiodeLinear:
        """Small-signal admittance between the terminals, by numerical differentiation at 30 digits."""
        p = self.exact
        g = mp.diff(self.current, vd)
        c = p["tt"] * g + mp.diff(lambda v: depletion_charge(v, p["cjo"], p["vj"], p["m"], p["fc"]), vd)
        return DiodeLinear(g=g, c=c, rs=p["rs"])


@dataclass
class DiodeLinear:
    """A diode linearised at a bias."""

    g: Num
    c: Num
    rs: Num

    def admittance(self, s: Num) -> Num:
        """Between the terminals."""
        inner = self.g + s * self.c
        return inner / (1 + self.rs * inner)
