"""Print a quantity with a prefix, as an engineer writes it. The only place where prefixes are put on."""

from __future__ import annotations

import math

from checker.quantity.prefixes import EXPONENTS, SYMBOLS, UNPREFIXED

NOT_THERE = "—"
"""Printed for a figure that does not exist."""

_PREFIX_OF = {power: "µ" if prefix == "u" else prefix for prefix, power in EXPONENTS.items()}
_LOWEST, _HIGHEST = min(_PREFIX_OF), max(_PREFIX_OF)


def show(si: float, unit: str, digits: int = 3) -> str:
    """`si` [unit] to `digits` significant digits: "4.70 kΩ", "-12.0 V", "16.0 MHz", "0 V"; nan gives "—".

    Logarithmic units, "degC" and "%" take no prefix; for "%", `si` is a fraction.
    """
    if math.isnan(si):
        return NOT_THERE
    symbol = SYMBOLS.get(unit, unit)
    if math.isinf(si):
        return f"{'-' if si < 0 else ''}∞ {symbol}".rstrip()
    if unit in UNPREFIXED:
        return f"{_significant(si * 100 if unit == '%' else si, digits)} {symbol}".rstrip()
    mantissa, power = _rounded(si, digits)
    return f"{_significant(mantissa, digits)} {_PREFIX_OF[power]}{symbol}"


def show_value(si: float, unit: str) -> str:
    """A component's value with no more digits than it has, four at most: "4.7 kΩ", "100 nF"."""
    if not math.isfinite(si):
        return show(si, unit)
    mantissa, power = _rounded(si, 4)
    number = _significant(mantissa, 4)
    if "." in number:
        number = number.rstrip("0").rstrip(".")
    return f"{number} {_PREFIX_OF[power]}{SYMBOLS.get(unit, unit)}"


def _rounded(si: float, digits: int) -> tuple[float, int]:
    """Mantissa and prefix exponent of `si` rounded first, so that 999.6 Ω becomes 1.00 kΩ."""
    if si == 0:
        return 0.0, 0
    number, _, power = f"{si:.{max(digits, 1) - 1}e}".partition("e")
    group = min(max(3 * (int(power) // 3), _LOWEST), _HIGHEST)
    return float(f"{number}e{int(power) - group}"), group


def _significant(value: float, digits: int) -> str:
    """Fixed-point text of `digits` significant digits; at least the whole part, which is never in powers of
    ten below a million."""
    if value == 0:
        return "0"
    power = int(f"{value:.{max(digits, 1) - 1}e}".partition("e")[2])
    if not -4 <= power < 6:
        return f"{value:.{max(digits, 1) - 1}e}"
    return f"{value:.{max(digits - 1 - power, 0)}f}"
