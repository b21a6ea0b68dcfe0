"""Field-effect transistors once more, written afresh from the textbook equations, for mpmath numbers and its
derivatives. Nothing here imports the program.

Source of the equations: Shichman and Hodges, IEEE J. Solid-State Circuits SC-3(3):285-289 (1968); body effect, doping
tail, Meyer's charges and temperature laws as in the guides of the SPICE 2G6 and 3F5 programs (all from memory).
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import mpmath as mp

from tests.bench import JFET, MOSFET, both_diodes

Num = Any
K_OVER_Q = mp.mpf("1.380649e-23") / mp.mpf("1.602176634e-19")


def _gap(t: Num) -> Num:
    return mp.mpf("1.16") - mp.mpf("7.02e-4") * t * t / (t + 1108)


def _potential(v: Num, t: Num, t0: Num) -> Num:
    return v * t / t0 - 3 * K_OVER_Q * t * mp.log(t / t0) - _gap(t0) * t / t0 + _gap(t)


@dataclass
class Flow:
    """Currents into drain, gate and body, out of the source; `outer`: the given voltages plus the drops in the leads.
    All counted as in an N channel."""

    id: Num
    ig: Num
    ib: Num
    out: Num
    outer: tuple[Num, ...]


class Jfet:
    """Junction FET: currents into drain and gate as functions of the inner vgs and vgd; N channel."""

    def __init__(self, given: dict[str, float], t_c: float = 27.0) -> None:
        p = {k: mp.mpf(v) for k, v in {**JFET, **{n.rstrip("_"): x for n, x in given.items()}}.items()}
        t, t0 = mp.mpf(t_c) + mp.mpf("273.15"), mp.mpf(27) + mp.mpf("273.15")
        self.vt = K_OVER_Q * t
        vt0 = K_OVER_Q * t0
        pb = p["pb"]
        p["vto"] += p["vtotc"] * (t - t0)
        p["beta"] *= mp.mpf("1.01") ** (p["betatce"] * (t - t0))
        p["is"] *= (t / t0) ** (p["xti"] / p["n"]) * mp.exp(p["eg"] / p["n"] * (1 / vt0 - 1 / self.vt))
        p["isr"] *= (t / t0) ** (p["xti"] / p["nr"]) * mp.exp(p["eg"] / p["nr"] * (1 / vt0 - 1 / self.vt))
        p["pb"] = _potential(pb, t, t0)
        for name in ("cgs", "cgd"):
            p[name] *= 1 + p["m"] * (mp.mpf("4e-4") * (t - t0) + 1 - p["pb"] / pb)
        self.p = p

    def channel(self, vgs: Num, vgd: Num) -> Num:
        """Current from drain to source."""
        if vgs < vgd:
            return -self.channel(vgd, vgs)
        p = self.p
        over, vds = vgs - p["vto"], vgs - vgd
        if over <= 0:
            return mp.mpf(0)
        tail = (1 - p["b"]) / (p["pb"] - p["vto"])
        if vds < over:
            shape = vds * (vds * (tail * vds - p["b"]) + over * (2 * p["b"] + 3 * tail * (over - vds)))
        else:
            shape = over**2 * (p["b"] + tail * over)
        return p["beta"] * (1 + p["lambda"] * vds) * shape

    def gate(self, v: Num) -> Num:
        """Current of one gate junction: diffusion, recombination, breakdown."""
        p = self.p
        recombined = (
            p["isr"] * mp.expm1(v / (p["nr"] * self.vt)) * ((1 - v / p["pb"]) ** 2 + mp.mpf("0.005")) ** (p["m"] / 2)
        )
        broken = p["ibv"] * mp.exp(-(v + p["bv"]) / (p["nbv"] * self.vt)) if mp.isfinite(p["bv"]) else 0
        return p["is"] * mp.expm1(v / (p["n"] * self.vt)) + recombined - broken

    def ionised(self, vgs: Num, vgd: Num) -> Num:
        """Current that the channel's carriers set free between the gate and the end that acts as drain."""
        p = self.p
        over, vds = max(vgs, vgd) - p["vto"], abs(vgs - vgd)
        w = vds - over
        if over <= 0 or w <= 0:
            return mp.mpf(0)
        return abs(self.channel(vgs, vgd)) * p["alpha"] * w * mp.exp(-p["vk"] / w)

    def terminal(self, vgs: Num, vgd: Num) -> tuple[Num, Num]:
        """(drain, gate) current into the inner device."""
        ion = self.ionised(vgs, vgd)
        drain = self.channel(vgs, vgd) - self.gate(vgd) + (ion if vgs >= vgd else 0)
        return drain, self.gate(vgs) + self.gate(vgd) - ion

    def at(self, vgs: Num, vgd: Num) -> Flow:
        """Terminal quantities; outer gate-source and gate-drain voltage."""
        drain, gate = self.terminal(vgs, vgd)
        outer = (vgs + self.p["rs"] * (drain + gate), vgd - self.p["rd"] * drain)
        return Flow(id=drain, ig=gate, ib=mp.mpf(0), out=drain + gate, outer=outer)


