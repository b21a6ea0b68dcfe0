"""What the report forms are handed: reports, netlists without one, the rules, and an earlier report."""

from __future__ import annotations

from pathlib import Path

from checker.cli.batch import Batch
from checker.record import Report
from checker.report.bundle import Bundle
from checker.words import Gate


def gathered(batch: Batch, *, several: bool, rules: bool, gate: Gate) -> Bundle:
    """Everything that the forms may show; the rules only where a form lists them."""
    from checker.judge.discover import load_rules

    listed = load_rules().rules if rules else ()
    return Bundle(reports=batch.reports, without=batch.without, several=several, rules=listed, gate=gate)


def earlier(since: Path | None) -> tuple[Report, ...] | None:
    """The reports in the file given by --since, None without one. Raises InputTrouble where it holds none."""
    if since is None:
        return None
    from checker.cli.side import read_reports

    return read_reports(since)
