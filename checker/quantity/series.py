"""The preferred numbers of IEC 60063, E3 to E192, and the standard values around a given one.

E3 to E24 are tabulated, since E24 departs from the rounded powers at eight places. E48 to E192 are the powers
10^(i/n) rounded to three digits, but for 9.20 in E192, which the rule would make 9.19. Source: IEC 60063,
from memory.
"""

from __future__ import annotations

import math
from functools import cache

_E24 = (10, 11, 12, 13, 15, 16, 18, 20, 22, 24, 27, 30, 33, 36, 39, 43, 47, 51, 56, 62, 68, 75, 82, 91)
_SAME = 1e-9
"""Relative distance under which two values are one: rounding of a decimal text, nothing physical."""

SERIES = ("E3", "E6", "E12", "E24", "E48", "E96", "E192")


@cache
def mantissas(series: str) -> tuple[float, ...]:
    """The values of one decade from 1.0 up, ascending. Raises `ValueError` for a name that is no series."""
    if series not in SERIES:
        raise ValueError(f"{series!r} is not a series of IEC 60063; expected one of {', '.join(SERIES)}")
    count = int(series[1:])
    if count <= 24:
        return tuple(value / 10 for value in _E24[:: 24 // count])
    exact = [round(100 * 10 ** (step / count)) for step in range(count)]
    return tuple((920 if value == 919 else value) / 100 for value in exact)


def nearest(si: float, series: str) -> float:
    """The standard value at the smallest ratio from `si` > 0, in the same unit."""
    below, above = _around(si, series, 1, 1)
    exact = _exact(si, series)
    if exact is not None:
        return exact
    return below[-1] if si / below[-1] <= above[0] / si else above[0]


def neighbours(si: float, series: str, count_below: int, count_above: int) -> tuple[float, ...]:
    """The `count_below` standard values under `si` > 0 and the `count_above` over it, ascending; `si` itself,
    where it is a standard value, is left out. Raises `ValueError` for a value that is not positive and
    finite."""
    below, above = _around(si, series, count_below, count_above)
    return (*below, *above)


def _around(si: float, series: str, below: int, above: int) -> tuple[tuple[float, ...], tuple[float, ...]]:
    if not (math.isfinite(si) and si > 0):
        raise ValueError(f"{si!r} has no standard values around it; expected a positive number")
    decade = math.floor(math.log10(si))
    reach = 2 + max(below, above) // len(mantissas(series))
    ladder = [_scaled(m, decade + step) for step in range(-reach, reach + 1) for m in mantissas(series)]
    under = [value for value in ladder if value < si * (1 - _SAME)]
    over = [value for value in ladder if value > si * (1 + _SAME)]
    return tuple(under[len(under) - below :]), tuple(over[:above])


def _exact(si: float, series: str) -> float | None:
    decade = math.floor(math.log10(si))
    ladder = (_scaled(m, decade + step) for step in (-1, 0, 1) for m in mantissas(series))
    return next((value for value in ladder if abs(value - si) <= _SAME * si), None)


def _scaled(mantissa: float, decade: int) -> float:
    """Through text, so that the result is the float nearest to the decimal value."""
    return float(f"{mantissa:.2f}e{decade}")
