"""`stageproof parts`: the device cards."""

from __future__ import annotations

import click

from checker.cli import options
from checker.cli.output import coloured, columns, deliver
from checker.cli.status import CLEAN
from checker.trouble import InputTrouble


@click.command("parts")
@click.argument("part", required=False)
@options.width
@options.colour
def command(part: str | None, width: int | None, colour: str) -> int:
    """Show the card of PART (a value as drawn, such as BC847B); without one, list the names known."""
    from checker.cards.find import all_names, find_card
    from checker.report.card import render_card

    if part is None:
        deliver("".join(f"{name}\n" for name in all_names()), None)
        return CLEAN
    card = find_card(part)
    if card is None:
        raise InputTrouble(f"no card for {part!r}; `stageproof parts` lists the names known")
    deliver(render_card(card, width=columns(width), colour=coloured(colour, None)), None)
    return CLEAN
