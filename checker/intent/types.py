"""What the intent file says, after checking: plain SI numbers, every entry with its line."""

from __future__ import annotations

import datetime
from collections.abc import Mapping
from dataclasses import field

from checker.quantity.value import Origin
from checker.shape import frozen
from checker.words import PortRole


@frozen
class Band:
    """Lowest and highest frequency [Hz]; `low_hz` may be 0."""

    low_hz: float
    high_hz: float


@frozen
class Ambient:
    """Temperatures [degC]; None where not said."""

    min_c: float | None = None
    nominal_c: float | None = None
    max_c: float | None = None


@frozen
class RailIntent:
    """A declared supply: `tolerance` is a fraction."""

    net: str
    volts: float
    origin: Origin
    tolerance: float | None = None
    may_be_absent: bool = False


@frozen
class PortIntent:
    """A declared port: by `net`, or by `part` and `pin`.

    `level_v` is the peak e.m.f. [V] of the largest signal.
    `impedance_ohm` is the reference; `attach` False where the netlist already holds source or load.
    """

    name: str
    role: PortRole
    origin: Origin
    net: str = ""
    part: str = ""
    pin: str = ""
    impedance_ohm: float | None = None
    attach: bool = True
    level_v: float | None = None
    band: Band | None = None


@frozen
class StateIntent:
    """A named condition of the board: pins ("U1.7") at "high", "low", "open" or volts; rails absent."""

    name: str
    origin: Origin
    pins: Mapping[str, float | str] = field(default_factory=dict)
    absent: tuple[str, ...] = ()


@frozen
class TargetIntent:
    """A wanted figure: of a stage, a group, or between two ports. Bounds in the unit of `quantity`'s key."""

    quantity: str
    origin: Origin
    stage: str = ""
    group: str = ""
    source: str = ""
    to: str = ""
    minimum: float | None = None
    maximum: float | None = None


@frozen
class PartIntent:
    """What the engineer says of one part: a card by name, ratings (`v_max_v`, `i_max_a`, `p_max_w`,
    `tj_max_c`, `rth_ja_kpw`), tolerance, a two-terminal model (`resistance_ohm`, `inductance_h`, `capacitance_f`) for
    a part the netlist gives none for, e.g. a relay coil, or `parasitics` of a capacitor or coil (`rser`, `lser`,
    `resonance_hz`, `quality`, `quality_hz`; SI)."""

    ref: str
    origin: Origin
    card: str = ""
    tolerance: float | None = None
    ratings: Mapping[str, float] = field(default_factory=dict)
    resistance_ohm: float | None = None
    inductance_h: float | None = None
    capacitance_f: float | None = None
    parasitics: Mapping[str, float] = field(default_factory=dict)


@frozen
class AcceptedIntent:
    """A finding the team lives with: by rule and subject, or by fingerprint; until a day, inclusive."""

    reason: str
    by: str
    origin: Origin
    rule: str = ""
    subject: str = ""
    fingerprint: str = ""
    until: datetime.date | None = None


@frozen
class Intent:
    """The whole file; `path` empty where there is none.

    `limits`: rule id -> limit name -> number or text with unit, checked against the rules only once these
    are known."""

    path: str = ""
    band: Band | None = None
    ambient: Ambient = field(default_factory=Ambient)
    rails: tuple[RailIntent, ...] = ()
    ports: tuple[PortIntent, ...] = ()
    states: tuple[StateIntent, ...] = ()
    targets: tuple[TargetIntent, ...] = ()
    limits: Mapping[str, Mapping[str, float | str]] = field(default_factory=dict)
    limit_lines: Mapping[str, int] = field(default_factory=dict)
    parts: tuple[PartIntent, ...] = ()
    accepted: tuple[AcceptedIntent, ...] = ()
