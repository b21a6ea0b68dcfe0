"""`stageproof check`: the whole report on one netlist or several."""

from __future__ import annotations

from pathlib import Path

import click

from checker.cli import options
from checker.cli.output import coloured, columns, deliver
from checker.netlist.limits import Reading
from checker.words import Gate


@click.command("check")
@options.netlists
@options.intent
@options.reading
@options.form
@options.out
@options.gate
@options.require_checked
@options.width
@options.colour
def command(
    netlists: tuple[Path, ...],
    intent: Path | None,
    form: str,
    out: Path | None,
    gate: Gate,
    require_checked: float | None,
    width: int | None,
    colour: str,
    reading: Reading,
) -> int:
    """Find, solve and judge the transistor stages of NETLIST."""
    from checker.cli.batch import check_all, together

    options.spare_the_input(out, [*netlists, *([intent] if intent else [])])
    batch = check_all(netlists, intent, reading)
    if batch.reports:
        deliver(together(batch, form, columns(width), coloured(colour, out)), out)
    return batch.status(gate, require_checked)
