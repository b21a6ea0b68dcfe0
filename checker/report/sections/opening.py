"""The first lines: how much was checked, the verdict, the file and the conditions."""

from __future__ import annotations

from checker.record import Report, reason_for
from checker.report.clean import clean, name
from checker.report.layout import Page, hanging, wrap
from checker.report.quantities import given, number
from checker.words import SEVERITIES, Severity

COUNTED: dict[Severity, str] = {"must-fix": "to fix", "review": "to review", "note": "to note"}


def opening(report: Report, page: Page) -> list[str]:
    """Verdict, then what was read and under which conditions it holds."""
    checked = f"{report.checked.stages} of {report.checked.of} stages checked"
    verdict = wrap(f"{checked}: {_verdict(report)}", page.width)
    lines = [page.paint(line, _style(report)) for line in verdict]
    if report.incomplete:
        lines += hanging("INCOMPLETE  ", "a part of the program failed:", page, style="must-fix")
        lines += [line for fault in report.faults for line in hanging("  - ", clean(fault), page)]
    unjudged = list(dict.fromkeys(name(each.subject) for each in report.unchecked if not each.rule))
    lines += hanging("  not checked: ", f"{', '.join(unjudged)}; see below", page) if unjudged else []
    return [*lines, *conditions(report, page)]


def conditions(report: Report, page: Page) -> list[str]:
    """What was read, and under what the figures hold."""
    source = f"{name(report.netlist.path)}, intent {_intent(report)}"
    return [*hanging("  ", source, page), *hanging("  ", _under(report), page)]


def _verdict(report: Report) -> str:
    found = dict.fromkeys(SEVERITIES, 0)
    for finding in report.findings:
        found[finding.severity] += 1
    counts = [f"{count} {COUNTED[severity]}" for severity, count in found.items() if count]
    counts = counts or ["nothing found"]
    counts += [f"{len(report.accepted)} accepted"] if report.accepted else []
    counts += [f"{len(report.unchecked)} not judged"] if report.unchecked else []
    return ", ".join(counts)


def _style(report: Report) -> str:
    """The style of the worst finding; a board that was not wholly checked is never green."""
    for severity in SEVERITIES:
        if any(finding.severity == severity for finding in report.findings):
            return severity
    return "good" if report.checked.of and report.checked.stages == report.checked.of else "bold"


def _intent(report: Report) -> str:
    return name(report.conditions.intent) if report.conditions.intent else "none: see assumptions"


def _under(report: Report) -> str:
    under = report.conditions
    parts = [given(under.temperature_c, "degC")]
    if under.band_hz:
        low, high = under.band_hz
        parts.append(f"band {given(low, 'Hz')} to {given(high, 'Hz')}")
    else:
        parts.append(f"no band{_because(reason_for(report, 'conditions', 'band_hz'))}")
    if under.f0_hz is not None:
        parts.append(f"signal figures at {number(under.f0_hz, 'Hz')}")
    return ", ".join(parts)


def _because(reason: str) -> str:
    return f" ({clean(reason)})" if reason else ""
