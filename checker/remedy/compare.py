"""A board with a change against the same one without: is the finding gone, and what is new?"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from checker.arrays import BoolArray
from checker.circuit.types import Scenario
from checker.judge.outcome import severity
from checker.judge.verdict import Examination, Judged, Verdict
from checker.words import SEVERITIES, Severity


def cleared(examination: Examination, verdict: Verdict, base: int) -> BoolArray:
    """bool (S,): scenarios without the finding, its goal met, and with nothing as heavy that scenario `base` has not.

    Where the finding's own rule was not asked, it is not in the way.
    """
    good = np.full(len(examination.scenarios), not examination.failures)
    for each in _applying(examination):
        if is_finding(each, verdict):
            good &= ~_bad(each) & _goal_met(each)
        elif _as_heavy(each.rule.weight, verdict):
            good &= _bad(each)[base] | ~_bad(each)
    return good


def hindrances(examination: Examination, verdict: Verdict, base: int, scenario: int) -> list[Judged]:
    """What is as heavy as the finding and new in a scenario against `base`."""
    return [
        each
        for each in _applying(examination)
        if not is_finding(each, verdict)
        and _as_heavy(each.rule.weight, verdict)
        and _bad(each)[scenario]
        and not _bad(each)[base]
    ]


def lighter(examination: Examination, verdict: Verdict, count: int, start: int) -> int | None:
    """How many findings lighter than this one are new in the `count` scenarios from `start`, against the first `count`;
    None where the finding is still there or one of its weight is new."""
    scenarios, number = examination.scenarios[:count], 0
    for each in _applying(examination):
        asked = np.array([each.rule.always or scenario.kind != "state" for scenario in scenarios])
        before, after = _bad(each)[:count], _bad(each)[start : start + count] & asked
        new = after if is_finding(each, verdict) else after & ~before
        if np.any(new):
            number += 1
            if is_finding(each, verdict) or _as_heavy(_weight_of(new, each, scenarios), verdict):
                return None
    return None if examination.failures else number


def holds_in_corners(examination: Examination, verdict: Verdict, drawn: Examination, start: int) -> bool:
    """Whether the scenarios from `start`, corners of the changed board, are free of the finding and of anything as
    heavy that the `drawn` board has in no scenario."""
    before = {_key(each) for each in drawn.judged if np.any(_bad(each))}
    for each in _applying(examination):
        if not np.any(_bad(each)[start:]):
            continue
        heavy = _as_heavy(severity("may-violate", each.rule.weight), verdict)
        if is_finding(each, verdict) or (heavy and _key(each) not in before):
            return False
    return not examination.failures


def is_finding(judged: Judged, verdict: Verdict) -> bool:
    """Whether it is the finding's own evidence, on whichever board of the same circuit."""
    return _key(judged) == _key(verdict)


def judged_at(examination: Examination, verdict: Verdict, scenario: int) -> bool:
    """Whether the finding's own figure is there and has a value in that scenario."""
    own = [each for each in examination.judged if is_finding(each, verdict)]
    return bool(own) and not any(each.evidence.check.unknown[scenario] for each in own)


def _applying(examination: Examination) -> list[Judged]:
    return [each for each in examination.judged if each.evidence.check.applies]


def _key(owner: Verdict | Judged) -> tuple[str, ...]:
    figure = owner.evidence.check.figure
    return (owner.rule.id, figure.quantity, figure.subject, *owner.evidence.subject[:1])


def _bad(judged: Judged) -> BoolArray:
    """bool (S,): failed, or no longer known; a figure of the nominal alone is not asked elsewhere."""
    check = judged.evidence.check
    return check.failed if check.figure.nominal_only else check.failed | check.unknown


def _goal_met(judged: Judged) -> BoolArray:
    goal = judged.evidence.goal
    return ~_bad(judged) if goal is None else ~(goal.failed | goal.unknown)


def _weight_of(new: BoolArray, judged: Judged, scenarios: Sequence[Scenario]) -> Severity:
    """A fault of corners alone is only a possible one."""
    certain = any(bad and scenario.kind in ("nominal", "state") for bad, scenario in zip(new, scenarios, strict=True))
    return severity("violates" if certain else "may-violate", judged.rule.weight)


def _as_heavy(weight: Severity, verdict: Verdict) -> bool:
    return SEVERITIES.index(weight) <= SEVERITIES.index(verdict.severity)
