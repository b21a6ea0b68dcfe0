"""Trials as scenarios: a change laid over the condition of the board in which it has to work."""

from __future__ import annotations

from collections.abc import Iterable
from typing import Literal

from checker.circuit.types import Change, Scenario
from checker.remedy.candidates import Trial

Kind = Literal["candidate", "corner"]
"""What the board is told of a trial: of a "candidate" it answers also what costs solutions of its own a stage."""


def laid_over(condition: Scenario, trial: Trial, name: str, kind: Kind = "candidate") -> Scenario:
    """`condition` with the trial's parts fitted: a tolerance of the condition applies to the new value as well."""
    changed = {change.part for change in trial}
    factor = {c.part: c.value for c in condition.changes if c.part in changed and c.property == "factor"}
    fitted = tuple(_scaled(change, factor.get(change.part, 1.0)) for change in trial)
    kept = tuple(change for change in condition.changes if change.part not in changed)
    return Scenario(name=name, kind=kind, changes=(*kept, *fitted), temperature_k=condition.temperature_k)


def all_over(condition: Scenario, trials: Iterable[Trial]) -> tuple[Scenario, ...]:
    """One scenario a trial, in their order."""
    return tuple(laid_over(condition, trial, f"trial {number}") for number, trial in enumerate(trials))


def _scaled(change: Change, factor: float) -> Change:
    return Change(part=change.part, property=change.property, value=change.value * factor)
