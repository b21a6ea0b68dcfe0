"""Cards into a `Deck`: dot cards by their word, includes followed, all other cards kept as elements."""

from __future__ import annotations

import re
from collections.abc import Callable
from pathlib import Path

from checker.netlist.limits import ReadLimits, over
from checker.netlist.spice_deck import Deck, Definition
from checker.netlist.spice_includes import Folders
from checker.netlist.spice_lines import Card, cards_of
from checker.netlist.spice_words import split_assignments, split_words
from checker.netlist.text import decode, read_bytes
from checker.pattern import lazy
from checker.quantity.spice_number import parse_spice_number
from checker.trouble import InputTrouble, NotAQuantity

_DOT = lazy(r"\.([A-Za-z]+)[\s=]*(.*)", re.DOTALL)
_TEMPERATURE = lazy(r"(?<![\w.])temp\s*=\s*(\S+)", re.IGNORECASE)
_WORD_END = lazy(r"[\s=,]+")
_COMMANDS = frozenset(
    {"ac", "dc", "op", "tran", "run", "plot", "print", "write", "set", "save", "quit", "exit", "let", "echo"}
    | {"meas", "noise", "tf", "source", "destroy", "linearize"}
)
"""Words of control blocks that a file may hold outside of one."""
_QUIET = frozenset(
    {"op", "tran", "ac", "dc", "probe", "print", "plot", "backanno", "save", "meas", "measure", "four", "fft"}
    | {"noise", "pz", "sens", "tf", "ic", "nodeset", "width", "disto", "wave", "net", "sp", "hb", "endc"}
    | {"prot", "protect", "unprot", "unprotect"}
)
"""Dot cards that only ask for analyses or output."""


def _is_diode(text: str) -> bool:
    """Whether a line that starts with DC is the diode of that name: it ends in a model, a sweep in numbers."""
    words = text.split()
    return words[0].lower() == "dc" and len(words) >= 4 and words[3][0].isalpha()


_CONDITIONS = frozenset({"if", "elseif", "else", "endif"})


