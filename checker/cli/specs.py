"""`stageproof specs`: the stages alone."""

from __future__ import annotations

from pathlib import Path

import click

from checker.cli import options
from checker.cli.output import coloured, columns, deliver
from checker.cli.status import CLEAN, FAILED
from checker.netlist.limits import Reading


def list_quantities(context: click.Context, _parameter: click.Parameter, wanted: bool) -> None:
    """Print the registry of quantities and end the command; needs no netlist."""
    if not wanted or context.resilient_parsing:
        return
    from checker.board import target_quantities
    from checker.report.catalogue import render_quantities

    deliver(render_quantities(target_quantities(), width=columns(None)), None)
    context.exit(CLEAN)


@click.command("specs")
@click.option(
    "--list",
    "listed",
    is_flag=True,
    is_eager=True,
    expose_value=False,
    callback=list_quantities,
    help="List the quantities that a target may name, and leave.",
)
@click.option("--values", is_flag=True, help="Print instead how the value of every passive part was read.")
@options.netlist
@options.intent
@options.reading
@options.width
@options.colour
def command(
    netlist: Path, intent: Path | None, reading: Reading, width: int | None, colour: str, *, values: bool
) -> int:
    """Print what each stage of NETLIST does, without judging it."""
    if values:
        return _values(netlist, intent, reading, width, colour)
    from checker.pipeline import check_board
    from checker.report.specs import render_specs

    outcome = check_board(netlist, intent, reading=reading)
    deliver(render_specs(outcome.report, width=columns(width), colour=coloured(colour, None)), None)
    return FAILED if outcome.incomplete else CLEAN


def _values(netlist: Path, intent: Path | None, reading: Reading, width: int | None, colour: str) -> int:
    """The values as read; nothing is solved for them."""
    from checker.pipeline import part_values
    from checker.report.values import render_values

    facts = part_values(netlist, intent, reading)
    deliver(render_values(facts, width=columns(width), colour=coloured(colour, None)), None)
    return CLEAN
