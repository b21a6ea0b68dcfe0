"""Bounds on what a netlist may cost to read. Each overflow is one message that names the limit."""

from __future__ import annotations

from typing import NoReturn

from checker.shape import frozen
from checker.trouble import InputTrouble


@frozen
class ReadLimits:
    """`bytes` read in all, includes counted each time; `parts` as written; `depth` of nesting (brackets,
    includes, subcircuits, expressions); `expanded` parts after subcircuits; `steps` of one expression. Far
    above any board, low enough that a hostile file ends within seconds."""

    bytes: int = 32 * 1024 * 1024
    parts: int = 200_000
    depth: int = 64
    expanded: int = 1_000_000
    steps: int = 10_000


def over(limit: str, bound: int, what: str, *, file: str, line: int = 0) -> NoReturn:
    """Raise the `InputTrouble` of an exceeded limit: where, what, the bound, what to do."""
    raise InputTrouble(
        f"{what}: more than the limit `{limit}` of {bound} allows; raise that limit if the file is trusted",
        file=file,
        line=line,
    )
