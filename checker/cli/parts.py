"""`stageproof parts`: the device cards."""

from __future__ import annotations

from collections.abc import Mapping
from pathlib import Path

import click

from checker.cards.types import Card
from checker.cli import options
from checker.cli.output import coloured, columns, deliver
from checker.cli.status import CLEAN
from checker.intent.hints import nearest
from checker.quantity.parse import parse_engineering
from checker.quantity.show import show_value
from checker.report.clean import clean
from checker.trouble import InputTrouble, NotAQuantity


@click.command("parts")
@click.argument("part", required=False)
@options.own_cards
@options.width
@options.colour
def command(part: str | None, cards: Path | None, width: int | None, colour: str) -> int:
    """Show the card of PART (a value as drawn, such as BC847B), or how a value such as 4k7 is read; without PART, list
    the names known."""
    from checker.cards.find import all_names, find_card
    from checker.cards.load import squeeze
    from checker.report.card import render_card

    own = _own(cards)
    if part is None:
        deliver("".join(f"{name}\n" for name in (*(card.name for card in own.values()), *all_names())), None)
        return CLEAN
    card = own.get(squeeze(part)) or find_card(part)
    if card is not None:
        deliver(render_card(card, width=columns(width), colour=coloured(colour, None)), None)
        return CLEAN
    read = _readings(part)
    if not read:
        known = [*all_names(), *(card.name for card in own.values())]
        near = nearest(part, known)
        hint = f"; did you mean {near!r}?" if near else "; `stageproof parts` lists the names known"
        raise InputTrouble(f"no card for {part!r}, and it reads as no value{hint}")
    deliver("".join(f"{line}\n" for line in read), None)
    return CLEAN


def _own(path: Path | None) -> Mapping[str, Card]:
    if path is None:
        return {}
    from checker.cards.own import read_cards

    return read_cards(path)


def _readings(text: str) -> list[str]:
    """What a text says as the value of a resistor, a capacitor and a coil, where it says any."""
    lines = []
    for unit, kind in (("ohm", "resistor"), ("F", "capacitor"), ("H", "coil")):
        try:
            found = parse_engineering(text, unit)
        except NotAQuantity:
            continue
        said = [show_value(found.si, unit)]
        said += [f"±{100.0 * found.tolerance:g} %"] if found.tolerance is not None else []
        said += [f"{found.rating_v:g} V"] if found.rating_v is not None else []
        lines.append(f"{clean(text)} as a {kind}: {', '.join(said)}")
    return lines
