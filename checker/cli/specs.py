"""`stageproof specs`: the stages alone."""

from __future__ import annotations

from pathlib import Path

import click

from checker.cli import options
from checker.cli.output import coloured, columns, deliver
from checker.cli.status import CLEAN, FAILED


@click.command("specs")
@options.netlist
@options.intent
@options.width
@options.colour
def command(netlist: Path, intent: Path | None, width: int | None, colour: str) -> int:
    """Print what each stage of NETLIST does, without judging it."""
    from checker.pipeline import check_board
    from checker.report.specs import render_specs

    outcome = check_board(netlist, intent)
    deliver(render_specs(outcome.report, width=columns(width), colour=coloured(colour, None)), None)
    return FAILED if outcome.incomplete else CLEAN
