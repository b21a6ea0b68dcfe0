"""Operational amplifier: open-loop gain with one pole, outputs that stop short of the supplies, output resistance.

Terminals: non-inverting input, inverting input, output, positive supply, negative supply, inner output (behind ROUT).
Inputs draw nothing. The load's current is drawn from the supply pin it comes from. No offset, noise, slew or second
pole.

Symbol, variable, meaning:
    vd      voltage between the inputs [V]
    F, f    inner output voltage [V] = mid + half s(x), with x = A vd/half and s(x) = x/sqrt(1 + x^2)
    mid, half   middle and half of the range that the output reaches, between V- + LOW and V+ - HIGH [V]
    w       current that the output sinks [A] = G (v_inner - F)

The pole at GBW/A is a capacitor on the inner output: G/(2 pi GBW/A). Source: the single-pole model of any textbook on
feedback amplifiers (common practice); s(x) is chosen for its smoothness alone.
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from typing import Final

import numpy as np

from checker.arrays import FloatArray
from checker.devices.evaluation import Evaluation

TERMINALS, OUTER = 6, 5
INNER = (("rout", 2, 5),)
"""Output resistance, outer terminal, inner terminal."""
PATHS = ((2, 5), (5, 3), (5, 4))
CONTROLS = ((0, 5), (1, 5))
TIED = ()
PLUS, MINUS, OUT, TOP, BOTTOM, INSIDE = range(6)
INNER_S: Final = 1.0
"""Conductance G behind the inner output [S]: its ohm stands outside the feedback's error only."""
LEAST_HALF_V: Final = 1e-3
"""Half range of an amplifier whose supplies leave none."""
BEND_A: Final = 1e-6
"""Current around zero over which sourcing goes over into sinking."""
MOST_STEP: Final = 2.0
"""Step of asinh(A vd) in one pass: a saturated amplifier comes back through its active region."""


def at_temperature(p: Mapping[str, FloatArray], _t_k: FloatArray, _tnom_k: FloatArray) -> dict[str, FloatArray]:
    """The parameters as they are: nothing is said of their temperature."""
    return dict(p)


def start(p: Mapping[str, FloatArray]) -> FloatArray:
    """Both inputs at one voltage, float64 (S, n, 1): the active region."""
    return np.zeros_like(p["gain"])[..., None]


def junctions(v: FloatArray, _polarity: FloatArray) -> FloatArray:
    """Voltage between the inputs, (S, n, 1), from terminal voltages (S, n, 6)."""
    return (v[..., PLUS] - v[..., MINUS])[..., None]


def limit(p: Mapping[str, FloatArray], new: FloatArray, old: FloatArray) -> FloatArray:
    """The input voltage held to a step that the bend of the output can follow."""
    gain = p["gain"][..., None]
    before, wanted = np.arcsinh(gain * old), np.arcsinh(gain * new)
    far = np.abs(wanted - before) > MOST_STEP
    held = np.sinh(before + np.clip(wanted - before, -MOST_STEP, MOST_STEP)) / gain
    return np.where(far, held, new)


def evaluate(
    p: Mapping[str, FloatArray], _polarity: FloatArray, v: FloatArray, at: FloatArray, _gmin: float
) -> Evaluation:
    """Currents (S, n, 6) and conductances, linearised at the input voltage `at`, taken to terminals `v`."""
    i = np.zeros_like(v)
    g = np.zeros((*v.shape, TERMINALS))
    f, f_vd, f_top, f_bottom = _output(p, v, at[..., 0])
    f = f + f_vd * (v[..., PLUS] - v[..., MINUS] - at[..., 0])
    w = INNER_S * (v[..., INSIDE] - f)
    w_v = np.stack([-f_vd, f_vd, np.zeros_like(f), -f_top, -f_bottom, np.ones_like(f)], axis=-1) * INNER_S
    i[..., INSIDE] = w
    g[..., INSIDE, :] = w_v
    bend = np.hypot(w, BEND_A)
    for pin, sign in ((TOP, 1.0), (BOTTOM, -1.0)):
        i[..., pin] = 0.5 * (sign * bend - w)
        g[..., pin, :] = 0.5 * (sign * w / bend - 1.0)[..., None] * w_v
    g_out = np.divide(1.0, p["rout"], out=np.zeros_like(p["rout"]), where=p["rout"] > 0.0)
    lead = g_out * (v[..., OUT] - v[..., INSIDE])
    for end, sign in ((OUT, 1.0), (INSIDE, -1.0)):
        i[..., end] += sign * lead
        g[..., end, OUT] += sign * g_out
        g[..., end, INSIDE] -= sign * g_out
    return Evaluation(i=i, g=g)


def _output(
    p: Mapping[str, FloatArray], v: FloatArray, vd: FloatArray
) -> tuple[FloatArray, FloatArray, FloatArray, FloatArray]:
    """F [V] at an input voltage, and its derivatives by that voltage and by both supplies."""
    top, bottom = v[..., TOP] - p["high"], v[..., BOTTOM] + p["low"]
    raw = 0.5 * (top - bottom)
    half = np.maximum(raw, LEAST_HALF_V)
    x = p["gain"] * vd / half
    root = np.sqrt(1.0 + x * x)
    by_half = np.where(raw > LEAST_HALF_V, 0.5 * (x / root) ** 3, 0.0)
    return 0.5 * (top + bottom) + half * x / root, p["gain"] / root**3, 0.5 + by_half, 0.5 - by_half


def capacitance(p: Mapping[str, FloatArray], _polarity: FloatArray, v: FloatArray) -> FloatArray:
    """Capacitance matrix (S, n, 6, 6) [F]: the pole, on the inner output."""
    c = np.zeros((*v.shape, TERMINALS))
    c[..., INSIDE, INSIDE] = INNER_S * p["gain"] / (2.0 * math.pi * p["gbw"])
    return c


def figures(p: Mapping[str, FloatArray], _polarity: FloatArray, v: FloatArray) -> dict[str, FloatArray]:
    """v_v: output to ground [V]; i_a: current that the output delivers [A]; power_w: what it dissipates between supply
    and output [W]; `swing`: -1..1, place of the output in its range (beyond 0.99 it rests at a limit); each (S, n)."""
    f, _, _, _ = _output(p, v, v[..., PLUS] - v[..., MINUS])
    half = np.maximum(0.5 * (v[..., TOP] - p["high"] - v[..., BOTTOM] - p["low"]), LEAST_HALF_V)
    middle = 0.5 * (v[..., TOP] - p["high"] + v[..., BOTTOM] + p["low"])
    i = INNER_S * (f - v[..., INSIDE])
    power = i * (np.where(i > 0.0, v[..., TOP], v[..., BOTTOM]) - v[..., OUT])
    return {"v_v": v[..., OUT], "i_a": i, "power_w": power, "swing": (f - middle) / half}
