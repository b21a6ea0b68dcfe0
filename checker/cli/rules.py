"""`stageproof rules`: what is judged, and by which limits."""

from __future__ import annotations

import click

from checker.cli import options
from checker.cli.output import coloured, columns, deliver
from checker.cli.status import CLEAN


@click.command("rules")
@options.width
@options.colour
def command(width: int | None, colour: str) -> int:
    """List the rules with their limits and where these come from."""
    from checker.judge.discover import load_rules
    from checker.report.catalogue import render_rules

    deliver(render_rules(load_rules().rules, width=columns(width), colour=coloured(colour, None)), None)
    return CLEAN
