"""Derivatives of the program's own device currents by the complex step, exact to rounding.

f(v + ih) has f'(v) h in its imaginary part, with no difference taken. The device modules are run unchanged on complex
voltages: their numpy is replaced by one in which `zeros` and `empty` make complex arrays and the functions that are not
analytic (`abs`, `hypot`, `maximum`, `minimum`, `clip`) choose by the real part and keep the imaginary one.

Source: Squire and Trapp, SIAM Review 40(1):110-112 (1998) (from memory).
"""

from __future__ import annotations

from collections.abc import Iterator
from contextlib import contextmanager
from typing import Any

import numpy as np

from checker.devices import bipolar, channel, diode, jfet, junction, mosfet, opamp

MODULES = (bipolar, channel, diode, jfet, junction, mosfet, opamp)
STEP = 1e-30


class ComplexNumpy:
    """numpy, but for what a complex step needs."""

    def __getattr__(self, name: str) -> Any:
        return getattr(np, name)

    @staticmethod
    def zeros(shape: Any) -> np.ndarray:
        return np.zeros(shape, dtype=complex)

    @staticmethod
    def empty(shape: Any) -> np.ndarray:
        return np.empty(shape, dtype=complex)

    @staticmethod
    def abs(x: Any) -> Any:
        return np.where(np.real(x) < 0.0, -x, x)

    @staticmethod
    def hypot(x: Any, y: Any) -> Any:
        return np.sqrt(x * x + y * y)

    @staticmethod
    def maximum(x: Any, y: Any) -> Any:
        return np.where(np.real(x) >= np.real(y), x, y)

    @staticmethod
    def minimum(x: Any, y: Any) -> Any:
        return np.where(np.real(x) <= np.real(y), x, y)

    @classmethod
    def clip(cls, x: Any, low: Any, high: Any) -> Any:
        return cls.minimum(cls.maximum(x, low), high)


@contextmanager
def complex_numpy() -> Iterator[None]:
    """The device modules on complex numbers, for as long as this lasts."""
    for module in MODULES:
        module.np = ComplexNumpy()  # type: ignore[attr-defined]
    try:
        yield
    finally:
        for module in MODULES:
            module.np = np  # type: ignore[attr-defined]


def slopes(model: Any, p: dict[str, np.ndarray], polarity: np.ndarray, v: np.ndarray, gmin: float) -> np.ndarray:
    """d i_r / d v_c of the currents that the solver gets, (S, n, k, k), at terminal voltages `v` (S, n, k)."""
    out = np.zeros((*v.shape, model.TERMINALS))
    with complex_numpy():
        for column in range(model.TERMINALS):
            moved = v.astype(complex)
            moved[..., column] += 1j * STEP
            i = model.evaluate(p, polarity, moved, model.junctions(moved, polarity), gmin).i
            out[..., column] = i.imag / STEP
    return out
