"""Findings, worst first: what is wrong, by how much, what one would see, and what mends it."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import replace

from checker.record import Accepted, Bound, Change, Effect, Finding, Location, Remedy, Report, Unchecked, Window
from checker.report.clean import clean, name
from checker.report.layout import NO_BREAK, Page, cells, hanging
from checker.report.quantities import given, number, words
from checker.words import Severity

TITLES: dict[Severity, str] = {"must-fix": "MUST FIX", "review": "REVIEW", "note": "NOTE"}
LABEL = 12
"""Columns that a label in front of a line takes, indent included."""
NAMED = 6
"""Scenarios that are named before the rest is only counted."""


def findings(report: Report, page: Page) -> list[str]:
    """Every finding as a block, an empty line before each; the same reasoning is given once."""
    by_fingerprint = {finding.fingerprint: finding for finding in report.findings}
    explained: set[str] = set()
    lines: list[str] = []
    for finding in report.findings:
        again = finding if finding.why not in explained else replace(finding, why="")
        lines += ["", *block(again, by_fingerprint, page)]
        if not _is_brief(finding, by_fingerprint):
            explained.add(finding.why)
    return lines


def block(finding: Finding, by_fingerprint: dict[str, Finding], page: Page) -> list[str]:
    """One finding, in full unless it is a note or follows from another; `by_fingerprint` finds that other."""
    lines = [*_title(finding, page), *hanging("  ", clean(finding.message), page)]
    told = _in_brief(finding) if _is_brief(finding, by_fingerprint) else _in_full(finding)
    cause = by_fingerprint.get(finding.caused_by or "")
    follows = [("follows", f"from {clean(cause.rule)} of {subject(cause)}")] if cause else []
    for label, text in (*told, *follows):
        lines += hanging(f"  {label}".ljust(LABEL), text, page, style="dim")
    return lines


def accepted(report: Report, page: Page) -> list[str]:
    """What the team lives with, and on whose word."""
    if not report.accepted:
        return []
    return [*page.heading("Accepted"), *(line for each in report.accepted for line in _accepted(each, page))]


def bearing(gap: Unchecked) -> str:
    """Where the line stands that a gap is about, and the stages that it bears on, in one clause; empty where no line
    is to blame."""
    at = f"at {place(gap.location)}" if gap.location is not None else ""
    stages = ", ".join(name(stage) for stage in gap.touches if stage != gap.subject)
    none = "bears on no stage" if at and not gap.touches else ""
    return "; ".join(filter(None, (at, f"bears on {stages}" if stages else none)))


def place(location: Location | None) -> str:
    """File, line and sheet."""
    if location is None:
        return ""
    line = f":{location.line}" if location.line else ""
    sheet = f" sheet {name(location.sheet)}" if location.sheet else ""
    return f"{name(location.file)}{line}{sheet}"


def _title(finding: Finding, page: Page) -> list[str]:
    severity = TITLES[finding.severity]
    told = f"{subject(finding)}  {clean(finding.rule)}"
    where = place(finding.location)
    gap = page.width - cells(f"{severity}  {told}{where}")
    if where:
        told += " " * gap + where if gap > 1 else f"  {where}"
    if gap > 1 or not where:
        return [f"{page.paint(severity, finding.severity)}  {told}"]
    return hanging(f"{severity}  ", told, page, style=finding.severity)


def subject(finding: Finding) -> str:
    """The parts a finding is about."""
    return ", ".join(map(name, finding.subject))


def _is_brief(finding: Finding, by_fingerprint: dict[str, Finding]) -> bool:
    return finding.severity == "note" or finding.caused_by in by_fingerprint


def _in_full(finding: Finding) -> Iterator[tuple[str, str]]:
    if finding.measured:
        yield "found", _measured(finding)
    if finding.limit:
        yield "limit", _limit(finding.limit)
    yield from _when(finding)
    if finding.effect:
        yield "you see", clean(finding.effect)
    if finding.why:
        yield "why", clean(finding.why)
    if finding.remedy:
        yield from _remedy(finding.remedy)


def _in_brief(finding: Finding) -> Iterator[tuple[str, str]]:
    limit = f" (limit: {_limit(finding.limit)})" if finding.limit else ""
    if finding.measured:
        yield "found", _measured(finding) + limit
    yield from _when(finding)
    if finding.remedy:
        yield "change", ", ".join(map(_change, finding.remedy.changes))


def facts(finding: Finding) -> list[tuple[str, str]]:
    """Label and text of everything known of a finding, clean, with plain spaces."""
    return [(label, text.replace(NO_BREAK, " ")) for label, text in _in_full(finding)]


def _when(finding: Finding) -> Iterator[tuple[str, str]]:
    if finding.outcome == "may-violate":
        corner = clean(finding.scenario) if finding.scenario else "some corner"
        yield "when", f"passes at nominal, fails in {corner}"
    elif finding.scenario:
        yield "when", f"worst in {clean(finding.scenario)}"
    if finding.state:
        yield "state", clean(finding.state)


def _measured(finding: Finding) -> str:
    measured = finding.measured
    if measured is None:
        return ""
    label = words(clean(measured.quantity))
    where = f" at {number(finding.frequency_hz, 'Hz')}" if finding.frequency_hz is not None else ""
    return f"{label} {number(measured.value, clean(measured.unit))}{where}".strip()


def _limit(limit: Bound | Window) -> str:
    unit = clean(limit.unit)
    if isinstance(limit, Window):
        told = f"{given(limit.low, unit)} to {given(limit.high, unit)}"
    else:
        told = f"{limit.relation} {given(limit.value, unit)}"
    return f"{told}, {clean(limit.source)}" if limit.source else told


def _remedy(remedy: Remedy) -> Iterator[tuple[str, str]]:
    yield "change", ", ".join(map(_change, remedy.changes))
    if remedy.effects:
        yield "then", "; ".join(map(_effect, remedy.effects))
    if remedy.verified_over:
        yield "tried in", some(remedy.verified_over)


def _change(change: Change) -> str:
    label = words(clean(change.property))
    what = f"{name(change.part)} {label}".rstrip()
    return f"{what} {_value(change.from_, change.unit)} → {_value(change.to, change.unit)}"


def _value(value: float | str | None, unit: str) -> str:
    return name(value) if isinstance(value, str) else given(value, clean(unit))


def _effect(effect: Effect) -> str:
    owner = f"{name(effect.subject)} " if effect.subject else ""
    before, after = (number(value, clean(effect.unit)) for value in (effect.before, effect.after))
    return f"{owner}{words(clean(effect.quantity))} {before} → {after}"


def some(names: tuple[str, ...]) -> str:
    """The first few names, the rest counted."""
    shown = ", ".join(map(name, names[:NAMED]))
    return f"{shown} and {len(names) - NAMED} more" if len(names) > NAMED else shown


def _accepted(each: Accepted, page: Page) -> list[str]:
    until = f" until {clean(each.until)}" if each.until else ""
    told = f"{clean(each.finding.message)} By {name(each.by)}{until}: {clean(each.reason)}"
    return [
        *hanging("  ", f"{subject(each.finding)}  {clean(each.finding.rule)}", page),
        *hanging("    ", told, page),
    ]
