"""From declarations to the flat netlist: nets joined, models evaluated where they are in force, subcircuits
expanded."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import replace

from checker.netlist.limits import ReadLimits, over
from checker.netlist.spice_deck import Deck, Definition, Element
from checker.netlist.spice_expression import TooMuch
from checker.netlist.spice_lines import Card
from checker.netlist.spice_model import model_name, read_model
from checker.netlist.spice_parts import part_of
from checker.netlist.spice_scope import Scope
from checker.netlist.types import Model, Net, Part, Remark
from checker.quantity.value import Origin
from checker.shape import frozen
from checker.trouble import NotAQuantity

GROUND = "0"
GROUND_NAMES = frozenset({"0", "gnd", "gnd!"})


@frozen
class Frame:
    """One instance of a definition. `ports`: lower-case port name to net key. `outer`: the frame whose
    definition holds this one's, where models and subcircuits that are not found here are looked for."""

    definition: Definition
    scope: Scope
    prefix: str
    ports: dict[str, str]
    outer: Frame | None
    level: int
    multiplier: float
    note: str
    models: dict[str, str | None]
    """Cache: lower-case name to the key text it means here."""

    def around(self) -> Iterator[Frame]:
        frame: Frame | None = self
        while frame is not None:
            yield frame
            frame = frame.outer


