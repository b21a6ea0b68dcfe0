"""Decimal prefixes and unit spellings: the one table that parsing and printing share.

Prefix exponents: SI. Unit keys are the project's own short names ("ohm", "degC"); a text may spell a unit in
any of the listed ways. Spellings are common practice, no source.
"""

from __future__ import annotations

EXPONENTS = {
    "T": 12,
    "G": 9,
    "M": 6,
    "k": 3,
    "": 0,
    "m": -3,
    "u": -6,
    "n": -9,
    "p": -12,
    "f": -15,
}
"""SI prefix to power of ten; the micro sign is folded to `u` by `plain`."""

SPELLINGS: dict[str, tuple[str, ...]] = {
    "ohm": ("ohms", "ohm", "r"),
    "F": ("farad", "fd", "f"),
    "H": ("henry", "hy", "h"),
    "V": ("volts", "volt", "vdc", "v"),
    "A": ("amps", "amp", "a"),
    "W": ("watts", "watt", "w"),
    "Hz": ("hertz", "hz"),
    "S": ("siemens", "s"),
    "s": ("sec", "s"),
    "K": ("kelvin", "k"),
    "degC": ("degc", "°c", "celsius", "c"),
    "%": ("percent", "%"),
    "K/W": ("k/w", "degc/w", "°c/w"),
    "degC/W": ("degc/w", "°c/w", "k/w"),
    "m": ("metre", "m"),
}
"""Unit key to accepted spellings, lower case; a unit that is not listed is spelt as its key alone."""

UNPREFIXED = frozenset({"%", "degC", "dB", "dBm", "dBV", "dBu", "dBc", "deg", "ppm", "ppm/K", "K", "K/W", "degC/W", ""})
"""Units that take no prefix, neither read nor printed."""

SYMBOLS = {"ohm": "Ω", "degC": "°C", "degC/W": "°C/W", "deg": "°"}
"""Unit key to printed symbol where they differ."""

_FOLDED = str.maketrans(
    {
        "µ": "u",
        "μ": "u",
        "\u2126": "Ω",
        "−": "-",
        "–": "-",
        "\u00a0": " ",
        "\u202f": " ",
        "\u2009": " ",
        "℃": "°C",
    }
)


def plain(text: str) -> str:
    """`text` trimmed, with the lookalikes of µ, Ω, the minus sign and the space folded to one spelling
    each."""
    return text.translate(_FOLDED).replace("°C", "degC").replace("Ω", "ohm").strip()


def spellings(unit: str) -> tuple[str, ...]:
    """Accepted spellings of a unit key, lower case, longest first."""
    return SPELLINGS.get(unit, (unit.lower(),))
