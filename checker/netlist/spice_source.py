"""What stands behind the nodes of a V or I element: DC value, AC magnitude, waveform, in any order and
spelling."""

from __future__ import annotations

import re
from collections.abc import Callable, Mapping, Sequence

from checker.netlist.types import Source
from checker.pattern import lazy
from checker.trouble import NotAQuantity

Number = Callable[[str], float]

_WAVEFORMS = {
    "sin": "sin",
    "sine": "sin",
    "pulse": "pulse",
    "exp": "exp",
    "pwl": "pwl",
    "sffm": "sffm",
    "am": "am",
}
_KEYWORDS = frozenset({*_WAVEFORMS, "dc", "ac", "distof1", "distof2"})
_REST_INDEX = {"sin": 0, "pulse": 0, "exp": 0, "sffm": 0, "pwl": 1}
"""Which number of the waveform is its value at rest: offset, initial value, first value."""
_VOLTS = lazy(r"[+-]?(?:\d++\.?\d*+|\.\d++)(?:[eE][+-]?\d++)?(?:meg|[kmunp])?v(?:dc)?", re.IGNORECASE)
_AMPERES = lazy(r"([+-]?(?:\d++\.?\d*+|\.\d++)(?:[eE][+-]?\d++)?)[aA]")


def read_source(words: Sequence[str], named: Mapping[str, str], number: Number, *, amperes: bool) -> Source:
    """Read the words and pairs of an independent source. Raises `NotAQuantity` for words of no meaning.

    `amperes`: a current source, where `5A` means five amperes and not five atto. A waveform ends at the next
    keyword, bracket or not.
    """
    unit = _without_ampere if amperes else _in_volts
    reader = _Reader(words, lambda word: number(unit(word)))
    reader.read()
    if "dc" in named:
        reader.dc = reader.number(named["dc"])
    if "ac" in named:
        reader.ac = reader.number(named["ac"])
    index = _REST_INDEX.get(reader.waveform)
    rest = reader.shape[index] if index is not None and index < len(reader.shape) else None
    return Source(
        dc=reader.dc,
        ac=reader.ac,
        ac_deg=reader.ac_deg,
        waveform=reader.waveform,
        shape=tuple(reader.shape),
        rest=rest,
    )


def _without_ampere(word: str) -> str:
    if _VOLTS.fullmatch(word):
        raise NotAQuantity(f"{word[:40]!r} is no current")
    found = _AMPERES.fullmatch(word)
    return found[1] if found else word


def _in_volts(word: str) -> str:
    if _AMPERES.fullmatch(word):
        raise NotAQuantity(f"{word[:40]!r} is no voltage")
    return word


class _Reader:
    """One pass over the words; each keyword takes the numbers that follow it."""

    def __init__(self, words: Sequence[str], number: Number) -> None:
        self.words = words
        self.at = 0
        self.number = number
        self.dc: float | None = None
        self.ac: float | None = None
        self.ac_deg = 0.0
        self.waveform = ""
        self.shape: list[float] = []

    def read(self) -> None:
        while self.at < len(self.words):
            word = self.words[self.at]
            key = word.lower()
            self.at += 1
            if key == "dc":
                values = self.numbers(1)
                self.dc = values[0] if values else self.dc
            elif key == "ac":
                # A bare AC means a magnitude of one.
                values = self.numbers(2)
                self.ac = values[0] if values else 1.0
                self.ac_deg = values[1] if len(values) > 1 else 0.0
            elif key in ("distof1", "distof2"):
                self.numbers(2)
            elif key in _WAVEFORMS and not self.waveform:
                self.waveform = _WAVEFORMS[key]
                self.shape = self.numbers(len(self.words))
            elif self.dc is None and not self.waveform and self.ac is None:
                self.dc = self.number(word)
            else:
                raise NotAQuantity(f"{word[:40]!r} is not expected in a source")

    def numbers(self, most: int) -> list[float]:
        """Up to `most` numbers from the words that are left, as far as they are numbers."""
        values: list[float] = []
        while self.at < len(self.words) and len(values) < most and self.words[self.at].lower() not in _KEYWORDS:
            try:
                values.append(self.number(self.words[self.at]))
            except NotAQuantity:
                break
            self.at += 1
        return values
