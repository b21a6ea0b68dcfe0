"""The three readings of a number in text: schematic value, SPICE number, and number with a unit."""

from __future__ import annotations

from checker.quantity.engineering import Reading, parse_engineering
from checker.quantity.spice_number import parse_spice_number
from checker.quantity.with_unit import parse_with_unit

__all__ = ["Reading", "parse_engineering", "parse_spice_number", "parse_with_unit"]
