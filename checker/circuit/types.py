"""The electrical board: numbered nodes, columnar elements with a scenario axis, and what is known of each part.

Node 0 is ground. Every value array has axis 0 = scenario (index 0 nominal), axis 1 = element, so that corners,
samples, states and remedy candidates are one stack and one solve. `with_changes` (in `changes.py`) keeps topology
and numbering.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import field
from typing import Final, Literal

import numpy as np

from checker.arrays import FloatArray, IntArray
from checker.cards.types import Card, Ratings
from checker.quantity.value import Origin, Value
from checker.shape import frozen
from checker.words import PortRole

PartKind = Literal[
    "resistor",
    "capacitor",
    "inductor",
    "source",
    "bipolar",
    "fet",
    "diode",
    "connector",
    "coil",
    "unmodelled",
]
Property = Literal["r_ohm", "c_f", "l_h", "v_v", "i_a", "bf", "vto", "beta", "factor"]


@frozen
class Branches:
    """Two-terminal linear elements of one kind.

    `names` (n); `nodes` int64 (n, 2), current counted from nodes[:, 0] to nodes[:, 1] through the element;
    `value` float64 (S, n): ohm, farad, henry, volt (v0 - v1) or ampere.
    """

    names: tuple[str, ...]
    nodes: IntArray
    value: FloatArray


@frozen
class Couplings:
    """Coupled inductor pairs: `pair` int64 (n, 2) into the inductor table; `k` float64 (S, n), -1..1."""

    names: tuple[str, ...]
    pair: IntArray
    k: FloatArray


@frozen
class Devices:
    """Semiconductors of one family with their external terminals.

    `nodes` int64 (n, k): bipolar (collector, base, emitter, substrate; substrate 0 where absent), junction FET (drain,
    gate, source), MOSFET (drain, gate, source, body), diode (anode, cathode). `polarity` float64 (n,): +1 NPN,
    N channel or diode, -1 PNP or P channel. `params`: SPICE-style names, lower case, SI, at
    `tnom_k` (n,), each float64 (S, n). `rth_kpw` (n,): nan where unknown. `one_chip`: pairs of rows that share one
    chip, so that each is heated by both and the rating is of both together.
    """

    names: tuple[str, ...]
    nodes: IntArray
    polarity: FloatArray
    params: Mapping[str, FloatArray]
    tnom_k: FloatArray
    rth_kpw: FloatArray
    one_chip: tuple[tuple[int, int], ...] = ()

    def chip_power(self, power_w: FloatArray) -> FloatArray:
        """Dissipation (S, n) [W] of the chip on which each device is, from that of the devices."""
        if not self.one_chip:
            return power_w
        whole = power_w.copy()
        for one, other in self.one_chip:
            whole[:, [one, other]] = power_w[:, [one]] + power_w[:, [other]]
        return whole


NO_DEVICES: Final = Devices(
    names=(),
    nodes=np.zeros((0, 4), dtype=np.int64),
    polarity=np.zeros(0),
    params={},
    tnom_k=np.zeros(0),
    rth_kpw=np.zeros(0),
)
"""The table of a family that a board has none of."""


@frozen
class FourPoles:
    """Linear controlled sources and transmission lines, the same in all scenarios.

    `kinds`: "E", "G" (by a voltage), "F", "H" (by a current) or "line". `nodes` int64 (n, 4): output +, output -,
    control +, control - (ground where a current controls); of a line its two ports. `sense` (n,): the place among the
    voltage sources of the one whose current controls, else -1. `value` float64 (n, 4): the gain in column 0 (plain, S,
    plain, ohm); of a line its whole series resistance [ohm] and inductance [H], shunt conductance [S] and
    capacitance [F].
    """

    names: tuple[str, ...]
    kinds: tuple[str, ...]
    nodes: IntArray
    sense: IntArray
    value: FloatArray


NO_FOUR_POLES: Final = FourPoles(
    names=(),
    kinds=(),
    nodes=np.zeros((0, 4), dtype=np.int64),
    sense=np.zeros(0, dtype=np.int64),
    value=np.zeros((0, 4)),
)
"""A board without any."""

TRANSISTOR_FAMILIES: Final = ("bipolar", "jfet", "mosfet")
"""Families whose first three terminals are output, control and common, in the order of `Circuit.transistors`."""


@frozen
class Transistors:
    """Every amplifying device of a board, family after family, alike.

    `nodes` int64 (n, 3): output, control and common net (collector, base, emitter; drain, gate, source). `families`
    and `places`: table of each, and its row there. `polarity`, `rth_kpw` (n,) as in `Devices`.
    """

    names: tuple[str, ...]
    families: tuple[str, ...]
    places: tuple[int, ...]
    nodes: IntArray
    polarity: FloatArray
    rth_kpw: FloatArray


@frozen
class Rail:
    """A net of known voltage. `source`: "intent", "element" or "net name"; `element` index into `voltages`."""

    net: str
    volts: float
    source: Literal["intent", "element", "net name"]
    element: int
    tolerance: float | None = None
    may_be_absent: bool = False


@frozen
class Port:
    """Where signal enters or leaves.

    `node` is the port's plane. An input is driven by `voltages[emf]` where an e.m.f. exists (then `series` is the
    resistor between e.m.f. and plane, -1 if none), else by a current into `node`. `load`: names of the resistors
    that are the external load of an output. `role` None: direction still to be found by recognition.
    """

    name: str
    net: str
    node: int
    role: PortRole | None
    reference_ohm: float | None
    emf: int = -1
    series: int = -1
    load: tuple[str, ...] = ()
    level_v: float | None = None
    band_hz: tuple[float, float] | None = None
    coaxial: bool = False
    declared: bool = False
    part: str = ""


@frozen
class Agreement:
    """Whether symbol, part number and package of a transistor fit, by question ("pin-order", "part-polarity",
    "package-mismatch"): what is `wrong`, in a sentence; what is `unknown`, as (datum, what to supply).

    `judged`: False where the export has no pads and packages at all, so that nothing is asked.
    """

    wrong: Mapping[str, str] = field(default_factory=dict)
    unknown: Mapping[str, tuple[str, str]] = field(default_factory=dict)
    judged: bool = True


@frozen
class PartFact:
    """What is known of one part: kind, terminals by name -> net, value, card, ratings, where it stands."""

    ref: str
    kind: PartKind
    terminals: Mapping[str, str]
    origin: Origin
    value: Value | None = None
    card: Card | None = None
    model_source: str = ""
    ratings: Ratings = field(default_factory=Ratings)
    ratings_source: str = ""
    dielectric: str = ""
    """Of a capacitor, with where it is said: "X7R by the value"; empty where nothing says it."""
    gain_min: float | None = None
    gain_max: float | None = None
    footprint: str = ""
    agreement: Agreement = field(default_factory=lambda: Agreement(judged=False))


@frozen
class Unknown:
    """A part that cannot be solved with: `datum` names what is missing, `supply` what would help.

    `nets`: those it touches. `blocks_dc`: its island has no operating point because of it; else only signal
    figures carry the assumption that it is open.
    """

    ref: str
    pin: str
    nets: tuple[str, ...]
    datum: str
    supply: str
    blocks_dc: bool


@frozen
class Change:
    """One altered element: `value` in the property's unit, or a multiplier where `property` is "factor"."""

    part: str
    property: Property
    value: float