class Expansion:
    """The growing result. `nets` by key; `models` by lower-case name."""

    def __init__(self, deck: Deck, limits: ReadLimits, *, pads: bool = False) -> None:
        self.deck = deck
        self.pads = pads
        """Whether the file lists the pads and values of a schematic."""
        self.limits = limits
        self.parts: list[Part] = []
        self.nets: dict[str, Net] = {}
        self.models: dict[str, Model] = {}
        self.expanded = 0
        self._spelling: dict[str, str] = {}
        self._card: Card | None = None
        """The card at work, for the message of an exceeded limit."""
        self._said: dict[tuple[str, str, int], tuple[Remark, dict[str, None]]] = {}
        """What was remarked, by text and place, with the nets of every instance."""

    def run(self) -> None:
        """Expand the board. Raises `InputTrouble` where a limit is exceeded."""
        root = self.deck.root
        scope = Scope(root.params, outer=None, limits=self.limits)
        frame = Frame(
            definition=root,
            scope=scope,
            prefix="",
            ports={},
            outer=None,
            level=0,
            multiplier=1.0,
            note="",
            models={},
        )
        try:
            self.settle(frame)
            for name, card in root.models.items():
                self._card = card
                self.model(frame, name)
            self.fill(frame)
        except TooMuch as error:
            bound = self.limits.steps if error.limit == "steps" else self.limits.depth
            file, line = (self._card.file, self._card.line) if self._card else ("", 0)
            over(error.limit, bound, "an expression", file=file, line=line)

    def settle(self, frame: Frame) -> None:
        """Evaluate the parameters of a frame in their order, so that long chains are short when used; those
        that do not compute are named once."""
        for name in frame.scope.names():
            card = self._card = frame.definition.param_cards.get(name, frame.definition.card)
            try:
                frame.scope.value(name)
            except NotAQuantity as error:
                if card is not None:
                    self.say(card.remark(f"the parameter {name[:40]} is unknown: {error}"))

    def say(self, remark: Remark) -> None:
        """A remark, once a place however often the subcircuit is used."""
        key = (remark.text, remark.origin.file, remark.origin.line)
        _, nets = self._said.setdefault(key, (remark, {}))
        nets.update(dict.fromkeys(remark.nets))

    def remarks(self) -> list[Remark]:
        """All remarks, in the order of their first instance."""
        return [replace(remark, nets=tuple(nets)) for remark, nets in self._said.values()]

    def fill(self, frame: Frame) -> None:
        for element in frame.definition.elements:
            self._card = element.card
            self.expanded += 1
            if self.expanded > self.limits.elements:
                card = element.card
                over(
                    "elements",
                    self.limits.elements,
                    "too many elements after subcircuits are expanded",
                    file=card.file,
                    line=card.line,
                )
            definition, holder = self.subcircuit(frame, element)
            if definition is not None and holder is not None:
                self.instance(frame, element, definition, holder)
                continue
            part = part_of(element, _At(self, frame, element))
            if part is None:
                text = f"the line {element.card.text[:60]!r} has too few words for a part and is passed over"
                words = element.words.positional[1:]
                nets = tuple(self.key(frame, word) for word in words)
                self.say(replace(element.card.lost(text), nets=nets))
            else:
                self.parts.append(part)

    def subcircuit(self, frame: Frame, element: Element) -> tuple[Definition | None, Frame | None]:
        """The definition that an X element names, and the frame it was found in."""
        if element.letter != "X" or len(element.words.positional) < 2:
            return None, None
        name = element.words.positional[-1].lower()
        for around in frame.around():
            if name in around.definition.subcircuits:
                return around.definition.subcircuits[name], around
        return None, None

    def instance(self, frame: Frame, element: Element, definition: Definition, holder: Frame) -> None:
        card = element.card
        if frame.level >= self.limits.depth:
            over("depth", self.limits.depth, "subcircuits within subcircuits", file=card.file, line=card.line)
        place = _At(self, frame, element)
        nodes = element.words.positional[1:-1]
        if len(nodes) != len(definition.ports):
            reason = f"{len(nodes)} nodes for the {len(definition.ports)} of subcircuit {definition.name[:40]}"
            part = part_of(element, place)
            if part is not None:
                self.parts.append(replace(part, unknown=reason))
            return
        scope, multiplier = self.arguments(element, definition, holder, place)
        where = f"{frame.note} in " if frame.note else ""
        inner = Frame(
            definition=definition,
            scope=scope,
            prefix=f"{frame.prefix}{element.ref}.",
            ports={
                port.lower(): place.net(f"?{element.ref}.{index}" if node == "?" else node)
                for index, (port, node) in enumerate(zip(definition.ports, nodes, strict=True), start=1)
            },
            outer=holder,
            level=frame.level + 1,
            multiplier=frame.multiplier * multiplier,
            note=f"{where}{element.ref}, line {card.line}",
            models={},
        )
        self.settle(inner)
        self.fill(inner)

    def arguments(self, element: Element, definition: Definition, holder: Frame, place: _At) -> tuple[Scope, float]:
        """Parameters of an instance: the definition's own, overridden by the pairs on the X card, which are
        evaluated where that card stands. `m` counts parallel instances unless the subcircuit has a parameter
        of that name."""
        scope = Scope({**definition.defaults, **definition.params}, outer=holder.scope, limits=self.limits)
        multiplier = 1.0
        for name, text in element.words.named.items():
            try:
                value = place.number(text)
            except NotAQuantity as error:
                remark = element.card.remark(f"{name[:40]} is passed over: {error}", place.ref(element.name))
                nets = tuple(place.net(node) for node in element.words.positional[1:-1] if node != "?")
                self.say(replace(remark, lost=True, nets=nets))
                continue
            if name == "m" and "m" not in definition.defaults:
                multiplier = value
            else:
                scope.give(name, value)
        return scope, multiplier

    def net(self, frame: Frame, name: str) -> str:
        """Key of the net a node name means in `frame`; the first spelling seen is the one that stays."""
        lower = name.lower()
        if lower in frame.ports:
            return frame.ports[lower]
        key = self.key(frame, name)
        self._spelling.setdefault(key.lower(), key)
        if key not in self.nets:
            self.nets[key] = Net(key=key, name=name if key == GROUND else key)
        return key

    def key(self, frame: Frame, name: str) -> str:
        """The key a node name has or would have in `frame`."""
        lower = name.lower()
        if lower in frame.ports:
            return frame.ports[lower]
        if lower in GROUND_NAMES:
            return GROUND
        full = name if lower in self.deck.global_nets else frame.prefix + name
        return self._spelling.get(full.lower(), full)

    def model(self, frame: Frame, name: str) -> str | None:
        """Key text of the model in force under a name, evaluated and filed on first use."""
        lower = name.lower()
        if lower not in frame.models:
            frame.models[lower] = self._find_model(frame, lower)
        return frame.models[lower]

    def _find_model(self, frame: Frame, lower: str) -> str | None:
        for around in frame.around():
            if lower in around.definition.models:
                if around is frame:
                    return self._file_model(frame, lower)
                return self.model(around, lower)
        return None

    def _file_model(self, frame: Frame, lower: str) -> str:
        """File a model under its name; one of a subcircuit that differs from what stands there gets the name
        of the subcircuit, and if it differs from instance to instance, that of the instance, in front."""
        card = frame.definition.models[lower]
        name = model_name(card)
        model, remarks = read_model(card, frame.scope, name)
        for full in (name, f"{frame.definition.name}.{name}", f"{frame.prefix}{name}"):
            named = replace(model, name=full)
            if self.models.setdefault(full.lower(), named) == named:
                break
        else:
            full = name
        for remark in remarks:
            self.say(replace(remark, model=full.lower()))
        return full


LARGEST = 1e24
"""Beyond it a number on an element is a slip."""


class _At:
    """What one element sees: see `spice_parts.Place`."""

    def __init__(self, expansion: Expansion, frame: Frame, element: Element) -> None:
        self._expansion, self._frame, self._element = expansion, frame, element

    @property
    def origin(self) -> Origin:
        card = self._element.card
        return Origin(kind="netlist", file=card.file, line=card.line, note=self._frame.note)

    def ref(self, name: str) -> str:
        if name == self._element.name:
            return self._frame.prefix + self._element.ref
        return self._frame.prefix + self._frame.definition.refs.get(name.lower(), name)

    def net(self, name: str) -> str:
        return self._expansion.net(self._frame, name)

    def number(self, word: str) -> float:
        value = self._frame.scope.number(word)
        if abs(value) > LARGEST:
            raise NotAQuantity(f"{word[:40]!r} is larger than anything on a board")
        return value

    def model(self, name: str) -> tuple[str, str] | None:
        key = self._expansion.model(self._frame, name)
        return None if key is None else (key, self._expansion.models[key.lower()].kind)

    def multiplier(self) -> float:
        return self._frame.multiplier

    def lists_pads(self) -> bool:
        return self._expansion.pads
