"""SPICE-style text into cards: comments off, continuation lines joined, control blocks passed over.

A `+` line continues the last card, also across blank and comment lines. Comments: a line that begins with
`*`, `;`, `#` or `//`; the rest of a line after `;`, after ` $` or after ` //`.
"""

from __future__ import annotations

import re

from checker.netlist.limits import ReadLimits, over
from checker.netlist.types import Remark
from checker.pattern import lazy
from checker.quantity.value import Origin
from checker.shape import frozen

_COMMENT = lazy(r"\"[^\"]*\"|(;|(?<!\S)\$(?![A-Za-z]_)|(?<!\S)//)")
_PATH_COMMENT = lazy(r"\"[^\"]*\"|(;|(?<!\S)\$(?=\s|$))")
"""What a `$` begins is a comment, but for nets such as `$N_0001` and paths."""
_PATH_CARD = lazy(r"\s*\.(inc|lib)", re.IGNORECASE)


@frozen
class Card:
    """One logical line: `text` without comments; `file` and `line` where it begins."""

    text: str
    file: str
    line: int

    @property
    def origin(self) -> Origin:
        return Origin(kind="netlist", file=self.file, line=self.line)

    def remark(self, text: str, *parts: str) -> Remark:
        """A remark that stands at this card."""
        return Remark(text=text, origin=self.origin, parts=parts)

    def lost(self, text: str, *, everywhere: bool = False) -> Remark:
        """A remark that the card is not understood. Its words stand for the nets until all nets are known."""
        words = () if everywhere else tuple(self.text.split()[1:])
        return Remark(text=text, origin=self.origin, lost=True, nets=words, everywhere=everywhere)


def cards_of(text: str, *, file: str, limits: ReadLimits, first_line: int = 1) -> tuple[list[Card], list[Remark]]:
    """The cards of one file up to `.end`, and remarks on what was passed over. `first_line`: number of the
    first line of `text` in the file. Raises `InputTrouble` for more cards than the limit `parts` allows."""
    pieces: list[tuple[int, list[str]]] = []
    remarks: list[Remark] = []
    control = ended = 0
    last = ""
    for number, line in enumerate(text.split("\n"), start=first_line):
        bare = without_comment(line)
        if not bare:
            continue
        word = bare.split(None, 1)[0].lower()
        if ended:
            remarks.append(_remark(f"what follows the {last} of line {ended} is not read", file, number))
            break
        if control:
            control = 0 if word == ".endc" else control
        elif word == ".control":
            control = number
            remarks.append(_remark("a control block is passed over: it holds commands, no parts", file, number))
        elif word in (".end", ".alter"):
            ended, last = number, word
        elif bare[0] != "+":
            pieces.append((number, [bare]))
            if len(pieces) > limits.parts:
                over("parts", limits.parts, "too many elements and cards", file=file, line=number)
        elif pieces:
            pieces[-1][1].append(bare[1:])
        else:
            stray = Card(text=bare, file=file, line=number)
            remarks.append(stray.lost("a continuation line with nothing before it is passed over"))
    if control:
        block = Card(text="", file=file, line=control)
        text = "the control block never ends: all that follows it is passed over"
        remarks.append(block.lost(text, everywhere=True))
    return [Card(text=" ".join(parts), file=file, line=number) for number, parts in pieces], remarks


def without_comment(line: str) -> str:
    """`line` without its comment and outer blanks; empty for a comment line."""
    bare = line.strip()
    if not bare or bare[0] in "*;#":
        return ""
    if ";" not in bare and "$" not in bare and "//" not in bare:
        return bare
    pattern = _PATH_COMMENT if _PATH_CARD.match(bare) else _COMMENT
    for match in pattern.finditer(bare):
        if match[1]:
            return bare[: match.start()].rstrip()
    return bare


def _remark(text: str, file: str, line: int) -> Remark:
    return Remark(text=text, origin=Origin(kind="netlist", file=file, line=line))
