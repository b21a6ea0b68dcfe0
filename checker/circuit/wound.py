"""Values that a schematic writes in a workshop's way: turns on a known core, potentiometers with their taper."""

from __future__ import annotations

import re
from typing import Final

from checker.pattern import lazy
from checker.quantity.codes import tolerance_of_letter
from checker.quantity.parse import parse_engineering
from checker.trouble import NotAQuantity

AL_NH: Final = {
    "T25-2": 3.4, "T25-6": 2.7, "T30-2": 4.3, "T30-6": 3.6, "T37-2": 4.0, "T37-6": 3.0, "T44-2": 5.2, "T44-6": 4.2,
    "T50-2": 4.9, "T50-6": 4.0, "T50-7": 4.3, "T68-2": 5.7, "T68-6": 4.7, "T68-7": 5.2, "T80-2": 5.5, "T80-6": 4.5,
    "T94-2": 8.4, "T94-6": 7.0, "T106-2": 13.5, "T130-2": 11.0, "T200-2": 12.0,
    "FT23-43": 188.0, "FT37-43": 420.0, "FT37-61": 55.3, "FT50-43": 523.0, "FT50-61": 68.8, "FT82-43": 557.0,
    "FT82-61": 73.3, "FT114-43": 603.0, "FT114-61": 79.3, "FT140-43": 885.0, "FT240-43": 1075.0,
}  # fmt: skip
"""Core -> inductance of one turn squared [nH]: iron powder and ferrite toroids by their common names (from memory of
the makers' tables; ferrites hold within 20 to 25 %)."""
_CORE: Final = lazy(r"(?<![A-Z])(?P<sort>F?T)[- ]?(?P<size>\d{2,3})[- ]?(?P<mix>\d{1,2})(?!\d)", re.IGNORECASE)
_TURNS: Final = lazy(r"(?<![\w.-])(\d{1,3})\s*(?:T|TURNS?)(?![\w-])", re.IGNORECASE)
_TAPER: Final = lazy(
    r"(?:[ABC]|LIN|LOG)?[ -]?(?P<value>\d+(?:[.,]\d+)?\s*[kKMR]?\d*)\s*(?:[ABC]|LIN|LOG)?", re.IGNORECASE
)
_EIA_HENRY: Final = lazy(r"(\d\d)(\d)([FGJKM])")


def core_of(text: str) -> tuple[str, float] | None:
    """(core, nH a turn squared) that a text names; None for a core that is not in the table."""
    for found in _CORE.finditer(text):
        name = f"{found['sort'].upper()}{found['size']}-{int(found['mix'])}"
        if name in AL_NH:
            return name, AL_NH[name]
    return None


def wound_henry(text: str) -> tuple[float, str] | None:
    """(inductance [H], core) of "T50-6 18T": turns squared times the core's figure; None where either is missing.

    Source: L = AL N^2, the definition of AL (IEC 60205 speaks of the inductance factor; from memory).
    """
    core = core_of(text)
    turns = _TURNS.findall(text)
    if core is None or len(turns) != 1 or ":" in text:
        return None
    return core[1] * 1e-9 * float(turns[0]) ** 2, core[0]


def tapered_ohm(text: str) -> float | None:
    """Ohms of a potentiometer written with its taper ("A500K", "50kA", "B100k LIN") or behind other words."""
    whole = _TAPER.fullmatch(text.strip())
    words = [whole["value"]] if whole else [word for word in re.split(r"[\s()]+", text) if _VALUE.fullmatch(word)]
    if len(words) != 1:
        return None
    try:
        return parse_engineering(words[0], "ohm").si
    except NotAQuantity:
        return None


_VALUE: Final = lazy(r"\d+(?:[.,]\d+)?[kKMR]\d*")


def coded_henry(text: str) -> tuple[float, float | None] | None:
    """(inductance [H], tolerance) of a three-digit code with its letter: 472K is 47e2 uH, 10 % (EIA code, common
    practice; letters of IEC 60062)."""
    found = _EIA_HENRY.fullmatch(text.strip())
    if found is None:
        return None
    henry = float(f"{found[1]}e{int(found[2]) - 6}")
    return henry, tolerance_of_letter(found[3], henry, "H")
