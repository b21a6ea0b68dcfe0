"""`stageproof why`: the working behind figures."""

from __future__ import annotations

from pathlib import Path

import click

from checker.cli import options
from checker.cli.output import coloured, columns, deliver
from checker.cli.status import CLEAN, FAILED
from checker.netlist.limits import Reading


@click.command("why")
@options.netlist
@click.argument("subject")
@options.intent
@options.reading
@options.width
@options.colour
def command(netlist: Path, subject: str, intent: Path | None, reading: Reading, width: int | None, colour: str) -> int:
    """Show how the figures of SUBJECT in NETLIST were got.

    SUBJECT is a stage, group, port or part, or a finding by its rule or fingerprint.
    """
    from checker.pipeline import check_board
    from checker.report.why import render_why

    outcome = check_board(netlist, intent, reading=reading)
    paint = coloured(colour, None)
    deliver(render_why(outcome.report, subject, outcome.workings, width=columns(width), colour=paint), None)
    return FAILED if outcome.incomplete else CLEAN
