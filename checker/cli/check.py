"""`stageproof check`: the whole report on one netlist or several."""

from __future__ import annotations

import datetime
from pathlib import Path

import click

from checker.cli import options
from checker.cli.output import coloured, columns, deliver, deliver_all, is_folder
from checker.netlist.limits import Reading
from checker.words import Gate


@click.command("check")
@options.boards
@options.intent
@options.reading
@options.form
@options.out_or_folder
@options.since
@options.gate
@options.require_checked
@options.today
@options.jobs
@options.width
@options.colour
@click.pass_obj
def command(
    settings: dict[str, bool],
    netlists: tuple[str, ...],
    intent: Path | None,
    form: str,
    out: str | None,
    since: Path | None,
    gate: Gate,
    require_checked: float | None,
    today: datetime.date | None,
    jobs: int | None,
    width: int | None,
    colour: str,
    reading: Reading,
) -> int:
    """Find, solve and judge the transistor stages of each NETLIST: a file, a folder of them, or a quoted pattern."""
    from checker.cli.batch import check_all
    from checker.cli.gather import earlier, gathered
    from checker.cli.inputs import is_one_file
    from checker.cli.inputs import netlists as meant

    paths = meant(netlists)
    target = None if out is None else Path(out)
    options.spare_the_input(target, [*paths, *([intent] if intent else []), *([since] if since else [])])
    before = earlier(since)
    batch = check_all(paths, intent, today, jobs, reading, debug=settings["debug"])
    batch = batch if before is None else batch.since(before)
    several = not is_one_file(netlists)
    if batch.reports or several:
        every_form = out is not None and is_folder(out)
        bundle = gathered(batch, several=several, rules=every_form or form == "sarif", gate=gate)
        if every_form and target is not None:
            deliver_all(bundle.render_all(width=columns(width)), target)
        else:
            deliver(bundle.render(form, width=columns(width), colour=coloured(colour, target)), target)
    return batch.status(gate, require_checked)
