"""All that a rule may import: what a rule is, what it may ask of a board, and the one place where outcomes
are decided.

A rule is a short class with data about itself and one pure method, `judge`, which returns evidence. It is
called once a subject of its kind; conditions of the board, corners and remedies are axis 0 of every figure
and no business of a rule.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import field, replace
from typing import ClassVar, Generic, Literal, Protocol, TypeVar

import numpy as np

from checker.arrays import BoolArray, FloatArray, IntArray
from checker.circuit.types import Port
from checker.intent.types import TargetIntent
from checker.quantity.figure import Figure
from checker.quantity.show import show
from checker.shape import frozen
from checker.stages.terminals import Terms
from checker.stages.types import Recognition, Stage
from checker.trouble import CannotTell
from checker.words import Configuration, Region, Relation, Role, Severity, Terminal

__all__ = [
    "LINEAR",
    "NOT_APPLICABLE",
    "Applies",
    "Board",
    "Bound",
    "CannotTell",
    "CapacitorUse",
    "Check",
    "Configuration",
    "Evidence",
    "Figure",
    "Lever",
    "Limit",
    "Port",
    "Relation",
    "Rule",
    "Stage",
    "TargetIntent",
    "ceiling",
    "levers",
    "magnitude",
    "require",
    "show",
    "where_code",
]

Kind = Literal["stage", "port", "capacitor", "target"]
Direction = Literal["up", "down", "any"]
LeverProperty = Literal["r_ohm", "c_f", "l_h"]
SubjectT = TypeVar("SubjectT")

LINEAR: tuple[Configuration, ...] = (
    "common-emitter",
    "common-base",
    "common-collector",
    "common-source",
    "common-gate",
    "common-drain",
    "phase-splitter",
    "current-source",
)
"""Labels of stages that are meant to rest in the active region."""

NOT_APPLICABLE = "not applicable"
"""A figure without any value whose reason starts so is clean, not unchecked."""

ROUNDING = 1e-9
"""A limit met to this fraction is met: nothing physical, only the last digits of a computed figure."""


class CapacitorUse(Protocol):
    """A capacitor with a job: `use` "coupling" or "bypass", `stage` the id of the stage it serves."""

    @property
    def part(self) -> str: ...
    @property
    def use(self) -> str: ...
    @property
    def stage(self) -> str: ...


class Board(Protocol):
    """What a rule may ask. `checker.board.Board` answers; tests use a stand-in with given figures."""

    @property
    def recognition(self) -> Recognition: ...
    @property
    def ports(self) -> tuple[Port, ...]: ...
    def ask(self, quantity: str, subject: str) -> Figure:
        """The figure, values (S, F). Raises `CannotTell` where a datum is missing."""
        ...

    def targets(self) -> tuple[TargetIntent, ...]: ...
    def capacitors(self) -> tuple[CapacitorUse, ...]: ...
    def bias_parts(self, stage: str) -> tuple[str, ...]: ...
    def slip(self, stage: str, /) -> tuple[str, str]: ...
    def capacitor_slip(self, part: str, /) -> str: ...
    def resistors_at(self, stage: str, terminal: Terminal) -> tuple[str, ...]: ...
    def terms(self, stage: str) -> Terms:
        """How the terminals and rest figures of a stage's device are called."""
        ...

    def region_code(self, region: Region) -> float:
        """The value of `region_code` that stands for a region."""
        ...

    def port(self, name: str) -> Port: ...
    def stage_at_port(self, name: str) -> Stage | None: ...


@frozen
class Limit:
    """A limit of a rule: `default`, `low`, `high` (the range an intent file may set) in `unit`; "%" is a
    fraction.
    """

    name: str
    default: float
    unit: str
    low: float
    high: float
    source: str


@frozen
class Applies:
    """Which subjects a rule is shown. Empty `configurations` or `roles`: all. A capacitor counts by its
    stage.
    """

    kind: Kind
    configurations: tuple[Configuration, ...] = ()
    roles: tuple[Role, ...] = ()


@frozen
class Lever:
    """A value that could be changed to mend the finding, and which way: the most promising first."""

    part: str
    property: LeverProperty
    direction: Direction = "any"


@frozen
class Bound:
    """Where a figure has to stay: `low`, `high` in `unit`, a number or float64 (S,); None where open."""

    unit: str
    source: str
    low: float | FloatArray | None = None
    high: float | FloatArray | None = None

    @classmethod
    def at(cls, value: float | FloatArray, unit: str, source: str) -> Bound:
        """Both ends at one value: serves as a least, a most or an equal."""
        return cls(low=value, high=value, unit=unit, source=source)

    @property
    def value(self) -> float:
        """The number of a bound with one, the same in all scenarios. Raises ValueError where there is
        none.
        """
        end = self.low if self.low is not None else self.high
        if end is None:
            raise ValueError("a bound without ends has no value")
        return float(np.ravel(end)[0])


@frozen
class Check:
    """The outcome over axis 0 = scenario: `failed`, `unknown` bool (S,); `worst` int64 (S,), the index into
    axis 1 of the figure where it is furthest outside or nearest to the bound; `applies` False where the
    figure has no meaning.
    """

    figure: Figure
    relation: Relation
    bound: Bound
    failed: BoolArray
    unknown: BoolArray
    worst: IntArray
    excess: FloatArray
    applies: bool = True


