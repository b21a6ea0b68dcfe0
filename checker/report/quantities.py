"""How figures read: the words and the unit that a key stands for, and numbers with prefixes."""

from __future__ import annotations

import math

from checker.quantity.prefixes import EXPONENTS, SYMBOLS
from checker.quantity.show import NOT_THERE, show
from checker.record import Complex
from checker.report.layout import NO_BREAK

_UNITS = {
    "ohm": "ohm",
    "hz": "Hz",
    "db": "dB",
    "dbm": "dBm",
    "v": "V",
    "vpp": "Vpp",
    "a": "A",
    "w": "W",
    "c": "degC",
    "s": "S",
    "f": "F",
    "h": "H",
    "percent": "%",
}
"""Last word of a key to the unit it means."""

_WORDS = {
    "return_loss_worst_db": "worst return loss",
    "return_loss_worst_hz": "frequency of the worst return loss",
    "droop_low_db": "droop at the low band edge",
    "droop_high_db": "droop at the high band edge",
    "emf_gain_db": "gain from e.m.f.",
    "clip_up_v": "room upward",
    "clip_down_v": "room downward",
    "swing_vpp": "swing",
    "ic_a": "IC",
    "ib_a": "IB",
    "vce_v": "VCE",
    "vbe_v": "VBE",
    "id_a": "ID",
    "ig_a": "IG",
    "vds_v": "VDS",
    "vgs_v": "VGS",
    "tj_c": "junction temperature",
    "gm_s": "gm",
    "re_ohm": "re'",
    "rpi_ohm": "rπ",
    "ro_ohm": "ro",
    "ft_hz": "fT",
    "r_ohm": "",
    "c_f": "",
    "l_h": "",
}
"""Keys that plain reading would not name well; a part's only property needs no name."""

_PREFIXES = {power: "µ" if prefix == "u" else prefix for prefix, power in EXPONENTS.items()}


def words(quantity: str) -> str:
    """A key in words: "input_impedance_ohm" is "input impedance"."""
    if quantity in _WORDS:
        return _WORDS[quantity]
    first, _, last = quantity.rpartition("_")
    return (first if first and last in _UNITS else quantity).replace("_", " ")


def unit_of(quantity: str) -> str:
    """The unit that a key ends in, "" for a plain number."""
    return _UNITS.get(quantity.rpartition("_")[2], "")


def number(value: float | None, unit: str, digits: int = 3) -> str:
    """`value` [unit] with prefix, for reading beside others; None is a dash.

    Decibels have two decimals, one from 10 dB on: more would be noise. Percents are percents in a report,
    fractions in `show`.
    """
    if value is None:
        return NOT_THERE
    if unit in ("dB", "dBm"):
        text = f"{value:.{1 if abs(value) >= 10 else 2}f} {unit}"
    elif unit == "Vpp":
        text = show(value, "V", digits) + "pp"
    else:
        text = show(value / 100 if unit == "%" else value, unit, digits)
    return text.replace(" ", NO_BREAK)


def given(value: float | None, unit: str) -> str:
    """A number that somebody chose, with no more digits than it has: "14 dB", "4.7 kΩ", "25 °C"."""
    text, gap, symbol = number(value, unit, 4).partition(NO_BREAK)
    return (text.rstrip("0").rstrip(".") if "." in text and "e" not in text else text) + gap + symbol


def figure(value: Complex | float | None, quantity: str) -> str:
    """The figure behind a key, with the unit that the key names."""
    unit = unit_of(quantity)
    return complex_number(value, unit) if isinstance(value, Complex) else number(value, unit)


def complex_number(value: Complex, unit: str) -> str:
    """Both parts under one prefix, to three digits of the magnitude: "6.81-j2.95 kΩ"."""
    size = math.hypot(value.re, value.im)
    if size == 0:
        return number(0.0, unit)
    power = math.floor(math.log10(size) + 1e-12)
    group = min(max(3 * (power // 3), min(_PREFIXES)), max(_PREFIXES)) if unit else 0
    decimals = min(max(2 - (power - group), 0), 6)
    re, im = (f"{part / 10.0**group:.{decimals}f}" for part in (value.re, abs(value.im)))
    re = re.removeprefix("-") if float(re) == 0 else re
    sign = "-" if value.im < 0 and float(im) != 0 else "+"
    return f"{re}{sign}j{im}{NO_BREAK}{_PREFIXES[group]}{SYMBOLS.get(unit, unit)}".rstrip()


def polar(value: Complex) -> str:
    """A ratio as magnitude and angle: "24.9 ∠ -14°"."""
    angle = math.degrees(math.atan2(value.im, value.re))
    text = f"{show(math.hypot(value.re, value.im), '')} ∠ {angle:.0f}°".replace(" -0°", " 0°")
    return text.replace(" ", NO_BREAK)
