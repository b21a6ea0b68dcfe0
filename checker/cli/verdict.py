"""From a report to an exit status."""

from __future__ import annotations

from collections.abc import Iterable
from typing import TYPE_CHECKING

from checker.cli.status import CLEAN, FAILED, FOUND
from checker.record import Finding, Report
from checker.words import SEVERITIES, Gate

if TYPE_CHECKING:
    from checker.record.comparison import Comparison


def exit_status(report: Report, gate: Gate, require_checked: float | None) -> int:
    """FAILED for an incomplete report, else FOUND for a finding of severity `gate` or worse (`never`: none
    counts) or where too little was checked, else CLEAN.

    `require_checked`: percentage of the stages that must have been checked; None asks only that a board with
    stages has one checked. Accepted findings do not count.
    """
    if report.incomplete:
        return FAILED
    return FOUND if _gated(report, gate) or _too_little(report, require_checked) else CLEAN


def comparison_status(comparison: Comparison, gate: Gate) -> int:
    """As for a report, but of the findings only those count that are new; a new board of which nothing could be
    checked fails as ever.
    """
    if comparison.old.incomplete or comparison.new.incomplete:
        return FAILED
    blind = comparison.new.of > 0 and comparison.new.checked == 0
    return FOUND if blind or _counting(comparison.new_findings, gate) else CLEAN


def _gated(report: Report, gate: Gate) -> bool:
    return _counting(report.findings, gate)


def _counting(findings: Iterable[Finding], gate: Gate) -> bool:
    if gate == "never":
        return False
    counting = SEVERITIES[: SEVERITIES.index(gate) + 1]
    return any(finding.severity in counting for finding in findings)


def _too_little(report: Report, require_checked: float | None) -> bool:
    done, of = report.checked.stages, report.checked.of
    if of == 0:
        return False
    return done == 0 or (require_checked is not None and 100 * done < require_checked * of)
