"""What every device model returns to the assembler."""

from __future__ import annotations

from checker.arrays import FloatArray
from checker.shape import frozen


@frozen
class Evaluation:
    """Currents into each terminal and their derivatives.

    `i` float64 (S, n, k) [A], into the device; `g` float64 (S, n, k, k) [S], g[..., r, c] = d i_r / d v_c.
    """

    i: FloatArray
    g: FloatArray
