"""A card into words: positional ones and `name=value` pairs. Brackets and commas only part words."""

from __future__ import annotations

import re

from checker.pattern import lazy
from checker.shape import frozen

_PIECE = lazy(
    r"\{[^{}]*\}|'[^']*'|\"[^\"]*\"|[=(),]"
    # A word may hold a group in braces (`~{RST}`), or a bracket after a hyphen (`Net-(Q1-Pad2)`).
    r"|[^\s=(),{}'\"](?:[^\s=(),{}]|\{[^{}\s]*\}|(?<=-)\([^\s()]*\))*"
    r"|\S"
)
_MARK = lazy(r"[={}'\"]|-\(")
"""What makes a card more than words between blanks, brackets and commas; most cards have none."""
_BLANKED = str.maketrans("(),", "   ")
_REST = lazy(r"[^\s=(),{}]*")
_VALUE_RUN = lazy(r"[^\s(),{}'\"=]*")
_BLANKS = lazy(r"\s*")
_COMMA_NUMBER = lazy(r"\d+,\d+(?=[A-Za-zµμΩ]|\s|$)")
_COMMA_FROM = 3
"""A decimal comma is looked for only behind the name and two nodes, where commas may part nodes."""
_NAME = lazy(r"[A-Za-z_][\w.]*")
_ASSIGNMENT = lazy(r"\{[^{}]*\}|'[^']*'|\"[^\"]*\"|(?<![\w.])([A-Za-z_][\w.]*)\s*=(?!=)")


@frozen
class Words:
    """`positional` in order; `named` by lower-case name, each as written (braces kept); `groups` the words
    that follow the first in a `name=a,b` pair."""

    positional: tuple[str, ...]
    named: dict[str, str]
    groups: dict[str, tuple[str, ...]]


def split_words(text: str, *, decimal_comma: bool = False) -> Words:
    """Split a card. With `decimal_comma`, a lone `4,7uH` from the fourth word on stays one word."""
    if not (_MARK.search(text) or (decimal_comma and "," in text)):
        return Words(positional=_kept(text.translate(_BLANKED).split()), named={}, groups={})
    positional: list[str] = []
    named: dict[str, str] = {}
    groups: dict[str, tuple[str, ...]] = {}
    at = 0
    while found := _PIECE.search(text, at):
        piece = found.group()
        at = found.end()
        if piece == "=" and positional:
            key = positional.pop().lower()
            named[key], at = _value(text, at)
            more, at = _more_values(text, at)
            if more:
                groups[key] = more
        elif decimal_comma and len(positional) >= _COMMA_FROM and (comma := _COMMA_NUMBER.match(text, found.start())):
            at = _end(_REST, text, comma.end())
            positional.append(text[found.start() : at])
        elif piece not in "=(),":
            positional.append(piece)
    return Words(positional=_kept(positional), named=named, groups=groups)


def _kept(words: list[str]) -> tuple[str, ...]:
    """The words but for `params:`, which only says that pairs follow."""
    return tuple(word for word in words if word[-1] != ":" or word.lower() != "params:")


def _value(text: str, at: int) -> tuple[str, int]:
    """The value behind an equals sign: a quoted or braced text, or all up to a blank, comma or closing
    bracket that belongs to no bracket of its own; and where it ends."""
    start = _end(_BLANKS, text, at)
    opened = text[start : start + 1]
    if opened and opened in "{'\"":
        end = text.find({"{": "}"}.get(opened, opened), start + 1)
        return (text[start : end + 1], end + 1) if end >= 0 else (text[start:].rstrip(), len(text))
    depth, end = 0, start
    while True:
        end = _end(_VALUE_RUN, text, end)
        mark = text[end : end + 1]
        if mark == "(":
            depth += 1
        elif mark == ")" and depth:
            depth -= 1
        elif not (mark and depth and mark != "="):
            return text[start:end], end
        end += 1


def _end(pattern: re.Pattern[str], text: str, at: int) -> int:
    """Where a pattern that always matches ends."""
    found = pattern.match(text, at)
    return found.end() if found else at


def _more_values(text: str, at: int) -> tuple[tuple[str, ...], int]:
    values = []
    while text[at : at + 1] == ",":
        value, at = _value(text, at + 1)
        values.append(value)
    return tuple(values), at


def split_assignments(text: str) -> list[tuple[str, str]]:
    """`a=1 b = {2*a}` (or `c 3` alone) into lower-case names and expression texts, which may hold blanks and
    brackets; an equals sign within braces or quotes assigns nothing."""
    starts = [match for match in _ASSIGNMENT.finditer(text) if match[1]]
    pairs = []
    for index, match in enumerate(starts):
        end = starts[index + 1].start() if index + 1 < len(starts) else len(text)
        pairs.append((match[1].lower(), text[match.end() : end].strip().rstrip(",").strip()))
    if not starts:
        words = text.split(None, 1)
        if len(words) == 2 and _NAME.fullmatch(words[0]):
            pairs.append((words[0].lower(), words[1].strip()))
    return pairs
