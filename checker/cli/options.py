"""Options that several commands share."""

from __future__ import annotations

from collections.abc import Callable, Iterable
from functools import wraps
from pathlib import Path
from typing import Any, get_args

import click

from checker.netlist.limits import Reading, ReadLimits
from checker.report.forms import FORMS
from checker.trouble import InputTrouble
from checker.words import Gate

COMPARISON_FORMS = ("text", "markdown", "json")
"""Forms of a comparison; a test holds them equal to those that there are, whose import would cost every command."""
MOST_NESTING = 1_000
"""The deepest nesting that the readers can be asked to follow: they recurse."""
_LIMITS = {
    "bytes": "read in all, includes counted each time",
    "parts": "parts as written",
    "depth": "levels of brackets, includes, subcircuits or expressions",
    "elements": "elements after subcircuits are expanded",
    "steps": "steps of one expression",
}
"""Field of ReadLimits to what it bounds; the option is `--most-FIELD`."""

EXISTING = click.Path(exists=True, dir_okay=False, path_type=Path)

netlist = click.argument("netlist", type=EXISTING)
boards = click.argument("netlists", metavar="NETLIST...", nargs=-1, required=True)
intent = click.option(
    "--intent",
    type=EXISTING,
    help="Intent file; else NAME.intent.toml or intent.toml beside the netlist.",
)
out = click.option(
    "--out",
    type=click.Path(dir_okay=False, path_type=Path),
    help="Write to this file, whole or not at all, instead of standard output.",
)
out_or_folder = click.option(
    "--out",
    metavar="PATH",
    help="Write to this file, whole or not at all, instead of standard output; to a folder (or NAME/): every form.",
)
since = click.option(
    "--since", type=EXISTING, metavar="REPORT.json", help="An earlier JSON report: say what is new, cured, unchanged."
)
today = click.option(
    "--today",
    type=click.DateTime(["%Y-%m-%d"]),
    callback=lambda _context, _parameter, given: None if given is None else given.date(),
    help="The day on which acceptances are judged; else the clock's.",
)
jobs = click.option("--jobs", type=click.IntRange(1, 256), help="Boards at a time; else one for each processor.")
form = click.option(
    "--as",
    "form",
    type=click.Choice(list(FORMS)),
    default="text",
    show_default=True,
    help="Form of the report.",
)
comparison_form = click.option(
    "--as",
    "form",
    type=click.Choice(list(COMPARISON_FORMS)),
    default="text",
    show_default=True,
    help="Form of the comparison.",
)
tolerance = click.option(
    "--tolerance",
    metavar="PERCENT",
    type=click.FloatRange(0, 100),
    default=1.0,
    show_default=True,
    help="Figures that differ by less count as equal.",
)
gate = click.option(
    "--gate",
    type=click.Choice(get_args(Gate)),
    default="must-fix",
    show_default=True,
    help="Least severity of a finding that fails.",
)
require_checked = click.option(
    "--require-checked",
    metavar="PERCENT",
    type=click.FloatRange(0, 100),
    help="Fail where a smaller share of the stages was checked.",
)
width = click.option("--width", type=click.IntRange(60, 250), help="Columns of the text; else the terminal's.")
colour = click.option(
    "--colour",
    type=click.Choice(["auto", "always", "never"]),
    default="auto",
    help="Colours in the text; auto: on a terminal.",
)


own_cards = click.option(
    "--cards",
    type=EXISTING,
    help="The project's part cards; else NAME.cards.toml or cards.toml beside the netlist.",
)


def reading(command: Callable[..., int]) -> Callable[..., int]:
    """Add the options of every command that reads a netlist; the command gets them as `reading`, a Reading."""

    @wraps(command)
    def gathered(include_from: tuple[Path, ...], cards: Path | None, **given: Any) -> int:
        limits = ReadLimits(**{name: given.pop(f"most_{name}") for name in _LIMITS})
        return command(reading=Reading(folders=include_from, limits=limits, cards=cards), **given)

    wrapped: Callable[..., int] = gathered
    for name, what in reversed(_LIMITS.items()):
        wrapped = click.option(
            f"--most-{name}",
            type=click.IntRange(1, MOST_NESTING if name == "depth" else None),
            default=getattr(ReadLimits(), name),
            show_default=True,
            help=f"Refuse a netlist with more: {what}.",
        )(wrapped)
    wrapped = own_cards(wrapped)
    return click.option(
        "--include-from",
        metavar="FOLDER",
        multiple=True,
        type=click.Path(exists=True, file_okay=False, path_type=Path),
        help="A folder that .include and .lib may read from, beside the netlist's own; may be repeated.",
    )(wrapped)


def spare_the_input(out: Path | None, inputs: Iterable[Path]) -> None:
    """Raises InputTrouble where the output would overwrite an input."""
    if out is None or not out.exists():
        return
    for path in inputs:
        if out.samefile(path):
            raise InputTrouble("is an input and would be overwritten; give --out another name", file=str(out))
