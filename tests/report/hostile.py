"""A report in which every text that may come from outside tries to break out of its form."""

from __future__ import annotations

from dataclasses import fields, replace
from typing import Any

from checker.record import Location, Report, Since
from checker.record.base import Record
from tests.record.invented import report

NASTY = (
    ']]></system-out><x a="1">&amp;\'"--><script>alert(1)</script> [text](http://evil.example) ![p](//evil.example) '
    "{0} `code` **b** _i_ | cell | @everyone #12 www.evil.example \\[ \x1b[2J \u202e \x00 \n# head\n"
)
PATH = "boards/a b%#?&<\u202e>é.net"


def hostile() -> Report:
    """The invented report with `NASTY` at the end of every free text, and paths that need encoding."""
    made = report()
    nasty = _spoilt(made)
    spoilt = replace(
        nasty,
        tool=made.tool,
        netlist=replace(made.netlist, path=PATH),
        schema=made.schema,
        incomplete=True,
        faults=(NASTY,),
        since=Since(path=NASTY, new=(nasty.findings[0].fingerprint,), cured=nasty.findings[1:2]),
    )
    where = Location(file=PATH, line=9, sheet=f"/{NASTY}/")
    return replace(spoilt, findings=tuple(replace(each, location=where) for each in spoilt.findings))


WORDS = frozenset(
    {"outcome", "severity", "relation", "role", "configuration", "kind", "side", "source", "region", "search", "format"}
)
"""Fields that hold a word of the vocabulary and nothing else."""


def _spoilt(value: Any, key: str = "") -> Any:
    if isinstance(value, str):
        return value if key in WORDS else value + NASTY
    if isinstance(value, Record):
        return replace(value, **{f.name: _spoilt(getattr(value, f.name), f.name) for f in fields(value)})
    if isinstance(value, tuple):
        return tuple(_spoilt(each, key) for each in value)
    if isinstance(value, dict):
        return {(name if key == "unavailable" else name + NASTY): _spoilt(each, key) for name, each in value.items()}
    return value
