"""The report as a whole, and what it says of the board beyond its stages."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import field
from typing import Literal

from checker.record.base import Record
from checker.record.figures import Complex
from checker.record.finding import Accepted, Finding, Unchecked
from checker.record.stage import Group, Stage
from checker.shape import frozen
from checker.words import Format, PortRole, Search

SCHEMA: Literal["stageproof-report/1"] = "stageproof-report/1"


@frozen
class Tool(Record):
    """The program that wrote the report."""

    version: str
    """Version of Stageproof."""


@frozen
class SourceFile(Record):
    """The netlist that was read."""

    path: str
    """Relative, forward slashes."""
    format: Format
    """Dialect."""
    sha256: str
    """Of the bytes read."""


@frozen
class Conditions(Record):
    """Under what the figures hold."""

    temperature_c: float
    """Nominal temperature, degrees Celsius."""
    band_hz: tuple[float, float] | None
    """Lowest and highest frequency of the band; null where none was declared or found."""
    f0_hz: float | None
    """The frequency at which single figures are given."""
    limits: Mapping[str, Mapping[str, float]] = field(default_factory=dict)
    """Rule id to limit name to the value used."""
    intent: str | None = None
    """Path of the intent file; null without one."""


@frozen
class Checked(Record):
    """How much of the board could be judged."""

    stages: int
    """Stages checked."""
    of: int
    """Stages there are."""


@frozen
class Rail(Record):
    """A net of known voltage."""

    net: str
    """Key in `nets`."""
    volts: float
    """Nominal voltage."""
    source: Literal["intent", "element", "net name"]
    """How it is known."""


@frozen
class NetFigures(Record):
    """What is known of a net."""

    dc_v: float | None
    """Voltage at rest."""


@frozen
class Certificate(Record):
    """The proof that goes with an operating point."""

    kcl: float | None
    """Worst sum of currents over the largest current, of all nodes."""
    step_v: float | None
    """Last full Newton correction."""
    condition: float | None
    """Condition estimate of the matrix."""
    sign: int | None
    """Sign of its determinant."""
    stable: bool | None
    """No pole with a positive real part."""
    states: int
    """How many operating points were found."""
    search: Search
    """Whether every on/off seed was tried."""


@frozen
class Island(Record):
    """Nets joined by parts that carry direct current."""

    nets: tuple[str, ...]
    """Keys in `nets`."""
    certificate: Certificate | None
    """Null where there is no operating point."""


@frozen
class Port(Record):
    """Where signal enters or leaves the board."""

    name: str
    """Unique in the report."""
    net: str
    """Key in `nets`."""
    role: PortRole | None
    """Null where the direction is unknown."""
    reference_ohm: float | None
    """The impedance it should be matched to; null without one."""
    impedance_ohm: Complex | None = None
    """At the port's plane, at f0, the outside left out."""
    return_loss_db: float | None = None
    """At f0 against the reference."""
    return_loss_worst_db: float | None = None
    """Smallest in the band."""
    return_loss_worst_hz: float | None = None
    """Where it is smallest."""
    mismatch_loss_db: float | None = None
    """At f0 against the reference."""


@frozen
class Gain(Record):
    """From an input port to an output port."""

    from_: str
    """Name of the input port."""
    to: str
    """Name of the output port."""
    voltage_gain: Complex | None = None
    """v(to) / v(from), in place, at f0."""
    voltage_gain_db: float | None = None
    """20 log10 of its magnitude."""
    emf_gain_db: float | None = None
    """v(to) over the source's e.m.f."""
    transducer_gain_db: float | None = None
    """Power into the load over power available from the source."""
    low_corner_hz: float | None = None
    """Of the e.m.f. gain."""
    high_corner_hz: float | None = None
    """Of the e.m.f. gain."""


@frozen
class Part(Record):
    """A part of the board, as far as it was understood."""

    kind: str
    """resistor, capacitor, bipolar and so on."""
    value: float | None = None
    """In `unit`; null where it has none."""
    unit: str = ""
    """Unit of the value."""
    model: str = ""
    """Name of its card or model; "" where it has none."""
    pins: Mapping[str, str] = field(default_factory=dict)
    """Pin or terminal to net."""
    data: str = ""
    """Hash of every number that the solution takes from the part."""


@frozen
class Since(Record):
    """How the findings stand against an earlier report."""

    path: str
    """The netlist of that report."""
    new: tuple[str, ...] = ()
    """Fingerprints of findings that it did not have, or had as less severe."""
    unchanged: tuple[str, ...] = ()
    """Fingerprints of findings that it had too."""
    cured: tuple[Finding, ...] = ()
    """Its findings that are no longer there."""
    unjudged: tuple[Finding, ...] = ()
    """Its findings that are gone only because this report could not judge them."""


@frozen
class Report(Record):
    """Everything that one check of one netlist has to say."""

    schema: Literal["stageproof-report/1"] = SCHEMA
    """Names this contract; a new number is a new contract."""
    tool: Tool
    """The program."""
    netlist: SourceFile
    """The netlist."""
    conditions: Conditions
    """Under what the figures hold."""
    checked: Checked
    """How much could be judged."""
    incomplete: bool = False
    """Something internal failed: see `faults`; the rest of the report stands."""
    faults: tuple[str, ...] = ()
    """Failures of the program itself."""
    assumptions: tuple[str, ...] = ()
    """What was taken for granted because nothing said it."""
    cautions: tuple[str, ...] = ()
    """What the reader should know before trusting a figure."""
    rails: tuple[Rail, ...] = ()
    """Sorted by net."""
    nets: Mapping[str, NetFigures] = field(default_factory=dict)
    """By net key."""
    ground: str = ""
    """The net from which voltages are counted."""
    parts: Mapping[str, Part] = field(default_factory=dict)
    """By reference."""
    islands: tuple[Island, ...] = ()
    """Sorted by their first net."""
    stages: tuple[Stage, ...] = ()
    """Sorted by id, numbers in an id counted as numbers (Q2 before Q10)."""
    groups: tuple[Group, ...] = ()
    """Sorted by id."""
    ports: tuple[Port, ...] = ()
    """Sorted by name."""
    gains: tuple[Gain, ...] = ()
    """Sorted by from, to."""
    findings: tuple[Finding, ...] = ()
    """Worst first, then by rule and subject."""
    accepted: tuple[Accepted, ...] = ()
    """In the order of findings."""
    unchecked: tuple[Unchecked, ...] = ()
    """Sorted by subject, rule."""
    judged: Mapping[str, tuple[str, ...]] = field(default_factory=dict)
    """Rule id to the stages, ports or parts that it could be judged on, whatever came of it."""
    since: Since | None = None
    """Against an earlier report; null where none was given."""
    unavailable: Mapping[str, str] = field(default_factory=dict)
    """Why a value is null: path, e.g. "stages/Q1/specs/low_corner_hz", to the reason. A path stands for all
    below it. In a name "/" is written "~1" and "~" "~0"; an island goes by its first net, a gain by its from
    and to as two segments."""


@frozen
class WorkingLine(Record):
    """How one figure was got; not part of the report, shown by `stageproof why`."""

    subject: str
    """Id of the stage, group, port or part."""
    quantity: str
    """Name of the quantity."""
    formula: str
    """In textbook symbols."""
    numbers: tuple[tuple[str, float, str], ...] = ()
    """Symbol, value, unit."""
    result: str = ""
    """The figure with its unit, as text."""
    source: str = ""
    """Reference or method."""
