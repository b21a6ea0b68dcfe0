"""What could not be judged, what was assumed, and what to beware of."""

from __future__ import annotations

from collections.abc import Sequence

from checker.record import Report, Unchecked
from checker.report.clean import clean, name
from checker.report.layout import Page, hanging
from checker.report.sections.findings import place

MOST = 8
"""Places and stages listed in a line; the rest is counted."""
ASIDE = 3
"""Parts that bear on no stage up to which each has an entry of its own."""


def unchecked(report: Report, page: Page) -> list[str]:
    """Per missing datum: what to supply, and for which subjects and rules, since one datum often clears many.

    Data that no line is to blame for share an entry where the same thing would supply them; parts that bear on no
    stage, where there are many, share one that only names them.
    """
    if not report.unchecked:
        return []
    aside = [gap for gap in report.unchecked if _is_aside(gap)]
    aside = aside if len(aside) > ASIDE else []
    wanted: dict[tuple[str, str], list[Unchecked]] = {}
    for each in report.unchecked:
        if each not in aside:
            alike = each.location is None and each.supply
            wanted.setdefault(("" if alike else each.datum, each.supply), []).append(each)
    lines = page.heading("Not judged, because this is missing")
    for (_, supply), gaps in wanted.items():
        subjects = [f"{name(gap.subject)} {clean(gap.rule) if gap.rule else 'everything'}" for gap in gaps]
        data = dict.fromkeys(clean(gap.datum) for gap in gaps)
        lines += hanging("  - ", ", ".join(data), page)
        lines += hanging("    for     ", ", ".join(subjects), page, style="dim")
        lines += hanging("    supply  ", clean(supply), page, style="dim") if supply else []
        lines += _where(gaps, page)
    return lines + _named_only(aside, page)


def _is_aside(gap: Unchecked) -> bool:
    """Whether a gap is a part's, in a line, and bears on no stage; a line that was not understood is never aside."""
    return gap.location is not None and not (gap.touches or gap.rule or gap.subject.startswith("line "))


def _named_only(gaps: Sequence[Unchecked], page: Page) -> list[str]:
    if not gaps:
        return []
    files = {gap.location.file for gap in gaps if gap.location is not None}
    told = [f"{clean(gap.datum)} ({_line(gap, one_file=len(files) == 1)})" for gap in gaps]
    title = f"{len(gaps)} that bear on no stage; the JSON form has what to supply"
    return [*hanging("  - ", title, page), *hanging("    ", "; ".join(told), page, style="dim")]


def _line(gap: Unchecked, *, one_file: bool) -> str:
    at = gap.location
    return f"line {at.line}" if at is not None and at.line and one_file else place(at)


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
