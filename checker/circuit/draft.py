"""The board while it is being put together: elements by name between nets by key, before nodes have
numbers."""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterable, Mapping
from dataclasses import field
from typing import Final, Literal

from checker.cards.types import Card
from checker.circuit.notes import Notes
from checker.circuit.order import natural_key
from checker.circuit.parameters import PARAMETERS
from checker.circuit.ties import Ties
from checker.circuit.types import PartFact, Rail, Scenario, Unknown
from checker.intent.types import Intent, PartIntent
from checker.netlist.types import Netlist, Part
from checker.shape import filled, frozen
from checker.words import PortRole

Table = Literal["resistors", "capacitors", "inductors", "voltages", "currents"]
TABLES: Final[tuple[Table, ...]] = ("resistors", "capacitors", "inductors", "voltages", "currents")
TIE_REL: Final = 1e-9
"""Sources in parallel count as equal within this, of the larger: rounding of sums of a few volts is 1e-15."""


@frozen
class Wire:
    """A two-terminal element from `first` to `second`; `value` in SI."""

    first: str
    second: str
    value: float

    def other(self, net: str) -> str:
        """The net at the other end."""
        return self.second if net == self.first else self.first


@frozen
class DraftDevice:
    """A semiconductor with its nets in the order of `Devices.nodes`; `chip` is the same for two that share one."""

    nets: tuple[str, ...]
    polarity: float
    params: Mapping[str, float]
    tnom_k: float
    rth_kpw: float
    chip: str = ""


@frozen
class DraftFourPole:
    """A controlled source or a line: `sense` names the controlling source; `value` as in `FourPoles`."""

    kind: str
    nets: tuple[str, str, str, str]
    sense: str
    value: tuple[float, float, float, float]


@frozen
class LoosePin:
    """A pin of a part that is not modelled; whether it matters is decided when the board is complete."""

    part: str
    pin: str
    net: str
    kind: str
    datum: str
    supply: str


@frozen
class LoosePart:
    """A part that cannot be solved with as a whole: blocks every net of `nets` that has elements.

    `blocks_dc` False: it is open at DC, and only signal figures suffer.
    """

    ref: str
    nets: tuple[str, ...]
    datum: str
    supply: str
    blocks_dc: bool = True


@frozen
class DraftPort:
    """A port with its elements by name ("" where there is none)."""

    name: str
    net: str
    role: PortRole | None
    reference_ohm: float | None = None
    emf: str = ""
    series: str = ""
    load: tuple[str, ...] = ()
    level_v: float | None = None
    band_hz: tuple[float, float] | None = None
    coaxial: bool = False
    declared: bool = False
    part: str = ""