def require(figure: Figure, relation: Relation, bound: Bound) -> Check:
    """Whether `figure` keeps to `bound` in each scenario: the only place where outcomes are decided.

    A complex figure is judged by its magnitude. The worst frequency speaks for a scenario. `nan`, in the
    figure or the bound, never accuses: where nothing else fails the scenario is unknown. `excess` (S,) is
    the distance outside.
    """
    raw = figure.values
    values = np.abs(raw) if np.iscomplexobj(raw) else np.asarray(raw, dtype=np.float64)
    excess = _excess(values, relation, bound)
    with np.errstate(invalid="ignore"):
        failed = np.any(excess > 0.0, axis=1)
    worst = np.argmax(np.where(np.isnan(excess), -np.inf, excess), axis=1)
    missing = np.isnan(excess)
    return Check(
        figure=figure,
        relation=relation,
        bound=bound,
        failed=failed,
        unknown=np.any(missing, axis=1) & ~failed,
        worst=worst.astype(np.int64),
        excess=excess[np.arange(len(worst)), worst],
        applies=not (bool(np.all(missing)) and figure.reason.startswith(NOT_APPLICABLE)),
    )


def _excess(values: FloatArray, relation: Relation, bound: Bound) -> FloatArray:
    """(S, F): how far outside the bound, negative inside; a hair of rounding is given to the figure."""
    if relation == "equals":
        low = _column(bound.low)
        return np.abs(values - low) - ROUNDING * np.maximum(np.abs(low), 1.0)
    under = _column(bound.low) - values - ROUNDING * np.abs(_column(bound.low))
    over = values - _column(bound.high) - ROUNDING * np.abs(_column(bound.high))
    if relation == "at least":
        return under
    if relation == "at most":
        return over
    return np.maximum(under, over)


def _column(end: float | FloatArray | None) -> FloatArray:
    """A bound's end as (S, 1) or (1, 1); open is nan, so that a rule that forgot it is told, not believed."""
    return np.reshape(np.asarray(np.nan if end is None else end, dtype=np.float64), (-1, 1))


@frozen
class Evidence:
    """What a rule found about one subject, whether or not it is a fault.

    `subject`: at most three parts, the faulty one first. `message` may hold {value}, {limit}, {frequency} and the names
    in `figures`; they are filled in from the worst scenario. `effect`: what one sees on the bench, where the rule's own
    sentence is too general. `in_step`: the levers are of use only by one factor, as the arms of a divider. `goal`: what
    a remedy has to reach besides, where to clear the limit by a hair would mend nothing; it never accuses.
    """

    check: Check
    subject: tuple[str, ...]
    message: str
    effect: str = ""
    levers: tuple[Lever, ...] = ()
    in_step: bool = False
    goal: Check | None = None
    figures: Mapping[str, Figure] = field(default_factory=dict)


class Rule(Generic[SubjectT]):
    """Base of all rules. The class attributes are data; the docstring says what fails in hardware and what
    it cannot see.

    `bench`: what one would see on the bench. `source`: of the formula. `weight`: the severity of a nominal
    violation. `always`: must hold in whatever condition the board is (stress), not only while it does its
    work. `aliases`: ids it had before.
    """

    id: ClassVar[str]
    summary: ClassVar[str]
    theme: ClassVar[str]
    weight: ClassVar[Severity]
    bench: ClassVar[str]
    source: ClassVar[str]
    applies: ClassVar[Applies]
    limits: ClassVar[tuple[Limit, ...]] = ()
    always: ClassVar[bool] = False
    aliases: ClassVar[tuple[str, ...]] = ()

    def judge(self, board: Board, subject: SubjectT, limits: Mapping[str, Bound]) -> Iterable[Evidence]:
        """Evidence about one subject; none where the rule has nothing to judge. Raises `CannotTell`."""
        raise NotImplementedError


def levers(parts: Iterable[str], direction: Direction = "any") -> tuple[Lever, ...]:
    """Resistors as levers, in the given order."""
    return tuple(Lever(part=part, property="r_ohm", direction=direction) for part in parts)


def where_code(figure: Figure, codes: Figure, wanted: tuple[float, ...], otherwise: float) -> Figure:
    """`figure` in the scenarios in which the coded figure has one of the `wanted` codes, `otherwise` (which should
    pass) in the others, nan where the code is unknown; both (S, 1)."""
    coded = np.asarray(codes.values, dtype=np.float64)
    values = np.where(np.isin(coded, wanted), figure.values, otherwise)
    return replace(figure, values=np.where(np.isnan(coded), np.nan, values))


def magnitude(figure: Figure) -> Figure:
    """Without its sign or phase."""
    return replace(figure, values=np.abs(figure.values))


def ceiling(whole: Figure, *, share: float = 1.0, less: float = 0.0) -> Bound:
    """A most of `share` times `whole` minus `less`, scenario by scenario, e.g. 80 % of a rating. `whole`
    (S, 1).
    """
    values = np.asarray(whole.values, dtype=np.float64)[:, 0] * share - less
    return Bound(high=values, unit=whole.unit, source=whole.working.source)
