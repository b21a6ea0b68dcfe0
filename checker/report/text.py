"""The report for a person: verdict, worst findings, then the figures and what they rest on."""

from __future__ import annotations

from checker.record import Report, in_order
from checker.report.layout import Page, finished
from checker.report.sections import board, findings, lists, opening, since, stages


def render(report: Report, *, width: int, colour: bool) -> str:
    """The whole report in lines of at most `width` columns; every name in it is neutralised."""
    page, report = Page(width=width, colour=colour), in_order(report)
    lines = [
        *opening.opening(report, page),
        *findings.findings(report, page),
        *since.since(report, page),
        *stages.stages(report, page),
        *board.ports(report, page),
        *board.gains(report, page),
        *board.groups(report, page),
        *board.rails(report, page),
        *board.proofs(report, page),
        *lists.unchecked(report, page),
        *lists.assumptions(report, page),
        *lists.cautions(report, page),
        *findings.accepted(report, page),
    ]
    return finished(lines)
