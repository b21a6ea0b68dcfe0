"""Values as people write them on schematics: `4k7`, `8,2k`, `.1uF`, `18k1%`, `10uF/25V`.

Here `M` is mega and `m` is milli (SPICE text has its own rule, see `spice_number`). Letter-for-point codes
follow IEC 60062. What could be read in two ways is refused, never guessed.
"""

from __future__ import annotations

import math
import re

from checker.pattern import lazy
from checker.quantity.codes import tolerance_of_letter
from checker.quantity.prefixes import EXPONENTS, plain, spellings
from checker.shape import frozen
from checker.trouble import NotAQuantity


@frozen
class Reading:
    """A value read from text. `si` in the unit asked for; `tolerance` a fraction (the wider side of an
    unequal one) or None; `rating_v` the voltage rating [V] or None; `text` as written."""

    si: float
    tolerance: float | None
    rating_v: float | None
    text: str


_LONGEST = 200
"""Characters; a longer text is a note, not a value."""

_PREFIX = r"meg|[TGMKkmuUnNpPf]"
_HEAD = lazy(
    rf"(?P<sign>[+-]?)\s*(?:"
    rf"(?P<whole>\d*)(?P<point>[RrLVAFH]|{_PREFIX})(?P<part>\d{{1,3}})(?![\d.])"
    rf"|(?P<number>\d+(?:\.\d*)?|\.\d+)(?P<power>[eE][+-]?\d{{1,3}})?)",
)
_AFTER = lazy(rf"\s*(?P<prefix>meg(?:a(?=\s*ohm))?|{_PREFIX})?", re.IGNORECASE)
_PERCENT = lazy(r"(?:\+/-|±|\+-)?\s*(\d+(?:\.\d+)?|\.\d+)\s*%")
_VOLTS = lazy(r"(?<![\w.])(\d+(?:\.\d+)?)\s*(k?)V(?:dc|ac|rms)?(?![A-Za-z0-9])", re.IGNORECASE)
_RANGE = lazy(r"(\.\.|-\s*[\d.]|~|to\b|\|\||\*|\+|x\b|=|:)", re.IGNORECASE)
_COMMA = lazy(r"^([+-]?\d*),(\d+)")
_EIA_CODE = lazy(r"[1-9]\d[1-6]")
_SECOND = {
    "ohm": lazy(r"\d\s*(?:[kKMR]|ohm)(?![A-Za-z])"),
    "F": lazy(r"\d\s*[unp]F?(?![A-Za-z])", re.IGNORECASE),
    "H": lazy(r"\d\s*[munp]H?(?![A-Za-z])"),
}
"""A further value of the same unit behind the first (`10k/47k`, `0603 10k`): which one is meant cannot be told."""
_POINT_UNITS = {"R": "ohm", "r": "ohm", "L": "ohm", "V": "V", "A": "A", "F": "F", "H": "H"}
_NEEDS_PREFIX = ("F", "H")
_SIGNED = ("V", "A", "degC")


def parse_engineering(text: str, unit: str) -> Reading:
    """Read a schematic value of `unit` ("ohm", "F", "H", "V", "A", "Hz", "W"...).

    A tolerance (percentage, or IEC 60062 letter) and a voltage rating may follow; other words after the value
    (dielectric, package, taper) are passed over. Raises `NotAQuantity` for placeholders, ranges, a unit of
    another kind, and whatever could be read in two ways. Source of the codes: IEC 60062.
    """
    if not text.strip() or len(text) > _LONGEST:
        raise _refusal(text, unit, "it is too long" if text.strip() else "it is empty")
    folded = _decimal_comma(plain(text))
    if unit == "F" and _EIA_CODE.fullmatch(folded):
        # EIA three-digit code: two digits and a count of zeros, in pF. Common practice.
        return Reading(si=float(f"{folded[:2]}e{int(folded[2]) - 12}"), tolerance=None, rating_v=None, text=text)
    head = _head(folded, text, unit)
    if head is None:
        raise _refusal(text, unit, "it does not start with a number")
    si, rest = _infix(head, folded, unit, text) if head["point"] else _plain_number(head, folded, unit, text)
    if not math.isfinite(si) or (si < 0 and unit not in _SIGNED):
        raise _refusal(text, unit, "the number is out of range")
    letter, rest = _tolerance_letter(rest, unit, behind=folded[: len(folded) - len(rest)])
    if rest and (rest[0].isalnum() and not _PERCENT.match(rest)):
        raise _refusal(text, unit, f"{rest!r} follows the number")
    if rest and _RANGE.match(rest.lstrip()) and not _PERCENT.match(rest.lstrip()):
        raise _refusal(text, unit, "it is a range or a sum")
    second = _SECOND.get(unit)
    if rest and second is not None and second.search(rest):
        raise _refusal(text, unit, "it holds two values")
    tolerance, rating_v = _tail(rest, unit)
    if tolerance is None and letter:
        tolerance = tolerance_of_letter(letter, si, unit)
    return Reading(si=si, tolerance=tolerance, rating_v=rating_v, text=text)


def _refusal(text: str, unit: str, reason: str) -> NotAQuantity:
    return NotAQuantity(f"{text[:60]!r} does not read as a value in {unit}: {reason}")


