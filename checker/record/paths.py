"""Paths into a report, as `unavailable` uses them, and the nulls that nobody explained."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import fields

from checker.record.base import Record, key_of
from checker.record.report import Report


def at(*segments: str) -> str:
    """The path of a value, e.g. `at("stages", "Q1", "specs", "low_corner_hz")`; "/" and "~" are escaped."""
    return "/".join(segment.replace("~", "~0").replace("/", "~1") for segment in segments)


def reason_for(report: Report, *segments: str) -> str:
    """Why the value there is null: the reason of its own path, else of the nearest one above it, else ""."""
    for length in range(len(segments), 0, -1):
        reason = report.unavailable.get(at(*segments[:length]))
        if reason:
            return reason
    return ""


def unexplained(report: Report) -> list[str]:
    """Paths of all figures that are null without a reason. A finished report has none."""
    return [at(*path) for path in _nulls(report) if not reason_for(report, *path)]


_NO_FIGURE = {
    *("entry", "exit", "input_ref", "output_ref", "links", "location", "card"),
    *("role", "reference_ohm", "dominant", "agrees"),
}
"""Fields whose null is an answer, not a gap in the figures."""


def _nulls(report: Report) -> Iterator[tuple[str, ...]]:
    for net, net_figures in report.nets.items():
        yield from _of(net_figures, ("nets", net))
    for island in report.islands:
        yield from _of(island, ("islands", min(island.nets, default="")))
    for stage in report.stages:
        yield from _of(stage, ("stages", stage.id))
    for group in report.groups:
        yield from _of(group, ("groups", group.id))
    for port in report.ports:
        yield from _of(port, ("ports", port.name))
    for gain in report.gains:
        yield from _of(gain, ("gains", gain.from_, gain.to))


def _of(value: object, path: tuple[str, ...]) -> Iterator[tuple[str, ...]]:
    if value is None:
        yield path
    elif isinstance(value, Record):
        for each in fields(value):
            if each.name not in _NO_FIGURE:
                yield from _of(getattr(value, each.name), (*path, key_of(each.name)))
    elif isinstance(value, Mapping):
        for key, item in value.items():
            yield from _of(item, (*path, key))
