"""The working behind the figures of one subject: what `stageproof why` prints."""

from __future__ import annotations

from collections.abc import Sequence

from checker.record import Finding, Report, WorkingLine, in_order, natural
from checker.report.clean import clean, name
from checker.report.layout import Page, finished, hanging
from checker.report.quantities import number, words
from checker.report.sections.details import details
from checker.report.sections.findings import block
from checker.trouble import InputTrouble


def render_why(report: Report, subject: str, workings: Sequence[WorkingLine], *, width: int, colour: bool) -> str:
    """What is known of `subject`, and how its figures were got.

    `subject`: a stage, group, port or part, or a finding by rule or fingerprint (then the workings of all
    that the finding is about follow). Raises InputTrouble for a subject that the report does not know.
    """
    page, report = Page(width=width, colour=colour), in_order(report)
    found = _findings(report, subject)
    about = _about(subject, found)
    shown = [line for line in workings if line.subject in about]
    stage = next((stage for stage in report.stages if stage.id == subject), None)
    if not (found or shown or stage):
        raise InputTrouble(_unknown(report, subject, workings))
    lines = details(report, stage, page) if stage else []
    by_fingerprint = {finding.fingerprint: finding for finding in report.findings}
    for finding in found:
        lines += ["", *block(finding, by_fingerprint, page)]
    for line in shown:
        lines += ["", *_working(line, page)]
    if not shown:
        lines += ["", f"No working was kept for {name(subject)}."]
    return finished(lines[1:] if lines[0] == "" else lines)


def _findings(report: Report, subject: str) -> list[Finding]:
    every = [*report.findings, *(each.finding for each in report.accepted)]
    return [f for f in every if subject in (f.rule, f.fingerprint) or subject in f.subject]


def _about(subject: str, found: Sequence[Finding]) -> set[str]:
    """The subject itself; of a finding asked for by rule or fingerprint, all that it is about."""
    asked_for = [finding for finding in found if subject in (finding.rule, finding.fingerprint)]
    return {subject, *(part for finding in asked_for for part in finding.subject)}


def _working(line: WorkingLine, page: Page) -> list[str]:
    title = f"{name(line.subject)}  {words(clean(line.quantity))}"
    lines = [page.paint(title, "bold") + (f" = {clean(line.result)}" if line.result else "")]
    lines += hanging("  ", clean(line.formula), page) if line.formula else []
    if line.numbers:
        put_in = ", ".join(f"{clean(symbol)} = {number(si, clean(unit), 4)}" for symbol, si, unit in line.numbers)
        lines += hanging("  with  ", put_in, page, style="dim")
    return lines + (hanging("  from  ", clean(line.source), page, style="dim") if line.source else [])


def _unknown(report: Report, subject: str, workings: Sequence[WorkingLine]) -> str:
    from difflib import get_close_matches  # costs start-up time and is needed only here

    known = {stage.id for stage in report.stages} | {line.subject for line in workings}
    known |= {finding.rule for finding in report.findings}
    near = get_close_matches(subject, sorted(known), n=3)
    hint = f"did you mean {' or '.join(map(name, near))}?" if near else _some(sorted(known, key=natural))
    return f"nothing in the report is called {name(subject)}; {hint}"


def _some(known: Sequence[str]) -> str:
    if not known:
        return "it holds no stage and no finding"
    more = ", ..." if len(known) > 12 else ""
    return f"it knows {', '.join(map(name, known[:12]))}{more}"
