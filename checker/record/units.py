"""How a number and its unit stand in the report where the unit is a field of its own."""

from __future__ import annotations


def as_written(si: float, unit: str) -> float:
    """The number that goes with `unit` in the report: `si`, but percent where the house holds a fraction."""
    return si * 100.0 if unit == "%" else si