@frozen
class Scenario:
    """A named set of changes; `temperature_k` None keeps the nominal. `kind` groups them for reports."""

    name: str
    kind: Literal["nominal", "corner", "state", "candidate", "sample"] = "nominal"
    changes: tuple[Change, ...] = ()
    temperature_k: float | None = None


@frozen
class Circuit:
    """Everything a solve needs. S scenarios, n nodes; `nets[0]` is ground.

    `devices`: family -> table, for the families of `checker.devices.family` that the board has.
    `states`: conditions that the board itself suggests (levels of logic, ends of potentiometers), besides those of
    the intent.
    """

    nets: tuple[str, ...]
    resistors: Branches
    capacitors: Branches
    inductors: Branches
    couplings: Couplings
    voltages: Branches
    currents: Branches
    devices: Mapping[str, Devices]
    temperature_k: FloatArray
    scenarios: tuple[Scenario, ...]
    rails: tuple[Rail, ...] = ()
    ports: tuple[Port, ...] = ()
    parts: Mapping[str, PartFact] = field(default_factory=dict)
    unknowns: tuple[Unknown, ...] = ()
    assumptions: tuple[str, ...] = ()
    states: tuple[Scenario, ...] = ()
    band_hz: tuple[float, float] | None = None
    four_poles: FourPoles = NO_FOUR_POLES

    @property
    def size(self) -> int:
        """Number of scenarios."""
        return len(self.scenarios)

    @property
    def transistors(self) -> Transistors:
        """Bipolars and field-effect transistors in one list; made anew at each call."""
        tables = [(kind, self.devices[kind]) for kind in TRANSISTOR_FAMILIES if kind in self.devices]
        return Transistors(
            names=tuple(name for _, table in tables for name in table.names),
            families=tuple(kind for kind, table in tables for _ in table.names),
            places=tuple(j for _, table in tables for j in range(len(table.names))),
            nodes=np.concatenate([NO_DEVICES.nodes[:, :3], *(table.nodes[:, :3] for _, table in tables)]),
            polarity=np.concatenate([NO_DEVICES.polarity, *(table.polarity for _, table in tables)]),
            rth_kpw=np.concatenate([NO_DEVICES.rth_kpw, *(table.rth_kpw for _, table in tables)]),
        )

    def ends(self, part: str) -> tuple[int, int] | None:
        """Nodes between which a whole two-terminal part stands, its parasitics included; None for another part."""
        fact = self.parts.get(part)
        if fact is None or fact.terminals.keys() != {"1", "2"}:
            return None
        nets = {net: place for place, net in enumerate(self.nets)}
        first, second = (nets.get(fact.terminals[pin]) for pin in ("1", "2"))
        return None if first is None or second is None else (first, second)

    def find_device(self, name: str) -> tuple[str, int]:
        """Family and place of a semiconductor. Raises KeyError for another part."""
        for kind, table in self.devices.items():
            if name in table.names:
                return kind, table.names.index(name)
        raise KeyError(name)

    @property
    def bipolars(self) -> Devices:
        """The bipolar transistors."""
        return self.devices.get("bipolar", NO_DEVICES)

    @property
    def diodes(self) -> Devices:
        """The diodes."""
        return self.devices.get("diode", NO_DEVICES)

    def node(self, net: str) -> int:
        """Index of a net [ground included]. Raises KeyError for a net that is not in the circuit."""
        try:
            return self.nets.index(net)
        except ValueError:
            raise KeyError(net) from None
