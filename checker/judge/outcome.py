"""From a check over scenarios to an outcome with its weight."""

from __future__ import annotations

from typing import NamedTuple

import numpy as np

from checker.circuit.types import Scenario
from checker.rulekit import Check
from checker.words import Outcome, Severity

SAMPLES_ALLOWED = 1e-3
"""Share of the samples of a spread that may fail without a word."""


class Decided(NamedTuple):
    """`worst`: the scenario that the outcome rests on."""

    outcome: Outcome
    worst: int


def decide(check: Check, scenarios: tuple[Scenario, ...], *, always: bool) -> Decided | None:
    """The outcome, None where the check is kept. The nominal speaks first, then the states (only of a rule
    that holds `always`), then the corners, then the samples; remedy candidates say nothing here.
    """
    if not check.applies:
        return None
    if check.failed[0]:
        return Decided("violates", 0)
    if always and (state := _worst(check, scenarios, "state")) is not None:
        return Decided("violates", state)
    if (corner := _worst(check, scenarios, "corner")) is not None:
        return Decided("may-violate", corner)
    samples = [index for index, each in enumerate(scenarios) if each.kind == "sample"]
    if samples and np.mean(check.failed[samples]) > SAMPLES_ALLOWED:
        return Decided("may-violate", _worst(check, scenarios, "sample") or 0)
    return None


def severity(outcome: Outcome, weight: Severity) -> Severity:
    """What only may happen is worth a review at most."""
    return "review" if outcome == "may-violate" and weight == "must-fix" else weight


def unknown_in(check: Check, scenarios: tuple[Scenario, ...], *, always: bool) -> tuple[str, ...]:
    """Names of the scenarios of the board itself in which the check is unknown; only the nominal one where
    that is, or where the figure is of the nominal alone.
    """
    if not check.applies:
        return ()
    if check.figure.nominal_only:
        return (scenarios[0].name,) if check.unknown[0] else ()
    kinds = {"nominal", "corner", "state"} if always else {"nominal", "corner"}
    names = tuple(s.name for s, nan in zip(scenarios, check.unknown, strict=True) if nan and s.kind in kinds)
    return names[:1] if check.unknown[0] else names


def _worst(check: Check, scenarios: tuple[Scenario, ...], kind: str) -> int | None:
    failing = [i for i, each in enumerate(scenarios) if each.kind == kind and check.failed[i]]
    return max(failing, key=lambda index: float(check.excess[index]), default=None)