def _head(folded: str, text: str, unit: str) -> re.Match[str] | None:
    """The number in front. In `18k1%` the digit belongs to the percentage; in `4k71%` nobody can tell."""
    head = _HEAD.match(folded)
    if head is None or not head["point"] or folded[head.end() : head.end() + 1] != "%":
        return head
    if head["part"] in ("1", "2", "5", "10", "20") and head["whole"]:
        return _HEAD.match(folded, 0, head.start("point"))
    raise _refusal(text, unit, "where does the tolerance begin? part it by a space")


def _decimal_comma(text: str) -> str:
    found = _COMMA.match(text) if "," in text else None
    if found is None:
        return text
    whole, part = found.groups()
    if len(part) == 3 and whole.lstrip("+-0"):
        raise NotAQuantity(f"{text[:60]!r}: the comma may part thousands or decimals; write a point")
    return f"{whole}.{text[found.start(2) :]}"


def _infix(head: re.Match[str], folded: str, unit: str, text: str) -> tuple[float, str]:
    """A letter in place of the decimal point: IEC 60062 `4k7`, `R47`, `4L7`, and `3V3` in the same manner."""
    point = head["point"]
    wanted = _POINT_UNITS.get(point)
    if wanted is not None and wanted != unit:
        raise _refusal(text, unit, f"the letter {point} stands for another unit")
    if point in "NPU":
        raise _refusal(text, unit, "it looks like a type number")
    if not head["whole"] and point not in "RrLkKMmunp":
        raise _refusal(text, unit, "it does not start with a number")
    power = -3 if point == "L" else 0 if wanted else _exponent(point, unit, text)
    si = float(f"{head['sign']}{head['whole'] or '0'}.{head['part']}e{power}")
    return si, _without_unit(folded[head.end() :], unit)


def _plain_number(head: re.Match[str], folded: str, unit: str, text: str) -> tuple[float, str]:
    """A number, then a prefix and the unit, either of which may be missing."""
    rest = folded[head.end() :]
    after = _AFTER.match(rest)
    prefix = (after["prefix"] or "") if after else ""
    behind = rest[after.end() :] if after else rest
    bare = _without_unit(rest, unit)
    is_unit = bare != rest and _ends(bare)
    is_word = rest[:1].isspace() and not _ends(_without_unit(behind, unit))
    if prefix and (is_unit or is_word):
        prefix, behind = "", rest
    if unit in _NEEDS_PREFIX and not prefix and not head["power"] and behind == _without_unit(behind, unit):
        raise _refusal(text, unit, "a bare number is ambiguous; write the prefix or the unit")
    if not prefix and behind == _without_unit(behind, unit) and re.match(r"\s*/\s*\d", behind):
        raise _refusal(text, unit, "it is a fraction")
    power = _exponent(prefix, unit, text)
    if head["power"]:
        power += int(head["power"][1:])
    si = float(f"{head['sign']}{head['number']}e{power}")
    return si, _without_unit(behind, unit)


def _exponent(prefix: str, unit: str, text: str) -> int:
    if prefix.lower().startswith("meg"):
        if unit in _NEEDS_PREFIX:
            raise _refusal(text, unit, f"the prefix {prefix} would make it absurdly large")
        return 6
    if unit == "ohm" and prefix in ("u", "U", "n", "N", "p", "P", "f"):
        raise _refusal(text, unit, f"the prefix {prefix} belongs to another kind of part")
    if unit in _NEEDS_PREFIX and prefix in ("M", "K", "k", "G", "T"):
        raise _refusal(text, unit, f"the prefix {prefix} would make it absurdly large")
    power = EXPONENTS.get(prefix, EXPONENTS.get(prefix.lower()))
    if power is None:
        raise _refusal(text, unit, f"{prefix} is no prefix")
    return power


def _ends(rest: str) -> bool:
    return not rest or not rest[0].isalnum()


def _without_unit(rest: str, unit: str) -> str:
    """`rest` without a leading spelling of the unit, where that is the whole word."""
    trimmed = rest.lstrip()
    for spelling in spellings(unit):
        behind = trimmed[len(spelling) :]
        if trimmed.lower().startswith(spelling) and (_ends(behind) or _is_letter_code(behind)):
            return behind
    return rest


def _is_letter_code(behind: str) -> bool:
    return behind[:1].isupper() and _ends(behind[1:])


def _tolerance_letter(rest: str, unit: str, behind: str) -> tuple[str, str]:
    """A letter right after the value. F, H and W are units as well: they count only behind a letter that
    leaves no doubt, so that `10uF`, `10mH` or `5W` never pass for resistors."""
    trimmed = rest.lstrip()
    if not _is_letter_code(trimmed) or tolerance_of_letter(trimmed[0], 1.0, unit) is None:
        return "", rest
    settled = unit == "ohm" and re.search(r"[RrkKMG]", behind) is not None
    if trimmed[0] in "FHW" and not settled:
        return "", rest
    if behind[-1:].isdigit() and not any(char.isalpha() for char in behind) and trimmed[0] != "J":
        return "", rest
    return trimmed[0], trimmed[1:]


def _tail(rest: str, unit: str) -> tuple[float | None, float | None]:
    percent = _PERCENT.search(rest) if "%" in rest else None
    volts = None if unit == "V" or "V" not in rest.upper() else _VOLTS.search(rest)
    tolerance = float(percent[1]) / 100 if percent else None
    rating_v = float(volts[1]) * (1000 if volts[2] else 1) if volts else None
    return tolerance, rating_v
