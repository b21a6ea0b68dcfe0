"""What examination hands on: verdicts, what could not be judged, and rules that broke down."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from checker.arrays import BoolArray
from checker.circuit.types import Scenario
from checker.rulekit import Bound, Evidence, Rule
from checker.shape import frozen
from checker.words import Outcome, Severity

AnyRule = Rule[Any]
Limits = Mapping[str, Mapping[str, Bound]]
"""Rule id -> limit name -> the bound in force."""


@frozen
class Verdict:
    """One fault: `failed` bool (S,) over the board's scenarios; `worst` the scenario that the outcome rests
    on.

    `name`: its name where that is a corner, `state` where it is a state, else None. `stages`: ids of the
    stages that it is about, for root causes.
    """

    rule: AnyRule
    evidence: Evidence
    outcome: Outcome
    severity: Severity
    worst: int
    name: str | None
    state: str | None
    stages: tuple[str, ...]
    failed: BoolArray


@frozen
class Open:
    """A rule that could not be judged on one subject: what is missing, and what to supply."""

    subject: str
    rule: str
    datum: str
    supply: str


@frozen
class Failure:
    """A rule that broke down: a fault of the program, never of the board."""

    rule: str
    subject: str
    what: str

    def __str__(self) -> str:
        return f"rule {self.rule} failed on {self.subject}: {self.what}"


@frozen
class Judged:
    """One piece of evidence with its rule, whether a fault or not: what a remedy compares against."""

    rule: AnyRule
    evidence: Evidence
    stages: tuple[str, ...]


@frozen
class Examination:
    """Everything that the rules had to say of one board over its scenarios."""

    scenarios: tuple[Scenario, ...]
    judged: tuple[Judged, ...]
    verdicts: tuple[Verdict, ...]
    unchecked: tuple[Open, ...]
    failures: tuple[Failure, ...]
