"""What could not be judged, what was assumed, and what to beware of."""

from __future__ import annotations

from collections.abc import Sequence

from checker.record import Report, Unchecked
from checker.report.clean import clean, name
from checker.report.layout import Page, hanging
from checker.report.sections.findings import place

MOST = 8
"""Places and stages listed in a line; the rest is counted."""


def unchecked(report: Report, page: Page) -> list[str]:
    """Per missing datum: what to supply, and for which subjects and rules, since one datum often clears many."""
    if not report.unchecked:
        return []
    wanted: dict[tuple[str, str], list[Unchecked]] = {}
    for each in report.unchecked:
        wanted.setdefault((each.datum, each.supply), []).append(each)
    lines = page.heading("Not judged, because this is missing")
    for (datum, supply), gaps in wanted.items():
        subjects = [f"{name(gap.subject)} {clean(gap.rule) if gap.rule else 'everything'}" for gap in gaps]
        lines += hanging("  - ", clean(datum), page)
        lines += hanging("    for     ", ", ".join(subjects), page, style="dim")
        lines += hanging("    supply  ", clean(supply), page, style="dim") if supply else []
        lines += _where(gaps, page)
    return lines


def _where(gaps: Sequence[Unchecked], page: Page) -> list[str]:
    """The lines that are to blame, and the stages that the gap bears on besides those it is named for."""
    places = list(dict.fromkeys(place(gap.location) for gap in gaps if gap.location is not None))
    own = {gap.subject for gap in gaps}
    stages = list(dict.fromkeys(stage for gap in gaps for stage in gap.touches if stage not in own))
    lines = hanging("    at      ", _few(places), page, style="dim") if places else []
    bears = "no stage" if places and not any(gap.touches for gap in gaps) else _few(list(map(name, stages)))
    return lines + (hanging("    bears on  ", bears, page, style="dim") if bears else [])


def _few(names: Sequence[str]) -> str:
    more = f" and {len(names) - MOST} more" if len(names) > MOST else ""
    return ", ".join(names[:MOST]) + more


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
