"""Checking several netlists in one call: one that is unusable does not keep the rest from being reported."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path

from checker.cli.complain import complain
from checker.cli.status import UNUSABLE
from checker.cli.verdict import exit_status
from checker.netlist.limits import Reading
from checker.record import Report
from checker.report.forms import form
from checker.shape import frozen
from checker.trouble import InputTrouble
from checker.words import Gate


@frozen
class Batch:
    """The reports in the order asked for, and path and message of each netlist that gave none."""

    reports: tuple[Report, ...]
    unusable: tuple[tuple[str, str], ...]
    asked: int

    def status(self, gate: Gate, require_checked: float | None) -> int:
        """The worst exit status of all."""
        statuses = [exit_status(report, gate, require_checked) for report in self.reports]
        return max([*statuses, *[UNUSABLE] * len(self.unusable)])


def check_all(netlists: Sequence[Path], intent: Path | None, reading: Reading) -> Batch:
    """Check each netlist; what makes one unusable is said on standard error at once."""
    from checker.pipeline import check_board

    reports: list[Report] = []
    unusable: list[tuple[str, str]] = []
    for path in netlists:
        try:
            reports.append(check_board(path, intent, reading=reading).report)
        except InputTrouble as problem:
            complain(str(problem))
            unusable.append((path.as_posix(), str(problem)))
    return Batch(reports=tuple(reports), unusable=tuple(unusable), asked=len(netlists))


def together(batch: Batch, form_name: str, width: int, colour: bool) -> str:
    """The reports in one text: texts one after another, JSON of several as one object."""
    if form_name == "json" and batch.asked > 1:
        from checker.report.json_form import render_several

        return render_several(batch.reports, batch.unusable)
    render = form(form_name)
    return "\n".join(render(report, width=width, colour=colour) for report in batch.reports)
