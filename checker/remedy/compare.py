"""A board with a change against the same one without: is the finding gone, and what is new?"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from checker.circuit.types import Scenario
from checker.judge.outcome import severity
from checker.judge.verdict import Examination, Judged, Verdict
from checker.words import SEVERITIES, Severity

Bools = NDArray[np.bool_]


def cleared(examination: Examination, verdict: Verdict, base: int) -> Bools:
    """bool (S,): scenarios without the finding and with nothing as heavy that scenario `base` has not."""
    good = np.full(len(examination.scenarios), not examination.failures)
    found = False
    for each in examination.judged:
        if is_finding(each, verdict):
            found = True
            good &= ~_bad(each) & _goal_met(each)
        elif each.evidence.check.applies and _as_heavy(each.rule.weight, verdict):
            good &= _bad(each)[base] | ~_bad(each)
    return good & found


def lighter(examination: Examination, verdict: Verdict, count: int, start: int) -> int | None:
    """How many findings lighter than this one are new in the `count` scenarios from `start`, against the first `count`;
    None where the finding is still there or one of its weight is new."""
    if examination.failures:
        return None
    scenarios, number, found = examination.scenarios[:count], 0, False
    for each in (each for each in examination.judged if each.evidence.check.applies):
        asked = np.array([each.rule.always or scenario.kind != "state" for scenario in scenarios])
        before, after = _bad(each)[:count], _bad(each)[start : start + count] & asked
        if is_finding(each, verdict):
            found = True
            if np.any(after):
                return None
        elif np.any(new := after & ~before):
            number += 1
            if _as_heavy(_weight_of(new, each, scenarios), verdict):
                return None
    return number if found else None


def is_finding(judged: Judged, verdict: Verdict) -> bool:
    """Whether it is the finding's own evidence, on whichever board of the same circuit."""
    return _key(judged) == _key(verdict)


def judged_at(examination: Examination, verdict: Verdict, scenario: int) -> bool:
    """Whether the finding's own figure has a value there."""
    own = (each for each in examination.judged if is_finding(each, verdict))
    return all(not each.evidence.check.unknown[scenario] for each in own)


def _key(owner: Verdict | Judged) -> tuple[str, ...]:
    figure = owner.evidence.check.figure
    return (owner.rule.id, figure.quantity, figure.subject, *owner.evidence.subject[:1])


def _bad(judged: Judged) -> Bools:
    """bool (S,): failed, or no longer known; a figure of the nominal alone is not asked elsewhere."""
    check = judged.evidence.check
    return check.failed if check.figure.nominal_only else check.failed | check.unknown


def _goal_met(judged: Judged) -> Bools:
    goal = judged.evidence.goal
    return ~_bad(judged) if goal is None else ~(goal.failed | goal.unknown)


def _weight_of(new: Bools, judged: Judged, scenarios: Sequence[Scenario]) -> Severity:
    """A fault of corners alone is only a possible one."""
    certain = any(bad and scenario.kind in ("nominal", "state") for bad, scenario in zip(new, scenarios, strict=True))
    return severity("violates" if certain else "may-violate", judged.rule.weight)


def _as_heavy(weight: Severity, verdict: Verdict) -> bool:
    return SEVERITIES.index(weight) <= SEVERITIES.index(verdict.severity)
