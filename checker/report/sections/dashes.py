"""Why figures that a table shows as a dash do not exist."""

from __future__ import annotations

from collections.abc import Iterable

from checker.record import Report, reason_for
from checker.report.clean import clean
from checker.report.layout import Page, hanging

Null = tuple[str, tuple[str, ...]]
"""How the reader knows the figure, and its path in the report."""


def dashes(report: Report, nulls: Iterable[Null], page: Page) -> list[str]:
    """One line a reason, naming the figures that it stands for."""
    reasons: dict[str, list[str]] = {}
    for label, path in nulls:
        reasons.setdefault(reason_for(report, *path) or "no reason given", []).append(label)
    return [
        line
        for reason, labels in reasons.items()
        for line in hanging("  — ", f"{', '.join(dict.fromkeys(labels))}: {clean(reason)}", page)
    ]
