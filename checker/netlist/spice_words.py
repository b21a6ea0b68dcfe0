"""A card into words: positional ones and `name=value` pairs. Brackets and commas only part words."""

from __future__ import annotations

import re
from dataclasses import dataclass

_TOKEN = re.compile(r"\{[^{}]*\}|'[^']*'|\"[^\"]*\"|[=(),]|[^\s=(),{}'\"][^\s=(),{}]*|\S")
_COMMA_NUMBER = re.compile(r"(?<=\s)\d+,\d+(?=[A-Za-zµμΩ]|\s|$)")
_NAME = re.compile(r"[A-Za-z_][\w.]*")
_ASSIGNMENT = re.compile(r"\{[^{}]*\}|'[^']*'|\"[^\"]*\"|(?<![\w.])([A-Za-z_][\w.]*)\s*=(?!=)")


@dataclass(frozen=True, slots=True, kw_only=True)
class Words:
    """`positional` in order; `named` by lower-case name, each as written (braces kept); `groups` the words
    that follow the first in a `name=a,b` pair."""

    positional: tuple[str, ...]
    named: dict[str, str]
    groups: dict[str, tuple[str, ...]]


def split_words(text: str, *, decimal_comma: bool = False) -> Words:
    """Split a card. With `decimal_comma`, a lone `4,7uH` from the fourth word on stays one word."""
    pieces = _tokens(text, decimal_comma)
    positional: list[str] = []
    named: dict[str, str] = {}
    groups: dict[str, tuple[str, ...]] = {}
    index = 0
    while index < len(pieces):
        piece = pieces[index]
        index += 1
        if piece == "=" and positional and index < len(pieces):
            key = positional.pop().lower()
            index += pieces[index] == "("
            named[key] = pieces[index] if index < len(pieces) else ""
            index += 1
            more = []
            while index + 1 < len(pieces) and pieces[index] == ",":
                more.append(pieces[index + 1])
                index += 2
            if more:
                groups[key] = tuple(more)
        elif piece not in "=(),":
            positional.append(piece)
    return Words(
        positional=tuple(word for word in positional if word.lower() != "params:"), named=named, groups=groups
    )


def _tokens(text: str, decimal_comma: bool) -> list[str]:
    if decimal_comma and "," in text:
        head = text.split(None, 3)
        if len(head) == 4 and "," in head[3]:
            kept = _COMMA_NUMBER.sub(lambda found: found.group().replace(",", "\x1f"), " " + head[3])
            pieces = [*head[:3], *_TOKEN.findall(kept)]
            return [piece.replace("\x1f", ",") for piece in pieces]
    return _TOKEN.findall(text)


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
