"""A change that mends a finding, tried before it is proposed: candidates in one solve, the best over all
conditions.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable, Sequence

import numpy as np
from numpy.typing import NDArray

from checker.circuit.types import Scenario
from checker.examine import Examined, examine
from checker.judge.outcome import severity
from checker.judge.verdict import AnyRule, Examination, Judged, Limits, Verdict
from checker.record.finding import Remedy
from checker.remedy.candidates import Trial, finer, size, trials
from checker.remedy.effects import changes_of, effects_of
from checker.remedy.stack import all_over, laid_over
from checker.words import SEVERITIES, Severity

Rebuild = Callable[[Sequence[Scenario]], Examined]
"""A board of the same circuit over other scenarios; the first is always the nominal one."""

_VERIFIED = (6, 12)
"""Trials that are taken through all conditions: the smallest first; if none holds, some of the larger
ones.
"""


def propose(
    verdict: Verdict, board: Examined, rules: Iterable[AnyRule], limits: Limits, rebuild: Rebuild
) -> Remedy | None:
    """The smallest change to standard values that clears the finding in every scenario of `board` and brings up no
    other of its weight or worse; None where no trial does.

    Fewer parts first, then the smaller sum of |ln(new/old)|. One stack of at most `candidates.MOST` trials judged by
    the finding's own rule, one of those that cleared it and of the values between, judged by all rules, then at most
    two of the survivors over all scenarios of `board`.
    """
    every = tuple(rules)
    tried = trials(board.circuit, verdict.evidence.levers)
    cleared = _clearing(tried, verdict, board, (verdict.rule,), limits, rebuild)
    again = [trial for trial, ok in zip(tried, cleared, strict=True) if ok]
    again += finer(board.circuit, tried, cleared)
    clean = _clearing(again, verdict, board, every, limits, rebuild)
    ranked = sorted((t for t, ok in zip(again, clean, strict=True) if ok), key=lambda t: _rank(t, board))
    for chosen in _rounds(ranked):
        proved = _verify(chosen, verdict, board, every, limits, rebuild)
        if proved is not None:
            return proved
    return None


def _clearing(
    tried: Sequence[Trial],
    verdict: Verdict,
    board: Examined,
    rules: Sequence[AnyRule],
    limits: Limits,
    rebuild: Rebuild,
) -> list[bool]:
    """Which trials clear the finding, in the scenario in which it is worst, without a new one as heavy of `rules`."""
    if not tried:
        return []
    nominal, condition = board.scenarios[0], board.scenarios[verdict.worst]
    conditions = (nominal,) if verdict.worst == 0 else (nominal, condition)
    stack = rebuild((*conditions, *all_over(condition, tried)))
    good = _cleared(examine(stack, rules, limits), verdict, len(conditions) - 1)
    return [bool(ok) for ok in good[len(conditions) :]]


def _rank(trial: Trial, board: Examined) -> tuple[int, float, tuple[str, ...]]:
    return len(trial), size(trial, board.circuit), tuple(change.part for change in trial)


def _rounds(ranked: Sequence[Trial]) -> Iterable[Sequence[Trial]]:
    """The smallest changes, then a sample of the others in order."""
    few, more = _VERIFIED
    yield from (ranked[:few],) if ranked else ()
    rest = ranked[few:]
    yield from (rest[:: -(-len(rest) // more)],) if rest else ()


def _verify(
    chosen: Sequence[Trial],
    verdict: Verdict,
    board: Examined,
    rules: Sequence[AnyRule],
    limits: Limits,
    rebuild: Rebuild,
) -> Remedy | None:
    """The first of the trials that holds in all scenarios of the board, each compared with the same one
    unchanged.
    """
    as_drawn = board.scenarios
    changed = [laid_over(each, trial, each.name) for trial in chosen for each in as_drawn]
    second = rebuild((*as_drawn, *changed))
    examination = examine(second, rules, limits)
    count = len(as_drawn)
    lighter = [_lighter(examination, verdict, count, count * (n + 1)) for n in range(len(chosen))]
    holding = [number for number, new in enumerate(lighter) if new is not None]
    if not holding:
        return None
    best = min(holding, key=lambda number: (lighter[number], number))
    return Remedy(
        changes=changes_of(chosen[best], board.circuit),
        effects=effects_of(second, verdict, count * (best + 1)),
        verified_over=tuple(scenario.name for scenario in as_drawn),
    )


def _key(owner: Verdict | Judged) -> tuple[str, ...]:
    """What makes a piece of evidence the same one on another board of the same circuit."""
    figure = owner.evidence.check.figure
    return (owner.rule.id, figure.quantity, figure.subject, *owner.evidence.subject[:1])


def _bad(judged: Judged) -> NDArray[np.bool_]:
    """bool (S,): failed, or no longer known."""
    return judged.evidence.check.failed | judged.evidence.check.unknown


def _cleared(examination: Examination, verdict: Verdict, base: int) -> NDArray[np.bool_]:
    """bool (S,): scenarios without the finding and with nothing as heavy that scenario `base` has not."""
    same = [each for each in examination.judged if _key(each) == _key(verdict)]
    good = np.full(len(examination.scenarios), bool(same) and not examination.failures)
    for each in examination.judged:
        bad = _bad(each)
        if each in same:
            good &= ~bad
        elif each.evidence.check.applies and _as_heavy(each.rule.weight, verdict):
            good &= bad[base] | ~bad
    return good


def _lighter(examination: Examination, verdict: Verdict, count: int, start: int) -> int | None:
    """New findings lighter than this one in the `count` scenarios from `start`, against the first `count`;
    None where the finding is still there or one of its weight is new.
    """
    if examination.failures:
        return None
    scenarios, new_ones, found = examination.scenarios[:count], 0, False
    for each in examination.judged:
        if not each.evidence.check.applies:
            continue
        asked = np.array([each.rule.always or scenario.kind != "state" for scenario in scenarios])
        before, after = _bad(each)[:count], _bad(each)[start : start + count] & asked
        if _key(each) == _key(verdict):
            found = True
            if np.any(after):
                return None
        elif np.any(new := after & ~before):
            new_ones += 1
            if _as_heavy(_weight_of(new, each, scenarios), verdict):
                return None
    return new_ones if found else None


def _weight_of(new: NDArray[np.bool_], judged: Judged, scenarios: Sequence[Scenario]) -> Severity:
    """A fault of corners alone is only a possible one."""
    certain = any(bad and scenario.kind in ("nominal", "state") for bad, scenario in zip(new, scenarios, strict=True))
    return severity("violates" if certain else "may-violate", judged.rule.weight)


def _as_heavy(weight: Severity, verdict: Verdict) -> bool:
    return SEVERITIES.index(weight) <= SEVERITIES.index(verdict.severity)
