"""What every device model returns to the assembler."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from checker.shape import frozen

FloatArray = NDArray[np.float64]


@frozen
class Evaluation:
    """Currents into each terminal and their derivatives.

    `i` float64 (S, n, k) [A], into the device; `g` float64 (S, n, k, k) [S], g[..., r, c] = d i_r / d v_c.
    """

    i: FloatArray
    g: FloatArray
