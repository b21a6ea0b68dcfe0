"""Numbers with a unit as an intent file writes them: strict about the unit, so that a slip stops the run."""

from __future__ import annotations

import math

from checker.pattern import lazy
from checker.quantity.prefixes import EXPONENTS, UNPREFIXED, plain, spellings
from checker.trouble import NotAQuantity

_NUMBER = lazy(r"([+-]?)(\d+(?:\.\d*)?|\.\d+)(?:[eE]([+-]?\d{1,3}))?\s*")


def parse_with_unit(text: str, unit: str) -> float:
    """Read `text` as a number of `unit`: "3 MHz" in "Hz" is 3e6, "5 %" in "%" is the fraction 0.05.

    A number alone is taken to be in `unit` itself (for "%", "5" is 0.05). Logarithmic units, "degC" and "%"
    take no prefix. Raises `NotAQuantity` for another unit or no number. The result is SI, but for "degC" and
    the logarithmic units, which stay as they are.
    """
    folded = plain(text)
    found = _NUMBER.match(folded)
    if found is None:
        raise NotAQuantity(f"{text[:60]!r} is not a number with the unit {unit or 'none'}")
    sign, digits, power = found.groups()
    prefix = _prefix(folded[found.end() :], unit, text)
    exponent = int(power or 0) + EXPONENTS[prefix] - (2 if unit == "%" else 0)
    value = float(f"{sign}{digits}e{exponent}")
    if not math.isfinite(value):
        raise NotAQuantity(f"{text[:60]!r} is too large to be a number")
    return value


def _prefix(rest: str, unit: str, text: str) -> str:
    """The prefix in front of the unit; a bare number has none."""
    if not rest:
        return ""
    for spelling in spellings(unit):
        if not spelling or not rest.lower().endswith(spelling):
            continue
        prefix = rest[: len(rest) - len(spelling)].rstrip()
        prefix = "k" if prefix == "K" else prefix
        if not prefix or (prefix in EXPONENTS and unit not in UNPREFIXED):
            if unit == "Hz" and prefix == "m":
                raise NotAQuantity(f"{text[:60]!r}: m is milli; write MHz for mega")
            return prefix
    raise NotAQuantity(f"{text[:60]!r}: expected the unit {unit or 'none'}, found {rest[:20]!r}")
