"""`stageproof intent`: a starter intent file."""

from __future__ import annotations

from pathlib import Path

import click

from checker.cli import options
from checker.cli.output import deliver
from checker.cli.status import CLEAN
from checker.netlist.limits import Reading


@click.command("intent")
@options.netlist
@options.reading
@options.out
def command(netlist: Path, out: Path | None, reading: Reading) -> int:
    """Write a starter intent file from what NETLIST shows."""
    from checker.pipeline import starter_intent

    options.spare_the_input(out, [netlist])
    deliver(starter_intent(netlist, reading), out)
    return CLEAN
