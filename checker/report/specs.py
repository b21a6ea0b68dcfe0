"""The stages alone, in full: what `stageproof specs` prints."""

from __future__ import annotations

from checker.record import Report, in_order
from checker.report.layout import Page, finished
from checker.report.sections.details import details
from checker.report.sections.opening import conditions
from checker.report.sections.stages import stages


def render_specs(report: Report, *, width: int, colour: bool) -> str:
    """The stage tables, then everything that is known of each stage."""
    page, report = Page(width=width, colour=colour), in_order(report)
    count = len(report.stages)
    title = f"{count} stage{'' if count == 1 else 's'}" if count else "No transistor stage"
    lines = [page.paint(title, "bold"), *conditions(report, page), *stages(report, page)]
    for stage in report.stages:
        lines += ["", *details(report, stage, page)]
    return finished(lines)
