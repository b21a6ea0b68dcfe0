"""What could not be judged, what was assumed, and what to beware of."""

from __future__ import annotations

from collections.abc import Sequence

from checker.record import Report
from checker.report.clean import clean, name
from checker.report.layout import Page, hanging


def unchecked(report: Report, page: Page) -> list[str]:
    """Per missing datum: what to supply, and for which subjects and rules, since one datum often clears many."""
    if not report.unchecked:
        return []
    wanted: dict[tuple[str, str], list[str]] = {}
    for each in report.unchecked:
        rule = clean(each.rule) if each.rule else "everything"
        wanted.setdefault((each.datum, each.supply), []).append(f"{name(each.subject)} {rule}")
    lines = page.heading("Not judged, because this is missing")
    for (datum, supply), subjects in wanted.items():
        lines += hanging("  - ", clean(datum), page)
        lines += hanging("    for     ", ", ".join(subjects), page, style="dim")
        lines += hanging("    supply  ", clean(supply), page, style="dim") if supply else []
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
