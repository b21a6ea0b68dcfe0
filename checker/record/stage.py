"""One stage (a device) and one group (several devices that act as one), as reported."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import field
from typing import Literal

from checker.record.base import Record
from checker.record.figures import Span, Specs, TerminalFigures, Thumb
from checker.shape import frozen
from checker.words import Configuration, GroupLabel, Role

Side = Literal["input", "output"]
LinkKind = Literal["capacitor", "winding", "direct", "port"]


@frozen
class Location(Record):
    """Where a part stands in the source."""

    file: str
    """Path relative to where the check ran, forward slashes."""
    line: int = 0
    """1-based; 0 where unknown."""
    sheet: str = ""
    """Sheet path in a hierarchical schematic."""


@frozen
class Connection(Record):
    """A device terminal and the net it is on."""

    terminal: str
    """base, emitter or collector."""
    net: str
    """Key in `nets`."""
    device: str | None = None
    """Of a group: the member whose terminal it is."""


@frozen
class StageLink(Record):
    """What carries the signal across the stage's boundary."""

    side: Side
    """Whether the signal comes in or goes out through it."""
    kind: LinkKind
    """A coupling capacitor, a winding, a direct connection, or the port itself."""
    part: str | None = None
    """Reference of the capacitor or winding."""
    net: str | None = None
    """The net on the stage's side: the input or output reference."""
    far_net: str | None = None
    """The net on the other side; the same for a direct link."""
    other: str | None = None
    """Id of the stage, or name of the port, at the far end."""


@frozen
class CardUsed(Record):
    """The data that stood for the device."""

    name: str
    """Name of the card or model."""
    source: str
    """Where its figures come from, in words."""
    assumed: bool
    """True where a generic card stood in for an unknown part."""


@frozen
class Bias(Record):
    """Operating point of a bipolar transistor at nominal temperature. P devices are multiplied by -1."""

    region: str | None
    """active, saturated, cut-off or reverse-active."""
    ic_a: float | None
    """Collector current."""
    ib_a: float | None
    """Base current."""
    vce_v: float | None
    """Collector-emitter voltage."""
    vbe_v: float | None
    """Base-emitter voltage."""
    headroom_v: float | None
    """How far the device is from leaving the active region."""
    power_w: float | None
    """Dissipation."""
    tj_c: float | None
    """Junction temperature with self-heating, degrees Celsius."""


@frozen
class FetBias(Record):
    """Operating point of a field-effect transistor at nominal temperature. P devices are multiplied by -1."""

    region: str | None
    """active, ohmic, cut-off, body-conducting or gate-conducting."""
    id_a: float | None
    """Drain current."""
    ig_a: float | None
    """Gate current."""
    vds_v: float | None
    """Drain-source voltage."""
    vgs_v: float | None
    """Gate-source voltage."""
    headroom_v: float | None
    """How far the device is from leaving the active region."""
    power_w: float | None
    """Dissipation."""
    tj_c: float | None
    """Junction temperature with self-heating, degrees Celsius."""
    reversed: bool = False
    """Drain and source are swapped at rest."""


@frozen
class SmallSignal(Record):
    """Intrinsic small-signal parameters at the operating point."""

    gm_s: float | None
    """dIC/dVBE at constant VCE."""
    re_ohm: float | None
    """VT/IE, a hand figure."""
    rpi_ohm: float | None
    """1 / (dIB/dVBE)."""
    ro_ohm: float | None
    """1 / (dIC/dVCE)."""
    ft_hz: float | None
    """gm / 2 pi (Cpi + Cmu), junction charge included."""


@frozen
class Stage(Record):
    """One device and what surrounds it. `id` is its reference ("Q1", a dual's unit "Q1.A", "X1.Q3")."""

    id: str
    """Unique in the report."""
    device: str
    """Reference of the device."""
    configuration: Configuration
    """How the device is used."""
    role: Role
    """Whether it carries signal, sets a bias, or switches."""
    confidence: float
    """Of the recognition, 0 to 1."""
    reason: str = ""
    """Why it is unclassified or uncertain."""
    groups: tuple[str, ...] = ()
    """Ids of the groups it belongs to."""
    entry: Connection | None = None
    """The terminal that brings the drive."""
    exit: Connection | None = None
    """The terminal that takes the signal on."""
    input_ref: str | None = None
    """The net where the input figures are taken."""
    output_ref: str | None = None
    """The net where the output figures are taken."""
    links: tuple[StageLink, ...] = ()
    """What joins it to other stages and to ports."""
    location: Location | None = None
    """Where the device stands in the netlist."""
    card: CardUsed | None = None
    """The device data used."""
    bias: Bias | FetBias | None = None
    """The operating point."""
    small_signal: SmallSignal | None = None
    """Small-signal parameters."""
    specs: Specs = field(default_factory=Specs)
    """What it does, between the references."""
    terminal: TerminalFigures = field(default_factory=TerminalFigures)
    """What it does, at the device terminals."""
    rule_of_thumb: Mapping[str, Thumb] = field(default_factory=dict)
    """Hand figures by quantity, beside the exact ones."""
    spread: Mapping[str, Span] = field(default_factory=dict)
    """Ranges by quantity over part spread and temperature."""
    evidence: tuple[str, ...] = ()
    """Why it was recognised as it was, in words and numbers."""


@frozen
class Group(Record):
    """Several devices that act as one. `id`: device ids joined by "+", sorted."""

    id: str
    """Unique in the report."""
    configuration: GroupLabel
    """What they form together."""
    devices: tuple[str, ...]
    """Ids of the member stages, sorted."""
    entry: Connection | None = None
    """The terminal that brings the drive."""
    exit: Connection | None = None
    """The terminal that takes the signal on."""
    specs: Specs = field(default_factory=Specs)
    """What it does, between the references."""
    terminal: TerminalFigures = field(default_factory=TerminalFigures)
    """What it does, at the device terminals."""
    evidence: tuple[str, ...] = ()
    """Why it was recognised as it was."""
