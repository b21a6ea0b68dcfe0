"""Is the first line a title or an element?

By custom the first line of SPICE-style text is a title whatever it holds. Many exports begin at once with a
`*` or dot line, and some files with an element. The rule here: a first line that begins with `*` or `;` is a
comment and gives the title; one that begins with `.` is a card; any other is a title, unless it is an element
line of a known letter with two nodes or more and a number, waveform or model behind them, and one of its
first two nodes is a node of another line.
"""

from __future__ import annotations

from collections.abc import Iterable

from checker.netlist.spice_words import split_words
from checker.quantity.spice_number import parse_spice_number
from checker.trouble import NotAQuantity

_NODES = {"Q": 3, "J": 3, "M": 3, "E": 4, "G": 4, "T": 4}
_VALUED = "RCLVIK"
_LETTERS = frozenset("RCLKVIDQXJMEGFHBST")
_SCANNED = 2_000
"""Lines looked at for a node in common; the neighbours of a first element stand close by."""


def title_of(first: str) -> str:
    """The title that a comment or title line gives: without its stars and blanks."""
    return first.strip().lstrip("*;# ").strip()


def is_element(first: str, others: Iterable[str]) -> bool:
    """True where `first` reads as an element line that shares a node with one of `others`."""
    words = split_words(first).positional
    letter = first.strip()[:1].upper()
    if letter not in _LETTERS or len(words) < _NODES.get(letter, 2) + 2:
        return False
    if letter in _VALUED and not _is_value(words[3]) and "=" not in first:
        return False
    nodes = {word.lower() for word in words[1:3]}
    for index, line in enumerate(others):
        if index > _SCANNED:
            break
        if line[:1].isalpha() and nodes & {word.lower() for word in split_words(line).positional[1:-1]}:
            return True
    return False


def _is_value(word: str) -> bool:
    if word[0] in "{'" or word.lower() in ("dc", "ac", "sin", "sine", "pulse", "exp", "pwl"):
        return True
    try:
        parse_spice_number(word)
    except NotAQuantity:
        return False
    return True
