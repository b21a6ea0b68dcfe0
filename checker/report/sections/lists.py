"""What could not be judged, what was assumed, and what to beware of."""

from __future__ import annotations

from collections.abc import Sequence

from checker.record import Report
from checker.report.clean import clean, name
from checker.report.layout import Page, hanging


def unchecked(report: Report, page: Page) -> list[str]:
    """Per subject: the rule, what is missing, and what to supply."""
    if not report.unchecked:
        return []
    lines = page.heading("Not judged, for want of data")
    for each in report.unchecked:
        rule = clean(each.rule) if each.rule else "everything"
        lines += hanging(f"  {name(each.subject)}  {rule}: ", f"needs {clean(each.datum)}", page)
        lines += hanging("      supply  ", clean(each.supply), page, style="dim") if each.supply else []
    return lines


def assumptions(report: Report, page: Page) -> list[str]:
    """What was taken for granted."""
    return _bullets("Assumed", report.assumptions, page)


def cautions(report: Report, page: Page) -> list[str]:
    """What to know before trusting a figure."""
    return _bullets("Cautions", report.cautions, page)


def _bullets(title: str, texts: Sequence[str], page: Page) -> list[str]:
    if not texts:
        return []
    return [*page.heading(title), *(line for text in texts for line in hanging("  - ", clean(text), page))]
