"""Checking several netlists in one call: one that is unusable does not keep the rest from being reported."""

from __future__ import annotations

import datetime
from collections.abc import Sequence
from dataclasses import replace
from functools import partial
from pathlib import Path

from checker.cli.complain import complain
from checker.cli.status import FAILED, UNUSABLE
from checker.cli.verdict import exit_status
from checker.netlist.limits import Reading
from checker.record import Report
from checker.shape import frozen
from checker.trouble import InputTrouble
from checker.words import Gate


@frozen
class Answer:
    """What became of one netlist: a report, or why there is none; `failed` where that was our own fault, with the
    traceback in `trace`.
    """

    path: str
    report: Report | None = None
    trouble: str = ""
    failed: bool = False
    trace: str = ""


@frozen
class Batch:
    """The answers in the order asked for."""

    answers: tuple[Answer, ...]

    @property
    def reports(self) -> tuple[Report, ...]:
        """Those there are."""
        return tuple(each.report for each in self.answers if each.report is not None)

    @property
    def without(self) -> tuple[tuple[str, str], ...]:
        """Path and message of each netlist that gave no report."""
        return tuple((each.path, each.trouble) for each in self.answers if each.report is None)

    def status(self, gate: Gate, require_checked: float | None) -> int:
        """The worst exit status of all."""
        statuses = [exit_status(report, gate, require_checked) for report in self.reports]
        lost = [FAILED if each.failed else UNUSABLE for each in self.answers if each.report is None]
        return max([*statuses, *lost])

    def since(self, earlier: Sequence[Report]) -> Batch:
        """The same, each report told how it stands against the earlier one on its netlist. One report against one is
        the same board wherever its file stood.
        """
        from checker.compare.findings import since

        before = {report.netlist.path: report for report in earlier}
        alone = earlier[0] if len(earlier) == len(self.answers) == 1 else None

        def told(report: Report) -> Report:
            old = before.get(report.netlist.path, alone)
            return report if old is None else replace(report, since=since(old, report))

        return Batch(
            answers=tuple(
                each if each.report is None else replace(each, report=told(each.report)) for each in self.answers
            )
        )


def check_all(
    netlists: Sequence[Path],
    intent: Path | None,
    today: datetime.date | None,
    jobs: int | None,
    reading: Reading,
    *,
    debug: bool,
) -> Batch:
    """Check each netlist, several at a time; what kept one from being reported is said on standard error.

    A fault of the program on a lone netlist is raised.
    """
    count = 1 if len(netlists) == 1 else _workers(jobs, len(netlists))
    task = partial(_nth, tuple(netlists), intent, today, reading)
    if count == 1:
        answers = [_one(path, intent, today, reading, alone=len(netlists) == 1) for path in netlists]
    else:
        answers = _in_workers(task, netlists, count)
    for each in answers:
        if each.report is None:
            complain(each.trouble)
            if debug and each.trace:
                import click

                click.echo(each.trace, err=True, nl=False)
    return Batch(answers=tuple(answers))


def _workers(jobs: int | None, boards: int) -> int:
    from checker.cli.pool import workers  # its imports cost a lone board more than they bring

    return workers(jobs, boards)


def _in_workers(task: partial[Answer], netlists: Sequence[Path], count: int) -> list[Answer]:
    from checker.cli import pool
    from checker.cli.progress import Progress

    pool.prepare()
    from checker.pipeline import warm_up

    warm_up()

    def lost(number: int, how: str) -> Answer:
        path = netlists[number].as_posix()
        return Answer(path=path, trouble=f"{path}: internal failure, {how}", failed=True)

    bar = Progress(len(netlists))
    try:
        return pool.Pool(task, lost, count).run(len(netlists), bar.step)
    finally:
        bar.end()


def _nth(
    netlists: tuple[Path, ...], intent: Path | None, today: datetime.date | None, reading: Reading, number: int
) -> Answer:
    return _one(netlists[number], intent, today, reading, alone=False)


def _one(path: Path, intent: Path | None, today: datetime.date | None, reading: Reading, *, alone: bool) -> Answer:
    from checker.pipeline import check_board

    try:
        return Answer(path=path.as_posix(), report=check_board(path, intent, today=today, reading=reading).report)
    except InputTrouble as problem:
        return Answer(path=path.as_posix(), trouble=str(problem))
    except Exception as problem:
        if alone:
            raise
        import traceback

        trace = "".join(traceback.format_exception(problem))
        message = f"{path.as_posix()}: internal failure, {type(problem).__name__}: {problem}"
        return Answer(path=path.as_posix(), trouble=message, failed=True, trace=trace)
