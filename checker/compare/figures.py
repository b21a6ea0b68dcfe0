"""Figures of two reports beside each other, and which of them differ beyond a tolerance."""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import fields

from checker.record import Complex, Stage
from checker.record.base import Record, key_of
from checker.record.comparison import Figure, Moved

FLOORS = {"v": 1e-3, "a": 1e-9, "w": 1e-9}
"""Unit to what counts as nothing: figures near zero have no share to go by."""


def moved(before: Record | None, after: Record | None, tolerance: float) -> Iterator[Moved]:
    """The figures of two records of one class that differ; of a record that is missing all are null."""
    kind = before if before is not None else after
    for each in fields(kind) if kind is not None else ():
        was, now = (None if side is None else getattr(side, each.name, None) for side in (before, after))
        if differ(each.name, was, now, tolerance):
            yield Moved(quantity=key_of(each.name), before=was, after=now)


def moved_stage(before: Stage | None, after: Stage | None, tolerance: float) -> tuple[Moved, ...]:
    """Of two stages: what they are, how they rest, what they do."""
    words = (
        Moved(quantity=key, before=None if before is None else getattr(before, key), after=getattr(after, key, None))
        for key in ("configuration", "role")
        if before is not None and after is not None and getattr(before, key) != getattr(after, key)
    )
    sections = ("bias", "small_signal", "specs")
    pairs = ((getattr(before, name, None), getattr(after, name, None)) for name in sections)
    return (*words, *(each for pair in pairs for each in moved(*pair, tolerance)))


def differ(quantity: str, before: Figure, after: Figure, tolerance: float) -> bool:
    """Whether two figures of that key differ: by more than the fraction `tolerance`, in decibels and degrees by what
    goes with it (0.01: 0.086 dB, 1 degC). A figure that appears or goes differs.
    """
    if before is None or after is None:
        return before is not after
    if isinstance(before, (str, bool)) or isinstance(after, (str, bool)):
        return before != after
    unit = quantity.rpartition("_")[2]
    old, new = _complex(before), _complex(after)
    change = abs(new - old)
    if unit in ("db", "dbm"):
        return change > 20.0 * math.log10(1.0 + tolerance)
    if unit == "c":
        return change > 100.0 * tolerance
    return change > max(tolerance * max(abs(old), abs(new)), FLOORS.get(unit, 0.0))


def _complex(value: Complex | float) -> complex:
    return complex(value.re, value.im) if isinstance(value, Complex) else complex(value)
