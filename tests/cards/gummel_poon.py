"""The Gummel-Poon equations at 27 degC, written out for the tests alone: no code shared with the program.

Reference: G. Massobrio, P. Antognetti, Semiconductor Device Modeling with SPICE, 2nd edition, chapter 2 (from
memory). NPN polarity; ideality factors of the models under test are 1.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
from scipy.optimize import brentq

VT = 1.380649e-23 * 300.15 / 1.602176634e-19
Model = Mapping[str, float]


def currents(m: Model, vbe: float, vbc: float) -> tuple[float, float]:
    """IC and IB of the junction voltages inside the terminal resistances."""
    forward = m["is"] * np.expm1(vbe / VT)
    reverse = m["is"] * np.expm1(vbc / VT)
    q1 = 1.0 / (1.0 - vbc / m["vaf"])
    qb = q1 / 2.0 * (1.0 + np.sqrt(1.0 + 4.0 * forward / m["ikf"]))
    leakage = m["ise"] * np.expm1(vbe / (m["ne"] * VT))
    ic = (forward - reverse) / qb - reverse / m["br"]
    return ic, forward / m["bf"] + leakage + reverse / m["br"]


@dataclass(frozen=True, slots=True, kw_only=True)
class Point:
    """A solved bias point: currents, junction voltages and terminal VBE."""

    ic: float
    ib: float
    vbe: float
    junction_be: float
    junction_bc: float


def active(m: Model, ic: float, vce: float) -> Point:
    """The point at collector current `ic` and terminal `vce`."""

    def junctions(vbe: float) -> float:
        inner_vce = vce - ic * m["rc"] - ic * m["re"]
        return vbe - inner_vce

    def excess(vbe: float) -> float:
        return float(np.log(max(currents(m, vbe, junctions(vbe))[0], 1e-300) / ic))

    vbe = float(brentq(excess, 0.1, 1.3, xtol=1e-13))
    _, ib = currents(m, vbe, junctions(vbe))
    terminal = vbe + ib * m["rb"] + (ic + ib) * m["re"]
    return Point(ic=ic, ib=ib, vbe=terminal, junction_be=vbe, junction_bc=junctions(vbe))


def saturation_voltage(m: Model, ic: float, ib: float) -> float:
    """Terminal VCE with both currents forced."""

    def reverse_of(vbe: float) -> float:
        """VBC at which the base current is `ib`: what the forward part leaves goes through BR."""
        left = ib - currents(m, vbe, 0.0)[1]
        return float(VT * np.log1p(m["br"] * left / m["is"]))

    full = brentq(lambda v: currents(m, v, 0.0)[1] - ib, 0.1, 1.5, xtol=1e-14)
    vbe = brentq(lambda v: currents(m, v, reverse_of(v))[0] - ic, full - 0.2, full, xtol=1e-14)
    return float(vbe - reverse_of(vbe) + ic * m["rc"] + (ic + ib) * m["re"])


def depletion(c0: float, v: float, vj: float, grading: float) -> float:
    """Junction capacitance, continued as a straight line above half the potential."""
    if v < 0.5 * vj:
        return float(c0 / (1.0 - v / vj) ** grading)
    at_half = c0 / 0.5**grading
    return float(at_half * (1.0 + grading * (v - 0.5 * vj) / (0.5 * vj)))


def transition_frequency(m: Model, ic: float, vce: float) -> float:
    """gm / (2 pi (Cpi + Cmu)) by central differences of current and diffusion charge."""
    point = active(m, ic, vce)
    vbe, vbc, step = point.junction_be, point.junction_bc, 1e-5
    gm = (currents(m, vbe + step, vbc)[0] - currents(m, vbe - step, vbc)[0]) / (2 * step)

    def charge(v: float) -> float:
        return m["tf"] * (currents(m, v, vbc)[0] + m["is"] * np.expm1(vbc / VT) / m["br"])

    diffusion = (charge(vbe + step) - charge(vbe - step)) / (2 * step)
    cpi = diffusion + depletion(m["cje"], vbe, m["vje"], m["mje"])
    cmu = depletion(m["cjc"], vbc, m["vjc"], m["mjc"])
    return float(gm / (2.0 * np.pi * (cpi + cmu)))
