"""A computed quantity over scenarios and frequencies, with the working that explains it."""

from __future__ import annotations

from dataclasses import field

from checker.arrays import ComplexArray, FloatArray
from checker.shape import frozen


@frozen
class Working:
    """How a figure was got: formula in textbook symbols, the numbers put in, the source or method."""

    formula: str
    numbers: tuple[tuple[str, float, str], ...] = ()
    source: str = ""


@frozen
class Figure:
    """`values`: float64 or complex128, (S, F); axis 0 is the scenario (0 nominal), axis 1 is `f_hz`.

    A figure without a frequency has F = 1 and `f_hz` None. `nan` marks what could not be computed there;
    `reason` then says why. `nominal_only`: the question itself spans the corners (a gain spread) or costs a sweep (a
    band corner), so it is answered for scenario 0 and the rest of axis 0 is `nan` without being unknown.
    """

    quantity: str
    subject: str
    values: FloatArray | ComplexArray
    unit: str
    f_hz: FloatArray | None = None
    working: Working = field(default_factory=lambda: Working(formula=""))
    reason: str = ""
    nominal_only: bool = False

    @property
    def nominal(self) -> complex | float:
        """The value of scenario 0 at the first frequency, as a Python number."""
        value: complex | float = self.values[0, 0].item()
        return value
