"""What the rules found: findings, what would mend them, what was accepted, and what could not be judged."""

from __future__ import annotations

from typing import Literal

from checker.record.base import Record
from checker.record.stage import Location
from checker.shape import frozen
from checker.words import Outcome, Severity


@frozen
class Measured(Record):
    """The figure that the rule judged."""

    quantity: str
    """Name of the quantity."""
    value: float | None
    """In `unit`; the worst of the scenarios that the outcome rests on."""
    unit: str
    """V, A, W, ohm, F, H, Hz, s, S, dB, degC and the like, % for percent, "" for a plain number."""


@frozen
class Bound(Record):
    """A limit with one end."""

    relation: Literal["at most", "at least", "equals"]
    """How the measured value must stand to `value`."""
    value: float
    """In `unit`."""
    unit: str
    """Unit of the limit."""
    source: str
    """Where the limit comes from."""


@frozen
class Window(Record):
    """A limit with two ends."""

    relation: Literal["within"]
    """The measured value must lie between `low` and `high`."""
    low: float
    """In `unit`."""
    high: float
    """In `unit`."""
    unit: str
    """Unit of the limit."""
    source: str
    """Where the limit comes from."""


@frozen
class Change(Record):
    """One altered part value."""

    part: str
    """Reference of the part."""
    property: str
    """What is altered, e.g. r_ohm, c_f."""
    from_: float | str | None
    """As drawn, in `unit`."""
    to: float | str
    """As proposed, in `unit`."""
    unit: str
    """SI unit, or "" where the values are names."""


@frozen
class Effect(Record):
    """What a remedy does to one quantity."""

    quantity: str
    """Name of the quantity."""
    before: float | None
    """As drawn, in `unit`."""
    after: float | None
    """With the changes, in `unit`."""
    unit: str = ""
    """Unit of both."""
    subject: str = ""
    """The stage, port or part it belongs to."""


@frozen
class Remedy(Record):
    """A change that was tried and clears the finding without raising a new one of its weight."""

    changes: tuple[Change, ...]
    """All of them together."""
    effects: tuple[Effect, ...]
    """Measured before and after."""
    verified_over: tuple[str, ...]
    """Names of the scenarios that it was tried over."""


@frozen
class Finding(Record):
    """One thing that a rule found."""

    rule: str
    """Id of the rule."""
    outcome: Outcome
    """violates: nominally; may-violate: only in some corner."""
    severity: Severity
    """must-fix, review or note."""
    subject: tuple[str, ...]
    """At most three parts (or ports, groups), the faulty one first."""
    message: str
    """What is wrong, in one sentence."""
    fingerprint: str
    """Identifies the finding across runs."""
    effect: str = ""
    """What one would see on the bench."""
    why: str = ""
    """Why the rule asks for it."""
    state: str | None = None
    """The board state in which it shows; null in the normal one."""
    scenario: str | None = None
    """The corner in which it is worst; null at nominal."""
    frequency_hz: float | None = None
    """Where it was measured; null where no frequency applies."""
    measured: Measured | None = None
    """The figure judged; null for a finding about structure."""
    limit: Bound | Window | None = None
    """What it was judged by; null for a finding about structure."""
    caused_by: str | None = None
    """Fingerprint of the finding that this one follows from."""
    location: Location | None = None
    """Where the first subject stands in the netlist."""
    remedy: Remedy | None = None
    """A verified change; null where none is proposed."""


@frozen
class Accepted(Record):
    """A finding that the team lives with, as the intent file says."""

    finding: Finding
    """The finding itself; it does not count towards the exit status."""
    reason: str
    """Why it is accepted."""
    by: str
    """Who accepted it."""
    until: str | None = None
    """Last day of the acceptance, YYYY-MM-DD; null without end."""


@frozen
class Unchecked(Record):
    """A rule that could not be judged, or a stage that could not be solved. Never counts as clean."""

    subject: str
    """The stage, port or part."""
    rule: str
    """Id of the rule; "" where nothing of the subject could be checked."""
    datum: str
    """What is missing."""
    supply: str
    """What to supply so that it can be checked."""
    location: Location | None = None
    """Where in the netlist that stands which is not understood; null where no line is to blame."""
    touches: tuple[str, ...] = ()
    """Stages that what is not understood may bear on."""
