"""The comparison for a person at a terminal."""

from __future__ import annotations

from checker.record import Finding
from checker.record.comparison import Changed, Comparison
from checker.report.clean import clean, name
from checker.report.comparison import edited, row, titled, traced, verdict
from checker.report.layout import Page, finished, hanging, table
from checker.report.sections.findings import block
from checker.report.sections.since import brief


def render(comparison: Comparison, *, width: int, colour: bool) -> str:
    """What changed: verdict, new findings, edits, stages, then what was cured and what stays."""
    page = Page(width=width, colour=colour)
    by_fingerprint = {finding.fingerprint: finding for finding in comparison.new_findings}
    lines = [
        page.paint(verdict(comparison), "must-fix" if comparison.new_findings else "good"),
        *hanging("  ", f"from {name(comparison.old.name)} to {name(comparison.new.name)}", page),
        *_coverage(comparison, page),
    ]
    for finding in comparison.new_findings:
        lines += ["", *block(finding, by_fingerprint, page)]
    lines += _edits(comparison, page)
    for change in comparison.changed:
        lines += _change(change, page)
    for title, findings in (
        ("Cured", comparison.cured),
        ("No longer judged", comparison.unjudged),
        ("Unchanged findings", comparison.unchanged),
    ):
        lines += _listed(title, findings, page)
    return finished(lines)


def _coverage(comparison: Comparison, page: Page) -> list[str]:
    old, new = comparison.old, comparison.new
    told = f"{new.checked} of {new.of} stages checked, before {old.checked} of {old.of}"
    lines = hanging("  ", told, page)
    for side in (old, new):
        if side.incomplete:
            lines += hanging(
                "INCOMPLETE  ", f"a part of the program failed on {name(side.name)}", page, style="must-fix"
            )
    return lines


def _edits(comparison: Comparison, page: Page) -> list[str]:
    lines: list[str] = []
    if comparison.edits:
        rows = map(edited, comparison.edits)
        lines += [*page.heading("Edited"), *table(("part", "change", "belongs to"), rows, "lll", page)]
    if comparison.conditions:
        conditions = [(clean(each.what), clean(each.before), clean(each.after)) for each in comparison.conditions]
        lines += [*page.heading("Conditions"), *table(("what", "before", "after"), conditions, "lll", page)]
    if comparison.renumbered:
        pairs = ", ".join(f"{name(old)} → {name(new)}" for old, new in comparison.renumbered.items())
        lines += [*page.heading("Renumbered"), *hanging("  ", pairs, page)]
    return lines


def _change(change: Changed, page: Page) -> list[str]:
    lines = page.heading(f"{titled(change)}: {traced(change)}")
    if change.figures:
        lines += table(("quantity", "before", "after", "change"), map(row, change.figures), "lrrr", page)
    return lines


def _listed(title: str, findings: tuple[Finding, ...], page: Page) -> list[str]:
    if not findings:
        return []
    return [*page.heading(title), *(line for finding in findings for line in hanging("  - ", brief(finding), page))]