class Mosfet:
    """Level-1 MOSFET: currents into inner drain and body as functions of vgs, vds, vbs; N channel."""

    def __init__(self, given: dict[str, float], t_c: float = 27.0) -> None:
        p = {k: mp.mpf(v) for k, v in {**MOSFET, **{n.rstrip("_"): x for n, x in both_diodes(given).items()}}.items()}
        t, t0 = mp.mpf(t_c) + mp.mpf("273.15"), mp.mpf(27) + mp.mpf("273.15")
        self.vt = K_OVER_Q * t
        phi, pb = p["phi"], p["pb"]
        flat_band = p["vto"] - p["gamma"] * mp.sqrt(phi)
        p["phi"], p["pb"] = _potential(phi, t, t0), _potential(pb, t, t0)
        flat_band += p["channel"] * (_gap(t0) - _gap(t)) / 2 + (p["phi"] - phi) / 2
        p["vto"] = flat_band + p["gamma"] * mp.sqrt(p["phi"])
        p["kp"] /= (t / t0) ** mp.mpf("1.5")
        for name in ("isd", "iss"):
            p[name] *= mp.exp((_gap(t0) / (K_OVER_Q * t0) - _gap(t) / self.vt) / p["n"])
        for name in ("cbd", "cbs"):
            p[name] *= 1 + p["mj"] * (mp.mpf("4e-4") * (t - t0) + 1 - p["pb"] / pb)
        self.p = p

    def threshold(self, vbs: Num) -> Num:
        """Threshold at a body bias."""
        p = self.p
        root = mp.sqrt(p["phi"])
        arg = mp.sqrt(p["phi"] - vbs) if vbs <= 0 else max(root - vbs / (2 * root), mp.mpf(0))
        return p["vto"] + p["gamma"] * (arg - root)

    def channel(self, vgs: Num, vds: Num, vbs: Num) -> Num:
        """Current from drain to source."""
        if vds < 0:
            return -self.channel(vgs - vds, -vds, vbs - vds)
        p = self.p
        over, fade = vgs - self.threshold(vbs), mp.mpf(1)
        knee = p["weak"] * self.vt
        if knee > 0 and over < knee:
            over, fade = knee, mp.exp((over - knee) / knee)
        elif over <= 0:
            return mp.mpf(0)
        shape = vds * (over - vds / 2) if vds < over else over**2 / 2
        return p["kp"] * p["w"] / p["l"] * (1 + p["lambda"] * vds) * shape * fade

    def diode(self, v: Num, end: str) -> Num:
        """Current of the body diode at drain (`d`) or source (`s`)."""
        return self.p[f"is{end}"] * mp.expm1(v / (self.p["n"] * self.vt))

    def terminal(self, vgs: Num, vds: Num, vbs: Num) -> tuple[Num, Num]:
        """(drain, body) current into the inner device."""
        drain, source = self.diode(vbs - vds, "d"), self.diode(vbs, "s")
        return self.channel(vgs, vds, vbs) - drain, drain + source

    def at(self, vgs: Num, vds: Num, vbs: Num) -> Flow:
        """Terminal quantities; outer gate-source, drain-source and body-source voltage."""
        drain, body = self.terminal(vgs, vds, vbs)
        out = drain + body
        drop = self.p["rs"] * out
        outer = (vgs + drop, vds + drop + self.p["rd"] * drain, vbs + drop)
        return Flow(id=drain, ig=mp.mpf(0), ib=body, out=out, outer=outer)
