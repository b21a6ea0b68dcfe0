"""What a SPICE-style text declares, before anything is expanded: elements, models, parameters,
subcircuits."""

from __future__ import annotations

from dataclasses import field

from checker.netlist.spice_lines import Card
from checker.netlist.spice_names import references
from checker.netlist.spice_words import Words, split_words
from checker.netlist.types import Remark
from checker.shape import filled, frozen


@frozen
class Element:
    """One element card: `name` as written, `ref` as an engineer says it, `letter` upper case."""

    name: str
    ref: str
    letter: str
    words: Words
    card: Card


@filled
class Definition:
    """The board itself or a `.subckt`, filled while reading. Keys of the mappings are lower case."""

    name: str
    card: Card | None = None
    ports: tuple[str, ...] = ()
    defaults: dict[str, str] = field(default_factory=dict)
    params: dict[str, str] = field(default_factory=dict)
    param_cards: dict[str, Card] = field(default_factory=dict)
    cards: list[Card] = field(default_factory=list)
    models: dict[str, Card] = field(default_factory=dict)
    subcircuits: dict[str, Definition] = field(default_factory=dict)
    elements: list[Element] = field(default_factory=list)
    refs: dict[str, str] = field(default_factory=dict)

    def settle(self) -> list[Remark]:
        """Turn element cards into elements with unique references; remarks on names used twice."""
        words = [split_words(card.text, decimal_comma=card.text[:1].lower() in "rcl") for card in self.cards]
        names = [entry.positional[0] if entry.positional else "" for entry in words]
        refs, repeated = references(names)
        self.elements = [
            Element(name=name, ref=ref, letter=name[:1].upper(), words=entry, card=card)
            for name, ref, entry, card in zip(names, refs, words, self.cards, strict=True)
        ]
        for name, ref in zip(names, refs, strict=True):
            self.refs.setdefault(name.lower(), ref)
        return [
            self.cards[index].remark(f"a second element {names[index]}: this one is called {refs[index]}", refs[index])
            for index in repeated
        ]


@filled
class Deck:
    """All that was declared in a file and its includes."""

    root: Definition
    title: str = ""
    temperature_c: float | None = None
    global_nets: set[str] = field(default_factory=set)
    remarks: list[Remark] = field(default_factory=list)
    directives: int = 0
    """Dot cards whose word was known: a sign that this is SPICE-style text at all."""
