"""How the findings stand against an earlier report."""

from __future__ import annotations

from checker.record import Finding, Report
from checker.report.clean import clean, name
from checker.report.layout import Page, hanging
from checker.report.sections.findings import subject


def since(report: Report, page: Page) -> list[str]:
    """What is new, what was cured, and what could no longer be judged."""
    told = report.since
    if told is None:
        return []
    title = (
        f"Against the earlier report on {name(told.path)}: "
        f"{len(told.new)} new, {len(told.cured)} cured, {len(told.unchanged)} unchanged"
    )
    fresh = [finding for finding in report.findings if finding.fingerprint in told.new]
    lines = page.heading(title)
    for label, findings in (("new", fresh), ("cured", told.cured), ("no longer judged", told.unjudged)):
        lines += [line for finding in findings for line in hanging(f"  {label}  ", brief(finding), page, style="dim")]
    return lines


def brief(finding: Finding) -> str:
    """One line: severity, subjects, rule and message."""
    return f"{finding.severity} {subject(finding)} {clean(finding.rule)}: {clean(finding.message)}"
