"""Shared junction mathematics: exponential, depletion charge, temperature laws, voltage limiting.

Symbol, variable, meaning:
    VT, vt      kT/q [V]                     VJ, vj   built-in potential [V]
    IS, i_sat   saturation current [A]       MJ, mj   grading exponent
    EG, eg_ev   band gap [eV]                FC, fc   forward-bias depletion coefficient

Source of the model equations: Antognetti and Massobrio, *Semiconductor Device Modeling with SPICE*,
McGraw-Hill (1988), chapters 1 and 2 (from memory).
"""

from __future__ import annotations

import numpy as np

from checker.arrays import FloatArray
from checker.constants import BOLTZMANN_JPK, CHARGE_C

EXP_KNEE = 200.0
"""Above this exponent the curve goes on as its tangent, so that a wild Newton iterate stays finite."""


def thermal_v(temperature_k: FloatArray) -> FloatArray:
    """kT/q [V], same shape as the temperatures [K]."""
    return BOLTZMANN_JPK * temperature_k / CHARGE_C


def exponential(x: FloatArray) -> tuple[FloatArray, FloatArray]:
    """exp(x) and its derivative, continued as a straight line above `EXP_KNEE`."""
    e = np.exp(np.minimum(x, EXP_KNEE))
    return e * (1.0 + np.maximum(x - EXP_KNEE, 0.0)), e


def excess(x: FloatArray) -> tuple[FloatArray, FloatArray]:
    """exp(x) - 1 and its derivative, exact to the last digit at small x, continued like `exponential`."""
    e, slope = exponential(x)
    return np.where(x < 0.5, np.expm1(np.minimum(x, 0.5)), e - 1.0), slope


def depletion(v: FloatArray, cj: FloatArray, vj: FloatArray, mj: FloatArray, fc: FloatArray) -> FloatArray:
    """Depletion capacitance [F] at junction voltage `v` [V], linear continuation above FC*VJ."""
    limit = fc * vj
    under = np.minimum(v, limit)
    below = cj * (1.0 - under / vj) ** -mj
    above = cj * (1.0 - fc) ** (-1.0 - mj) * (1.0 - fc * (1.0 + mj) + mj * v / vj)
    return np.where(v < limit, below, above)


def band_gap_ev(temperature_k: FloatArray) -> FloatArray:
    """Silicon band gap [eV] at a temperature [K]: 1.16 - 7.02e-4 T^2/(T + 1108)."""
    return 1.16 - 7.02e-4 * temperature_k**2 / (temperature_k + 1108.0)


def potential_at(vj: FloatArray, t_k: FloatArray, tnom_k: FloatArray) -> FloatArray:
    """Built-in potential [V] moved from its nominal to another temperature."""
    ratio = t_k / tnom_k
    moved = vj * ratio - 3.0 * thermal_v(t_k) * np.log(ratio) - band_gap_ev(tnom_k) * ratio + band_gap_ev(t_k)
    return np.maximum(moved, 0.05)


def capacitance_at(
    cj: FloatArray, mj: FloatArray, vj: FloatArray, vj_t: FloatArray, t_k: FloatArray, tnom_k: FloatArray
) -> FloatArray:
    """Zero-bias depletion capacitance [F] at another temperature."""
    return cj * (1.0 + mj * (4e-4 * (t_k - tnom_k) + 1.0 - vj_t / vj))


def saturation_ratio(eg_ev: FloatArray, xti: FloatArray, t_k: FloatArray, tnom_k: FloatArray) -> FloatArray:
    """IS(T)/IS(Tnom) = (T/Tnom)^XTI exp(EG/VT (T/Tnom - 1))."""
    ratio = t_k / tnom_k
    power: FloatArray = ratio**xti * np.exp(eg_ev / thermal_v(t_k) * (ratio - 1.0))
    return power


def critical_v(i_sat: FloatArray, n_vt: FloatArray) -> FloatArray:
    """Junction voltage [V] of largest curvature: n VT ln(n VT / (sqrt 2 IS))."""
    return np.asarray(n_vt * np.log(n_vt / (np.sqrt(2.0) * np.maximum(i_sat, 1e-300))))


def limited(new: FloatArray, old: FloatArray, n_vt: FloatArray, crit: FloatArray) -> FloatArray:
    """A junction voltage step held to what the exponential can follow: logarithmic above `crit` [V].

    Reverse steps are let through; a forward step longer than 2 n VT above the critical voltage is replaced by the
    voltage at which the linearised current would flow. (Nagel, memo ERL-M520, UC Berkeley, 1975; from memory.)
    """
    step = new - old
    argument = 1.0 + step / n_vt
    forward = np.where(
        old > 0.0,
        np.where(argument > 0.0, old + n_vt * np.log(np.maximum(argument, 1e-12)), crit),
        n_vt * np.log(np.maximum(new / n_vt, 1e-12)),
    )
    return np.where((new > crit) & (np.abs(step) > 2.0 * n_vt), forward, new)


def recombination(
    v: FloatArray, isr: FloatArray, nr_vt: FloatArray, vj: FloatArray, mj: FloatArray
) -> tuple[FloatArray, FloatArray]:
    """Current [A] of recombination in the depletion layer, ISR (exp(v/(NR VT)) - 1) ((1 - v/VJ)^2 + 0.005)^(M/2), and
    its conductance [S]."""
    e, de = excess(v / nr_vt)
    depth = (1.0 - v / vj) ** 2 + 0.005
    grow = depth ** (mj / 2.0)
    d_grow = -mj * grow / depth * (1.0 - v / vj) / vj
    i = isr * e
    return i * grow, isr * de / nr_vt * grow + i * d_grow


def breakdown(v: FloatArray, bv: FloatArray, ibv: FloatArray, knee: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Current [A] of a junction in breakdown, -IBV exp(-(v + BV)/knee), and its conductance [S]."""
    e, de = exponential(-(v + bv) / knee)
    return -ibv * e, ibv * de / knee


def limited_in_breakdown(
    new: FloatArray, old: FloatArray, forward: FloatArray, bv: FloatArray, knee: FloatArray
) -> FloatArray:
    """`forward`, the step already held there, but beyond -BV a step that the exponential of breakdown can follow."""
    at = np.where(np.isfinite(bv), bv, 1e30)
    beyond = -(new + at)
    held = limited(beyond, -(old + at), knee, 10.0 * knee)
    # What is not held comes back to the last digit.
    return np.where(new < -at, np.where(held == beyond, new, -held - at), forward)
