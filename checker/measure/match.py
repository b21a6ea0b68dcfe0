"""Return loss and mismatch loss of an impedance against a reference.

Return loss = -20 log10 |G|, positive (ECSS-S-ST-00-01 glossary: 10 log of incident over reflected power);
G = (Z - R)/(Z + R) for a real reference R. Mismatch loss = -10 log10(1 - |G|^2).
"""

from __future__ import annotations

import numpy as np

from checker.arrays import ComplexArray, FloatArray

PERFECT_DB = 200.0
"""A reflection under 1e-10 is printed as this."""


def reflection(z_ohm: ComplexArray, reference_ohm: float) -> ComplexArray:
    """Reflection coefficient of impedances [ohm], any shape, against a real reference [ohm]."""
    return np.asarray((z_ohm - reference_ohm) / (z_ohm + reference_ohm), dtype=complex)


def return_loss_db(z_ohm: ComplexArray, reference_ohm: float) -> FloatArray:
    """Return loss [dB], positive for a passive load; capped at `PERFECT_DB`."""
    gamma = np.maximum(np.abs(reflection(z_ohm, reference_ohm)), 10.0 ** (-PERFECT_DB / 20.0))
    return np.asarray(-20.0 * np.log10(gamma), dtype=float)


def mismatch_loss_db(z_ohm: ComplexArray, reference_ohm: float) -> FloatArray:
    """Power lost to reflection [dB]; nan where all of it, or more, comes back."""
    kept = 1.0 - np.abs(reflection(z_ohm, reference_ohm)) ** 2
    return np.asarray(-10.0 * np.log10(np.where(kept > 0.0, kept, np.nan)), dtype=float)
