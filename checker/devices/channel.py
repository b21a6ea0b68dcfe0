"""What junction FETs and MOSFETs share: stamps, and steps that a square law can follow.

Symbol, variable, meaning:
    vgs, vgd    gate to inner source, gate to inner drain [V], counted positive for an N channel
    VT0, vto    threshold [V];   vov = vgs - threshold, the overdrive [V]

Source of the limiting: Nagel, memo ERL-M520, UC Berkeley (1975), section on field-effect transistors (from memory).
"""

from __future__ import annotations

import numpy as np

from checker.arrays import FloatArray


def stamp(g: FloatArray, a: int, b: int, y: FloatArray) -> None:
    """Add a conductance between terminals `a` and `b` of the matrices `g` (S, n, k, k)."""
    g[..., a, a] += y
    g[..., b, b] += y
    g[..., a, b] -= y
    g[..., b, a] -= y


def conductance(r: FloatArray) -> FloatArray:
    """1/R [S]; 0 where R is 0: that lead has no inner node."""
    return np.where(r > 0.0, 1.0 / np.where(r > 0.0, r, 1.0), 0.0)


def lead(i: FloatArray, g: FloatArray, v: FloatArray, ends: tuple[int, int], y: FloatArray) -> None:
    """Add a lead conductance `y` [S] between an outer and an inner terminal: current and stamp."""
    outer, inner = ends
    drop = y * (v[..., outer] - v[..., inner])
    i[..., outer] += drop
    i[..., inner] -= drop
    stamp(g, outer, inner, y)


def take_gm_out(g: FloatArray, gm: FloatArray, drain: int, gate: int, source: int) -> FloatArray:
    """Conductance matrices (S, n, k, k) without the controlled current gm vgs; `gm` (S, n) [S]."""
    out = g.copy()
    for row, sign in ((drain, -1.0), (source, 1.0)):
        out[..., row, gate] += sign * gm
        out[..., row, source] -= sign * gm
    return out


def limited_gate(new: FloatArray, old: FloatArray, vto: FloatArray) -> FloatArray:
    """A gate voltage step held to what the square law can follow [V].

    Far above threshold the overdrive may triple or halve in one step; near it the step ends half a volt on the other
    side, so that the corner of the law is looked at before it is left behind.
    """
    over, far = old - vto, np.abs(old - vto)
    up = np.where(over >= 0.0, np.maximum(vto + 4.0, old + 2.0 * far + 2.0), np.maximum(vto + 0.5, old))
    down = np.where(
        over >= 3.5,
        np.maximum(vto + 2.0, old - far - 1.0),
        np.where(over >= 0.0, vto - 0.5, old - 2.0 * far - 2.0),
    )
    return np.clip(new, np.minimum(down, up), up)


def limited_drain(new: FloatArray, old: FloatArray) -> FloatArray:
    """A drain voltage step [V]: at most to three times the last value and 2 V, and not through zero in one leap."""
    size = 3.0 * np.abs(old) + 2.0
    low = np.where(old >= 3.5, np.minimum(2.0, old), np.where(old >= 0.0, -0.5, old - size))
    high = np.where(old >= 0.0, old + size, np.where(old <= -3.5, np.maximum(-2.0, old), 0.5))
    return np.clip(new, low, high)
