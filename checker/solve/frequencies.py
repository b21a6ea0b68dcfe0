"""The complex angular frequency of sinusoids."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray


def angular(f_hz: NDArray[np.float64]) -> NDArray[np.complex128]:
    """j 2 pi f [1/s] of frequencies [Hz], complex128, same shape."""
    return np.asarray(2j * np.pi * f_hz, dtype=np.complex128)
