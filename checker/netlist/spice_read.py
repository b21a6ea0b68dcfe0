"""SPICE-style text into a `Netlist`: title, cards, expansion, and the question whether this is SPICE text at
all."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from pathlib import Path

from checker.netlist.limits import ReadLimits
from checker.netlist.spice_cards import CardReader
from checker.netlist.spice_deck import Deck, Definition, Element
from checker.netlist.spice_expand import GROUND, GROUND_NAMES, Expansion
from checker.netlist.spice_includes import Folders
from checker.netlist.spice_lines import cards_of, without_comment
from checker.netlist.spice_pads import REFERENCE, sign_of_pads, without_guesses
from checker.netlist.spice_title import is_element, title_of
from checker.netlist.spice_words import Words
from checker.netlist.types import Netlist, Remark
from checker.quantity.value import Origin
from checker.trouble import InputTrouble


def read_spice(
    text: str,
    *,
    name: str,
    sha256: str,
    path: Path,
    include_dirs: tuple[Path, ...],
    limits: ReadLimits,
    size: int,
) -> Netlist:
    """Read the deck in `text`; `name` is the file's name in messages and origins, `size` its bytes.

    Raises `InputTrouble` where the text is no SPICE-style netlist or a limit is exceeded.
    """
    deck = _declared(text, name, path, include_dirs, limits, size)
    sign = sign_of_pads(deck.root)
    expansion = Expansion(deck, limits, pads=bool(sign))
    expansion.run()
    understood = sum(not part.unknown or bool(sign and REFERENCE.fullmatch(part.ref)) for part in expansion.parts)
    if not deck.directives and (2 * understood < len(expansion.parts) or not expansion.parts):
        raise InputTrouble(
            "neither a SPICE-style netlist nor a KiCad export: hardly a line reads as an element; "
            "give the netlist that the schematic editor exports",
            file=name,
        )
    return Netlist(
        path=name,
        format="spice",
        sha256=sha256,
        title=deck.title,
        parts=tuple(without_guesses(expansion.parts, expansion.models, sign) if sign else expansion.parts),
        nets=expansion.nets,
        models=expansion.models,
        temperature_c=deck.temperature_c,
        ground=(GROUND,) if GROUND in expansion.nets else (),
        remarks=_with_nets(deck.remarks + expansion.remarks(), expansion),
    )


def _with_nets(remarks: Sequence[Remark], expansion: Expansion) -> tuple[Remark, ...]:
    """Remarks on lost lines with the keys of the nets that they bear on: those that they name in any case, those of
    the parts that use a model, or all."""
    if not any(remark.lost for remark in remarks):
        return tuple(remarks)
    keys = {key.lower(): key for key in expansion.nets}
    users: dict[str, dict[str, None]] = {}
    for part in expansion.parts:
        if part.model:
            users.setdefault(part.model.lower(), {}).update(dict.fromkeys(pin.net for pin in part.pins))

    def found(remark: Remark) -> Remark:
        if remark.everywhere or remark.model:
            nets = tuple(expansion.nets if remark.everywhere else users.get(remark.model, ()))
        else:
            words = dict.fromkeys("0" if word.lower() in GROUND_NAMES else word.lower() for word in remark.nets)
            nets = tuple(keys[word] for word in words if word in keys)
        return replace(remark, nets=nets)

    return tuple(found(remark) if remark.lost else remark for remark in remarks)


def _declared(text: str, name: str, path: Path, include_dirs: tuple[Path, ...], limits: ReadLimits, size: int) -> Deck:
    deck = Deck(root=Definition(name=""))
    first, _, others = text.partition("\n")
    skipped = _title(deck, first, others, name)
    cards, remarks = cards_of(others if skipped else text, file=name, limits=limits, first_line=2 if skipped else 1)
    deck.remarks += remarks
    reader = CardReader(deck, Folders(path, include_dirs), path, limits, size)
    reader.read(cards)
    reader.finish()
    for definition in _all(deck.root):
        deck.remarks += definition.settle()
    if not deck.root.elements and deck.root.subcircuits:
        _without_board(deck, name)
    return deck


def _without_board(deck: Deck, name: str) -> None:
    """Take the one subcircuit that no other uses for the board, its ports for nets; of several, none."""
    inner = _all(deck.root)[1:]
    used = {each.words.positional[-1].lower() for every in inner for each in every.elements if each.letter == "X"}
    tops = [(every, every.card) for key, every in deck.root.subcircuits.items() if key not in used and every.card]
    if len(tops) != 1:
        names = ", ".join(every.name[:40] for every in list(deck.root.subcircuits.values())[:5])
        deck.remarks.append(_remark(name, 0, f"a library: only subcircuits ({names}) and no part that uses them"))
        return
    ((top, card),) = tops
    words = Words(positional=(f"X{top.name}", *top.ports, top.name), named={}, groups={})
    deck.root.elements.append(Element(name=f"X{top.name}", ref=top.name, letter="X", words=words, card=card))
    text = f"no part stands outside the subcircuits; {top.name[:40]} is taken for the board, its ports for nets"
    deck.remarks.append(card.remark(text))


def _title(deck: Deck, first: str, others: str, name: str) -> bool:
    """Set the title from the first line; True where that line is nothing but a title."""
    bare = without_comment(first)
    if bare.startswith("."):
        return False
    if not bare:
        deck.title = title_of(first)
        return False
    if not is_element(first, others.split("\n")):
        deck.title = first.strip()
        return True
    deck.remarks.append(
        _remark(name, 1, "the first line reads as an element and is taken for one, though custom makes it a title")
    )
    return False


def _all(definition: Definition) -> list[Definition]:
    found = [definition]
    for inner in definition.subcircuits.values():
        found += _all(inner)
    return found


def _remark(name: str, line: int, text: str) -> Remark:
    return Remark(text=text, origin=Origin(kind="netlist", file=name, line=line))
