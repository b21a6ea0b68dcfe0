"""Everything that is known of one stage, below its row in the tables."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import fields

from checker.record import Complex, Connection, Report, Span, Stage
from checker.record.base import Record
from checker.report.clean import clean, name
from checker.report.layout import Page, hanging
from checker.report.quantities import figure, polar, unit_of, words
from checker.report.sections.dashes import Null, dashes
from checker.report.sections.findings import LABEL, place


def details(report: Report, stage: Stage, page: Page) -> list[str]:
    """Data used, the way the signal takes, all figures, their spread, and the evidence."""
    lines = hanging(f"{name(stage.id)}  ", _what(stage), page, style="bold")
    for label, text in _told(stage):
        lines += hanging(f"  {label}".ljust(LABEL), text, page, style="dim")
    return [*lines, *dashes(report, list(_nulls(stage)), page)]


def _nulls(stage: Stage) -> Iterator[Null]:
    for part, where in (("specs", ""), ("terminal", " at the terminals")):
        missing = [key for key, value in _items(getattr(stage, part)) if value is None]
        if len(missing) == len(fields(getattr(stage, part))):
            yield f"all figures{where or ' loaded'}", ("stages", stage.id, part, "voltage_gain")
            continue
        for key in missing:
            yield f"{words(key)}{where}", ("stages", stage.id, part, key)


def _what(stage: Stage) -> str:
    return f"{stage.configuration}, {stage.role}, recognised with confidence {stage.confidence:.2f}"


def _told(stage: Stage) -> Iterator[tuple[str, str]]:
    if stage.location:
        yield "drawn in", place(stage.location)
    if stage.card:
        yield "data", f"{name(stage.card.name)}, {clean(stage.card.source)}"
    if way := ", ".join(_way(stage)):
        yield "signal", way
    for label, part in (("at rest", stage.bias), ("intrinsic", stage.small_signal), ("loaded", stage.specs)):
        if part is not None and (told := _figures(part)):
            yield label, told
    if told := _figures(stage.terminal):
        yield "terminals", told
    if stage.spread:
        yield "spread", "; ".join(_span(key, stage.spread[key]) for key in sorted(stage.spread))
    if stage.evidence:
        yield "because", "; ".join(map(clean, stage.evidence))


def _way(stage: Stage) -> Iterator[str]:
    if stage.entry:
        yield f"in at {_at(stage.entry)}{_through(stage, 'input', 'from')}"
    if stage.exit:
        yield f"out at {_at(stage.exit)}{_through(stage, 'output', 'to')}"


def _at(connection: Connection) -> str:
    return f"{clean(connection.terminal)} (net {name(connection.net)})"


def _through(stage: Stage, side: str, word: str) -> str:
    told = ""
    for link in (link for link in stage.links if link.side == side):
        told += f" through {name(link.part)}" if link.part else " directly"
        told += f" {word} {name(link.other)}" if link.other else ""
    return told


def _items(part: Record) -> Iterator[tuple[str, object]]:
    return ((each.name, getattr(part, each.name)) for each in fields(part))


def _figures(part: Record) -> str:
    shown = ((words(key), _figure(value, key)) for key, value in _items(part))
    return ", ".join(f"{label} {text}" for label, text in shown if text)


def _figure(value: object, key: str) -> str:
    if isinstance(value, Complex) and not unit_of(key):
        return polar(value)
    return figure(value, key) if isinstance(value, (Complex, float)) else ""


def _span(key: str, span: Span) -> str:
    mostly = f", mostly by {name(span.dominant)}" if span.dominant else ""
    return f"{words(clean(key))} {figure(span.min, key)} to {figure(span.max, key)}{mostly}"
