"""The three terminals that every transistor has: output, control and common, by the words of its kind."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Final

from checker.words import Terminal

OUTPUT, CONTROL, COMMON = range(3)
"""Columns of a device's nets and of its block."""

WORDS: Final[Mapping[str, tuple[Terminal, Terminal, Terminal]]] = {
    "bipolar": ("collector", "base", "emitter"),
    "jfet": ("drain", "gate", "source"),
    "mosfet": ("drain", "gate", "source"),
}
"""Family -> words for output, control and common terminal."""

NUMBER: Final[Mapping[Terminal, int]] = {
    word: number for words in (WORDS["bipolar"], WORDS["mosfet"]) for number, word in enumerate(words)
}
