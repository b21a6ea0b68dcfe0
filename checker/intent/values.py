"""One value of an intent file, by kind: text or number in, checked SI number or text out.

::

    kind       accepted                                   result
    amount     number in the key's unit, or text + unit   float, finite
    fraction   number 0..1, or "5 %"                      float, 0..1
    level      text: dBm, V (rms), Vpp, Vpk               float, peak e.m.f. [V]
    bound      number, or text (unit known by quantity)   float
    day        TOML date or "2027-06-30"                  date
"""

from __future__ import annotations

import datetime
import math
import re
from typing import Any, Final

from checker.pattern import lazy
from checker.quantity.parse import parse_with_unit
from checker.trouble import NotAQuantity

ABSOLUTE_ZERO_C: Final = -273.15

_LEVEL: Final = lazy(r"(.*V)\s*(pp|pk-pk|p-p|pk|p|rms)?", re.IGNORECASE)
_PEAK_PER_UNIT: Final = {"pp": 0.5, "pk-pk": 0.5, "p-p": 0.5, "pk": 1.0, "p": 1.0, "rms": math.sqrt(2)}


class BadValueError(ValueError):
    """A value that cannot be read; the message says what was expected, the caller knows where."""


def amount(value: Any, unit: str) -> float:
    """A finite number: bare in `unit`, or text with a unit of its own. Raises BadValueError."""
    if isinstance(value, bool) or not isinstance(value, int | float | str):
        raise BadValueError(f"expected {_expected(unit)}, got {shown(value)}")
    if isinstance(value, str):
        number = _parsed(value, unit)
    else:
        number = _float(value)
    if not math.isfinite(number):
        raise BadValueError(f"expected a finite number, got {shown(value)}")
    if unit == "degC" and number <= ABSOLUTE_ZERO_C:
        raise BadValueError(f"{shown(value)} is below absolute zero, {ABSOLUTE_ZERO_C} degC")
    return number


def fraction(value: Any) -> float:
    """A tolerance from 0 to 1. Raises BadValueError."""
    percent = isinstance(value, str) and value.rstrip().endswith(("%", "percent"))
    number = amount(value, "%" if percent else "")
    if not 0.0 <= number <= 1.0:
        raise BadValueError(f'expected a fraction from 0 to 1, e.g. 0.05 or "5 %", got {shown(value)}')
    return number


def level(value: Any, impedance_ohm: float | None) -> float:
    """Peak e.m.f. [V] of a sine of the stated size.

    dBm is the power that the source can deliver into its own impedance R: the r.m.s. e.m.f. is then
    2 sqrt(P R), its peak 2 sqrt(2 P R). "V" alone is r.m.s., as a voltmeter shows it. Raises BadValueError.
    """
    wanted = 'expected a level with its unit, e.g. "-30 dBm", "10 mV" (r.m.s.), "10 mVpp" or "10 mVpk"'
    if not isinstance(value, str):
        raise BadValueError(f"{wanted}, got {shown(value)}")
    if value.strip().lower().endswith("dbm"):
        if impedance_ohm is None:
            raise BadValueError(f"{shown(value)} is a power, and the port has no impedance; add one")
        peak = 2.0 * math.sqrt(2.0 * _dbm_w(value) * impedance_ohm)
    else:
        volts = _LEVEL.fullmatch(value.strip())
        if volts is None:
            raise BadValueError(f"{wanted}, got {shown(value)}")
        peak = _parsed(volts[1], "V") * _PEAK_PER_UNIT[(volts[2] or "rms").lower()]
    if not (math.isfinite(peak) and peak > 0.0):
        raise BadValueError(f"a level is finite and above zero, got {shown(value)}")
    return peak


def _dbm_w(value: str) -> float:
    try:
        return float(1e-3 * 10.0 ** (_parsed(value, "dBm") / 10.0))
    except OverflowError:
        return math.inf


def text(value: Any) -> str:
    """A non-empty text of at most 500 characters without control characters. Raises BadValueError."""
    if not isinstance(value, str) or not value.strip():
        raise BadValueError(f"expected a text in quotes, got {shown(value)}")
    if len(value) > 500 or any(ord(letter) < 32 or ord(letter) == 127 for letter in value):
        raise BadValueError("expected a text of at most 500 characters on one line")
    return value


def texts(value: Any) -> tuple[str, ...]:
    """A list of texts. Raises BadValueError."""
    if not isinstance(value, list):
        raise BadValueError(f'expected a list of texts, e.g. ["+5V"], got {shown(value)}')
    return tuple(text(item) for item in value)


def flag(value: Any) -> bool:
    """true or false. Raises BadValueError."""
    if not isinstance(value, bool):
        raise BadValueError(f"expected true or false, got {shown(value)}")
    return value


def day(value: Any) -> datetime.date:
    """A date without a time. Raises BadValueError."""
    if isinstance(value, datetime.date) and not isinstance(value, datetime.datetime):
        return value
    if isinstance(value, str):
        try:
            return datetime.date.fromisoformat(value.strip())
        except ValueError:
            pass  # said below, with what was expected
    raise BadValueError(f"expected a day such as 2027-06-30, got {shown(value)}")


def shown(value: Any) -> str:
    """`value` as a message prints it: short, and what a table or list is."""
    if isinstance(value, dict):
        return "a table"
    if isinstance(value, list):
        return "a list"
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, int) and abs(value) >= 10**40:
        return "a number of over 40 digits"
    words = repr(value) if isinstance(value, str) else str(value)
    return words if len(words) <= 60 else words[:57] + "..."


def _float(value: int | float) -> float:
    try:
        return float(value)
    except OverflowError:
        return math.inf


def _parsed(value: str, unit: str) -> float:
    try:
        return parse_with_unit(value, unit)
    except NotAQuantity:
        raise BadValueError(f"expected {_expected(unit)}, got {shown(value)}") from None


_EXAMPLES: Final = {
    "Hz": '"3 MHz"',
    "degC": '"55 degC"',
    "V": '"12 V"',
    "ohm": '"50 ohm"',
    "A": '"200 mA"',
    "W": '"500 mW"',
    "F": '"10 nF"',
    "H": '"10 uH"',
    "S": '"40 mS"',
    "%": '"5 %"',
    "dB": '"20 dB"',
    "dBm": '"-30 dBm"',
    "K/W": '"200 K/W"',
}


def _expected(unit: str) -> str:
    if not unit:
        return "a number"
    return f"a number in {unit} or a text such as {_EXAMPLES[unit]}"
