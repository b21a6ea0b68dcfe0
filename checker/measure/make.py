"""Short ways to write figures."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from checker.arrays import ComplexArray, FloatArray
from checker.quantity.figure import Figure, Working


def figure(
    name: str,
    subject: str,
    values: FloatArray | ComplexArray,
    unit: str,
    *,
    f_hz: FloatArray | None = None,
    formula: str = "",
    numbers: tuple[tuple[str, float, str], ...] = (),
    source: str = "",
    reason: str = "",
) -> Figure:
    """A figure of values (S,) or (S, F)."""
    table = values[:, None] if values.ndim == 1 else values
    return Figure(
        quantity=name,
        subject=subject,
        values=table,
        unit=unit,
        f_hz=f_hz,
        working=Working(formula=formula, numbers=numbers, source=source),
        reason=reason,
    )


def nominal(
    name: str,
    subject: str,
    value: float,
    size: int,
    unit: str,
    *,
    formula: str = "",
    numbers: tuple[tuple[str, float, str], ...] = (),
    source: str = "",
    reason: str = "",
) -> Figure:
    """A real figure of scenario 0 alone, nan elsewhere on the axis of `size` scenarios."""
    values = np.full(size, np.nan)
    values[0] = value
    written = figure(name, subject, values, unit, formula=formula, numbers=numbers, source=source, reason=reason)
    return replace(written, nominal_only=True)


def missing(name: str, subject: str, size: int, unit: str, reason: str) -> Figure:
    """A figure that does not exist, with the reason."""
    return figure(name, subject, np.full(size, np.nan), unit, reason=reason)


def first(values: FloatArray) -> float:
    """Scenario 0 of (S,) or (S, F) as a Python number."""
    return float(values.ravel()[0])


def db(values: ComplexArray | FloatArray) -> FloatArray:
    """20 log10 of a magnitude; nan for zero."""
    magnitude = np.abs(values)
    return np.asarray(20.0 * np.log10(np.where(magnitude > 0.0, magnitude, np.nan)), dtype=float)
