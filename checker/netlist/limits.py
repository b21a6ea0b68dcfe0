"""Bounds on what a netlist may cost to read, and the folders it may be read from. Each overflow is one message that
names the option which raises the bound."""

from __future__ import annotations

from dataclasses import field
from pathlib import Path
from typing import Literal, NoReturn

from checker.shape import frozen
from checker.trouble import InputTrouble

MOST_TEXT = 500
"""Characters read of a text that says what a part is: its value, symbol, description, a field, a pin's name. Real ones
have some hundred at most, and patterns are tried on them. Names of nets and parts are kept whole."""

Limit = Literal["bytes", "parts", "depth", "elements", "steps"]


@frozen
class ReadLimits:
    """`bytes` read in all, includes counted each time; `parts` as written, other cards counted like them; `depth` of
    nesting (brackets, includes, subcircuits, expressions); `elements` after subcircuits are expanded, nets and pins,
    words of one card; `steps` of one expression. Far above any board, low enough that a hostile file ends within
    half a minute."""

    bytes: int = 32 * 1024 * 1024
    parts: int = 200_000
    depth: int = 64
    elements: int = 1_000_000
    steps: int = 10_000


@frozen
class Reading:
    """How netlists are read in one run: `folders` beside the netlist's own that includes may name, limits, and a file
    of the project's own `cards` (None: the one beside the netlist, if any)."""

    folders: tuple[Path, ...] = ()
    limits: ReadLimits = field(default_factory=ReadLimits)
    cards: Path | None = None


def over(limit: Limit, bound: int, what: str, *, file: str, line: int = 0) -> NoReturn:
    """Raise the `InputTrouble` of an exceeded limit: where, what, the bound, what to do."""
    raise InputTrouble(
        f"{what}: more than the limit of {bound}; if the file is trusted, --most-{limit} raises it",
        file=file,
        line=line,
    )
