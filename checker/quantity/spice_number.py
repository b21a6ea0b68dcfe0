"""Numbers of SPICE-style text: suffixes in any case, `M` is milli, `MEG` and `x` are mega, unit letters
ignored."""

from __future__ import annotations

import math
import re

from checker.pattern import lazy
from checker.quantity.prefixes import plain
from checker.trouble import NotAQuantity

_SUFFIXES = {
    "t": "e12",
    "g": "e9",
    "meg": "e6",
    "x": "e6",
    "k": "e3",
    "m": "e-3",
    "u": "e-6",
    "n": "e-9",
    "p": "e-12",
    "f": "e-15",
    "a": "e-18",
    "r": "e0",
}
_LONGEST = 200
"""Characters of a number at most."""
_MIL_M = 25.4e-6
"""One thousandth of an inch [m]."""

_NUMBER = lazy(
    r"([+-]?)(\d+(?:[.,]\d*)?|[.,]\d+)(?:[ed]([+-]?\d{1,9}))?(meg|mil|[tgxkmunpfa])?([a-z%]*)(?:/[a-z]+)?",
    re.IGNORECASE,
)
_DECIMAL = lazy(r"[+-]?\d*\.?\d+(?:[eE][+-]?\d+)?", re.ASCII)
"""What `float` reads as it stands: most numbers of a large file, on a short path."""
_WHOLE = lazy(r"[+-]?\d*\.?\d+", re.ASCII)
_SHORT = {letter: _SUFFIXES[letter.lower()] for letter in "tgkmunpfTGKMUNPF"}
"""Letters that, behind a plain number, are all there is to it: the short path of the other numbers."""
_INFIX = lazy(r"([+-]?)(\d+)(meg|[tgxkmunpfr])(\d{1,3})([a-z%]*)", re.IGNORECASE)


def parse_spice_number(text: str) -> float:
    """The SI value of a SPICE number such as `4.7k`, `1MEG`, `68kOhm`, `10uF`, `4.7x`; also `4k7`.

    `M` is milli in any case and `F` is femto; a decimal comma is read as a point. Raises `NotAQuantity` for
    what is no number (`k51` and `r1` are names), for `1M5`, where IEC 60062 says mega and SPICE text milli, and for
    numbers that do not fit (`1e400`). The suffix rules are common practice, no
    source.
    """
    if len(text) > _LONGEST:
        raise NotAQuantity(f"{text[:60]!r} and {len(text) - 60} more characters are not a number")
    if text[-1:].isdigit() and _DECIMAL.fullmatch(text):
        return _finite(float(text), text)
    if text[-1:] in _SHORT and _WHOLE.fullmatch(text, 0, len(text) - 1):
        return _finite(float(text[:-1] + _SHORT[text[-1]]), text)
    folded = plain(text)
    found = _NUMBER.fullmatch(folded)
    if found is not None:
        sign, digits, power, suffix, _ = found.groups()
        scale = (suffix or "r").lower()
        value = float(f"{sign}{digits.replace(',', '.')}e{power or 0}")
        value = value * _MIL_M if scale == "mil" else _scaled(value, sign, digits, power, scale)
    else:
        infix = _INFIX.fullmatch(folded)
        if infix is None:
            raise NotAQuantity(f"{text[:60]!r} is not a number")
        sign, whole, letter, part, _ = infix.groups()
        if letter in "mM":
            wanted = f"{whole}.{part}m or {whole}.{part}Meg"
            raise NotAQuantity(f"{text[:60]!r} may mean milli or mega; write {wanted}")
        value = float(f"{sign}{whole}.{part}{_SUFFIXES[letter.lower()]}")
    return _finite(value, text)


def _finite(value: float, text: str) -> float:
    if not math.isfinite(value):
        raise NotAQuantity(f"{text[:60]!r} is too large to be a number")
    return value


def _scaled(value: float, sign: str, digits: str, power: str | None, scale: str) -> float:
    """Fold both exponents into one text, so that `4.7k` is the float nearest to 4700."""
    if not math.isfinite(value):
        return value
    return float(f"{sign}{digits.replace(',', '.')}e{int(power or 0) + int(_SUFFIXES[scale][1:])}")