@filled
class Draft:
    """Everything gathered so far. `merged`: keys of nets that are ground; `ground` is the key kept for
    them."""

    netlist: Netlist
    intent: Intent
    ground: str
    merged: frozenset[str]
    own_cards: Mapping[str, Card] = field(default_factory=dict)
    """The project's own cards by squeezed name."""
    notes: Notes = field(default_factory=Notes)
    ties: Ties = field(default_factory=Ties)
    resistors: dict[str, Wire] = field(default_factory=dict)
    capacitors: dict[str, Wire] = field(default_factory=dict)
    inductors: dict[str, Wire] = field(default_factory=dict)
    voltages: dict[str, Wire] = field(default_factory=dict)
    currents: dict[str, Wire] = field(default_factory=dict)
    couplings: dict[str, tuple[str, str, float]] = field(default_factory=dict)
    devices: dict[str, dict[str, DraftDevice]] = field(default_factory=lambda: {kind: {} for kind in PARAMETERS})
    """Family -> its devices by name."""
    four_poles: dict[str, DraftFourPole] = field(default_factory=dict)
    signals: set[str] = field(default_factory=set)
    """Names of V and I elements that carry signal."""
    links: set[str] = field(default_factory=set)
    """Names of 0 V entries that stand for wires: 0 ohm parts, closed jumpers, fuses, beads."""
    facts: dict[str, PartFact] = field(default_factory=dict)
    loose_pins: list[LoosePin] = field(default_factory=list)
    loose_parts: list[LoosePart] = field(default_factory=list)
    unknowns: list[Unknown] = field(default_factory=list)
    rails: list[Rail] = field(default_factory=list)
    rail_elements: dict[str, str] = field(default_factory=dict)
    """Rail net -> name of the voltage entry that holds it."""
    foreign: set[str] = field(default_factory=set)
    """Nets touched by transistors that are not solved or by pins of unmodelled parts that may feed them."""
    nameless: set[str] = field(default_factory=set)
    """Nets that are supplies by name, of unknown voltage."""
    ports: list[DraftPort] = field(default_factory=list)
    driven: dict[str, str] = field(default_factory=dict)
    """Pin as a state names it ("U1.7", "U1.OUT") -> net."""
    driven_pins: set[tuple[str, str]] = field(default_factory=set)
    """The same pins as (part, number)."""
    tracks: dict[str, float] = field(default_factory=dict)
    """Potentiometer -> its whole resistance [ohm]."""
    ranges: dict[str, tuple[float, float]] = field(default_factory=dict)
    """Part with a range as its value -> both ends, as factors on the middle that it is taken at."""
    states: list[Scenario] = field(default_factory=list)
    """States and corners that the board itself suggests, besides those of the intent."""
    lines: dict[str, float | None] = field(default_factory=dict)
    """Net at an end of a lossless line -> its characteristic impedance [ohm]."""
    coaxial_parts: list[Part] = field(default_factory=list)
    plain_connectors: list[Part] = field(default_factory=list)
    ends: dict[str, list[tuple[Table, str]]] = field(default_factory=dict)
    device_ends: Counter[str] = field(default_factory=Counter)
    touches: Counter[str] = field(default_factory=Counter)
    """Net by which it goes in the circuit -> number of pins on it in the netlist."""

    def net(self, key: str) -> str:
        """The net by which `key` goes in the circuit: every ground is one."""
        return self.ground if key in self.merged else key

    def wire(self, table: Table, name: str, first: str, second: str, value: float) -> None:
        """Add a two-terminal element between two net keys; one with both ends on one net does nothing and is
        left out."""
        ends = self.net(first), self.net(second)
        if ends[0] == ends[1]:
            if name in self.facts:
                self.notes.add("parts", "both ends on one net; left out", name)
            return
        self._enter(table, name, Wire(first=ends[0], second=ends[1], value=value))

    def tie(self, name: str, first: str, second: str, volts: float, *, link: bool = False) -> bool:
        """Add an ideal source first - second = `volts` [V]; False where the nets are tied already.

        A second source that agrees with the first would leave their shares of current undetermined: it is
        left out; one that disagrees is left out too and listed as a datum that is missing.
        """
        a, b = self.net(first), self.net(second)
        standing = 0.0 if a == b else self.ties.difference(a, b)
        if standing is None:
            self.ties.join(a, b, volts)
            self._enter("voltages", name, Wire(first=a, second=b, value=volts))
            if link:
                self.links.add(name)
            return True
        if abs(standing - volts) <= TIE_REL * max(abs(standing), abs(volts)):
            self.notes.add("parts", "its two nets are held at that voltage already; left out", name)
        else:
            text = f"holds {volts:g} V between nets that other sources hold at {standing:g} V; left out"
            self.notes.add("rails", text, name)
            datum = f"one voltage between {a} and {b}"
            self.loose(name, (a, b), datum, f"remove {name} or the source that contradicts it")
        return False

    def present(self) -> set[str]:
        """Nets on which an element ends."""
        return self.ends.keys() | self.device_ends.keys()

    def device_pins(self, net: str) -> int:
        """Number of semiconductor terminals on a net."""
        return self.device_ends[net]

    def signal_nets(self) -> set[str]:
        """Hot nets of voltage sources that carry signal."""
        wires = [self.voltages[name] for name in self.signals if name in self.voltages]
        return {net for wire in wires for net in (wire.first, wire.second)} - {self.ground}

    def elements_on(self, net: str) -> list[tuple[Table, str]]:
        """Two-terminal elements with an end on a net, as (table, name) in natural order."""
        return sorted(self.ends.get(net, ()), key=lambda entry: (TABLES.index(entry[0]), natural_key(entry[1])))

    def _enter(self, table: Table, name: str, wire: Wire) -> None:
        self.table(table)[name] = wire
        for net in (wire.first, wire.second):
            self.ends.setdefault(net, []).append((table, name))

    def place(self, kind: str, name: str, device: DraftDevice) -> None:
        """Add a semiconductor to its family."""
        self.devices[kind][name] = device
        self.device_ends.update(device.nets)

    def place_four_pole(self, name: str, four_pole: DraftFourPole) -> None:
        """Add a controlled source or a line."""
        self.four_poles[name] = four_pole
        self.device_ends.update(four_pole.nets)

    def table(self, table: Table) -> dict[str, Wire]:
        """The dictionary of one kind of two-terminal element."""
        tables: dict[Table, dict[str, Wire]] = {
            "resistors": self.resistors,
            "capacitors": self.capacitors,
            "inductors": self.inductors,
            "voltages": self.voltages,
            "currents": self.currents,
        }
        return tables[table]

    def loose(self, ref: str, nets: Iterable[str], datum: str, supply: str, *, blocks_dc: bool = True) -> None:
        """Record a part that cannot be solved with as a whole."""
        canonical = tuple(dict.fromkeys(self.net(net) for net in nets))
        self.loose_parts.append(LoosePart(ref=ref, nets=canonical, datum=datum, supply=supply, blocks_dc=blocks_dc))

    def said(self, ref: str) -> PartIntent | None:
        """The intent's entry for a part."""
        return next((entry for entry in self.intent.parts if entry.ref == ref), None)

    def known_volts(self, net: str) -> float | None:
        """Voltage against ground where ideal sources fix it [V]."""
        return 0.0 if net == self.ground else self.ties.difference(net, self.ground)