class CardReader:
    """Reads the cards of the main text and, through includes, of other files."""

    def __init__(self, deck: Deck, folders: Folders, path: Path, limits: ReadLimits, size: int) -> None:
        self.deck = deck
        self.folders = folders
        self.limits = limits
        self.bytes_left = limits.bytes - size
        self.parts = 0
        self.open: list[Definition] = [deck.root]
        self.files = [path.resolve()]
        self.actions: dict[str, Callable[[Card, str], None]] = {
            **dict.fromkeys(("param", "params", "parameters"), self.param),
            **dict.fromkeys(("subckt", "macro"), self.subckt),
            **dict.fromkeys(("ends", "eom"), self.ends),
            **dict.fromkeys(("option", "options"), self.options),
            **dict.fromkeys(("include", "inc", "incl"), self.include),
            "model": self.model,
            "global": self.global_nets,
            "temp": self.temperature,
            "lib": self.library,
            "title": self.title,
        }

    def read(self, cards: list[Card], *, section: str | None = None) -> None:
        """Take in cards in order. With `section`, only those between `.lib SECTION` and `.endl`."""
        inside = section is None
        sections = _sections(cards)
        skipping = False
        for index, card in enumerate(cards):
            word = card.text.split(None, 1)[0].lower()
            if index in sections:
                skipping = section is None or sections[index] != section
                inside = not skipping
            elif word == ".endl":
                skipping, inside = False, section is None
            elif word == ".data":
                skipping = True
            elif word == ".enddata":
                skipping = False
            elif inside and not skipping:
                self.take(card)

    def take(self, card: Card) -> None:
        """One card: a dot card by its word, else an element of the innermost definition."""
        self.parts += 1
        if self.parts > self.limits.parts:
            over("parts", self.limits.parts, "too many elements and cards", file=card.file, line=card.line)
        if len(card.text) > self.limits.elements and len(_WORD_END.split(card.text)) > self.limits.elements:
            over("elements", self.limits.elements, "too many words in one card", file=card.file, line=card.line)
        found = _DOT.fullmatch(card.text)
        if found is None:
            self.element(card)
            return
        word, rest = found[1].lower(), found[2].strip()
        if word in self.actions:
            self.deck.directives += 1
            self.actions[word](card, rest)
        elif word in _QUIET:
            self.deck.directives += 1
        elif word in _CONDITIONS:
            text = f".{word}: conditions are not followed, the lines of every branch are read"
            self.deck.remarks.append(card.lost(text, everywhere=True))
        else:
            self.deck.remarks.append(card.lost(f".{word[:30]} is not understood and passed over"))

    def remark(self, card: Card, text: str) -> None:
        self.deck.remarks.append(card.remark(text))

    def element(self, card: Card) -> None:
        word = card.text.split(None, 1)[0]
        if not word[0].isalpha() or (word.lower() in _COMMANDS and not _is_diode(card.text)):
            self.deck.remarks.append(card.lost(f"the line {card.text[:40]!r} is not understood and passed over"))
            return
        self.open[-1].cards.append(card)

    def param(self, card: Card, rest: str) -> None:
        pairs = split_assignments(rest)
        if not pairs:
            self.deck.remarks.append(card.lost("a .param card without a parameter is passed over"))
        for name, text in pairs:
            self.open[-1].params[name] = text
            self.open[-1].param_cards[name] = card

    def model(self, card: Card, rest: str) -> None:
        name = rest.split(None, 1)[0].lower() if rest else ""
        if not name:
            self.deck.remarks.append(card.lost("a .model card without a name is passed over"))
        elif name in self.open[-1].models and self.open[-1].models[name].text != card.text:
            first = self.open[-1].models[name]
            self.remark(card, f"a second model {name}: the first one, line {first.line} of {first.file}, is used")
        else:
            self.open[-1].models[name] = card

    def subckt(self, card: Card, rest: str) -> None:
        words = split_words(rest)
        name = words.positional[0] if words.positional else ""
        definition = Definition(
            name=name,
            card=card,
            ports=tuple(port for port in words.positional[1:] if port.lower() != "optional:"),
            defaults=dict(words.named),
        )
        if not name:
            text = "a .subckt card without a name is passed over with all it holds"
            self.deck.remarks.append(card.lost(text))
        elif name.lower() in self.open[-1].subcircuits:
            self.remark(card, f"a second subcircuit {name[:40]}: the first one is used")
        else:
            self.open[-1].subcircuits[name.lower()] = definition
        self.open.append(definition)
        if len(self.open) > self.limits.depth + 1:
            over("depth", self.limits.depth, "subcircuits nested too deep", file=card.file, line=card.line)

    def ends(self, card: Card, _rest: str) -> None:
        if len(self.open) > 1:
            self.open.pop()
        else:
            self.remark(card, "an .ends card without a .subckt is passed over")

    def finish(self) -> None:
        """Close what the file left open."""
        for definition in self.open[1:]:
            if definition.card is not None:
                text = f"the subcircuit {definition.name[:40]} has no .ends: all that follows it is taken for its own"
                self.deck.remarks.append(definition.card.lost(text, everywhere=True))
        del self.open[1:]

    def global_nets(self, _card: Card, rest: str) -> None:
        self.deck.global_nets.update(word.lower() for word in split_words(rest).positional)

    def temperature(self, card: Card, rest: str) -> None:
        words = rest.split()
        try:
            self.deck.temperature_c = parse_spice_number(words[0] if words else "")
        except NotAQuantity as error:
            self.deck.remarks.append(card.lost(f"the temperature is not understood: {error}", everywhere=True))
        if len(words) > 1:
            self.remark(card, "of several temperatures the first is used")

    def options(self, card: Card, rest: str) -> None:
        if found := _TEMPERATURE.search(rest):
            self.temperature(card, found[1])

    def title(self, _card: Card, rest: str) -> None:
        self.deck.title = rest

    def include(self, card: Card, rest: str) -> None:
        self.follow(card, rest, section=None)

    def library(self, card: Card, rest: str) -> None:
        """`.lib FILE` or `.lib FILE SECTION`; a path may hold blanks, so what exists decides."""
        head, _, last = rest.rpartition(" ")
        beside = self.beside()
        if head.strip() and not self.folders.find(rest, beside=beside) and self.folders.find(head, beside=beside):
            self.follow(card, head, section=last.strip().lower())
        else:
            self.follow(card, rest, section=None)

    def beside(self) -> Path:
        """The folder of the file that is being read."""
        return self.files[-1].parent if len(self.files) > 1 else self.folders.home

    def follow(self, card: Card, written: str, *, section: str | None) -> None:
        """Read an included file in place. Absent or forbidden files are remarks: exports name libraries of
        their author's disk. Raises `InputTrouble` for a ring of includes or one too deep."""
        found = self.folders.find(written, beside=self.beside())
        if found is None:
            self.remark(
                card,
                f"the file {written[:120]!r} is not in the netlist's folder: its models are missing here",
            )
            return
        if found.real in self.files:
            raise InputTrouble(
                f"{found.shown} includes itself, directly or through others", file=card.file, line=card.line
            )
        if len(self.files) > self.limits.depth:
            over("depth", self.limits.depth, "includes nested too deep", file=card.file, line=card.line)
        data = read_bytes(found.real, found.shown, budget=self.bytes_left, limit=self.limits.bytes)
        # At least one byte each, so that a storm of empty files ends as well.
        self.bytes_left -= max(len(data), 1)
        if self.bytes_left < 0:
            over("bytes", self.limits.bytes, "too many bytes to read", file=card.file, line=card.line)
        cards, remarks = cards_of(decode(data, found.shown), file=found.shown, limits=self.limits)
        self.deck.remarks += remarks
        self.files.append(found.real)
        self.read(cards, section=section)
        self.files.pop()


def _sections(cards: list[Card]) -> dict[int, str]:
    """Positions of the `.lib NAME` cards that open a section, that is, have an `.endl` before the next of
    them."""
    found: dict[int, str] = {}
    candidate: tuple[int, str] | None = None
    for index, card in enumerate(cards):
        words = card.text.split()
        if words[0].lower() == ".lib" and len(words) == 2:
            candidate = (index, words[1].strip("\"'").lower())
        elif words[0].lower() == ".endl" and candidate:
            found[candidate[0]] = candidate[1]
            candidate = None
    return found
