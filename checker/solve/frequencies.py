"""The complex angular frequency of sinusoids."""

from __future__ import annotations

import numpy as np

from checker.arrays import ComplexArray, FloatArray


def angular(f_hz: FloatArray) -> ComplexArray:
    """j 2 pi f [1/s] of frequencies [Hz], complex128, same shape."""
    return np.asarray(2j * np.pi * f_hz, dtype=np.complex128)
