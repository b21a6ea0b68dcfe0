"""`stageproof compare`: what a commit changed."""

from __future__ import annotations

import datetime
from pathlib import Path

import click

from checker.cli import options
from checker.cli.output import coloured, columns, deliver
from checker.netlist.limits import Reading
from checker.words import Gate


@click.command("compare")
@click.argument("old")
@click.argument("new")
@options.intent
@options.comparison_form
@options.out
@options.gate
@options.tolerance
@options.today
@options.reading
@options.width
@options.colour
def command(
    old: str,
    new: str,
    intent: Path | None,
    form: str,
    out: Path | None,
    gate: Gate,
    tolerance: float,
    today: datetime.date | None,
    reading: Reading,
    width: int | None,
    colour: str,
) -> int:
    """Show what changed from OLD to NEW, stage by stage.

    Each is a netlist, a JSON report, or REVISION:PATH of either in git. The exit status is 1 for a new finding at or
    above the gate.
    """
    from checker.cli.side import read_side
    from checker.cli.verdict import comparison_status
    from checker.compare.two import compare_reports
    from checker.report.comparison import comparison_form

    options.spare_the_input(out, [path for path in (Path(old), Path(new)) if path.is_file()])
    before, after = (read_side(side, intent, today, reading) for side in (old, new))
    comparison = compare_reports(before, after, names=(old, new), tolerance=tolerance / 100.0)
    render = comparison_form(form)
    deliver(render(comparison, width=columns(width), colour=coloured(colour, out)), out)
    return comparison_status(comparison, gate)
