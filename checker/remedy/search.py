"""A change that mends a finding, tried before it is proposed: many in one solve, the best over all conditions."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Iterator, Sequence

from checker.circuit.types import Change, Scenario
from checker.examine import Examined, examine
from checker.judge.verdict import AnyRule, Examination, Limits, Verdict
from checker.record.finding import Remedy
from checker.remedy.candidates import MOST, Trial, finer, size, trials, with_second
from checker.remedy.compare import cleared, hindrances, holds_in_corners, judged_at, lighter
from checker.remedy.effects import changes_of, effects_of
from checker.remedy.stack import all_over, laid_over
from checker.rulekit import Lever
from checker.shape import frozen

Rebuild = Callable[[Sequence[Scenario]], Examined]
"""A board of the same circuit over other scenarios; the first is always the nominal one."""

Corners = Callable[[tuple[Change, ...]], Sequence[Scenario]]
"""The corners that the board would have with these changes, which are not among theirs."""

_SECONDS = 4
"""Trials, from the smallest, that are tried again with a second part where each alone brings up a new fault."""
_VERIFIED = (6, 12)
"""Trials that are taken through all conditions: the smallest first; if none holds, some of the larger ones."""


@frozen
class _Case:
    """What stays the same throughout the search for one finding. `broad`: the rules that have an answer in every
    scenario; the others judge figures of the nominal alone, which cost solutions of their own."""

    verdict: Verdict
    board: Examined
    rules: tuple[AnyRule, ...]
    broad: tuple[AnyRule, ...]
    drawn: Examination
    limits: Limits
    rebuild: Rebuild
    corners: Corners


def propose(
    verdict: Verdict,
    board: Examined,
    rules: Iterable[AnyRule],
    limits: Limits,
    rebuild: Rebuild,
    corners: Corners = lambda _: (),
) -> Remedy | None:
    """The smallest change to standard values that clears the finding in every scenario of `board` and brings up no
    other of its weight or worse; None where no trial does.

    Fewer parts first, then the smaller sum of |ln(new/old)|. One stack of at most `candidates.MOST` trials is judged by
    the finding's own rule; those that clear it, and the values between, by all that have an answer in every scenario;
    the smallest of these over all scenarios of `board`; the chosen one by all rules, and in the corners that the
    changed board has itself. Where every trial brings up a fault that another part would mend, both are changed.
    """
    tried = trials(board.circuit, verdict.evidence.levers, in_step=verdict.evidence.in_step)
    if not tried:
        return None
    every = tuple(rules)
    drawn = examine(board, every, limits)
    at_nominal = {each.rule.id for each in drawn.judged if each.evidence.check.figure.nominal_only}
    case = _Case(
        verdict=verdict,
        board=board,
        rules=every,
        broad=tuple(rule for rule in every if rule.id not in at_nominal),
        drawn=drawn,
        limits=limits,
        rebuild=rebuild,
        corners=corners,
    )
    proofs = (_prove(case, chosen) for chosen in _rounds(_worth_proving(case, tried)))
    return next((proof for proof in proofs if proof is not None), None)


def _worth_proving(case: _Case, tried: Sequence[Trial]) -> list[Trial]:
    """Trials, and values between them, that hold where the finding is worst; the smallest change first."""
    clear = _clearing(case, tried)
    found = [trial for trial, ok in zip(tried, clear, strict=True) if ok]
    between = finer(case.board.circuit, tried, clear)
    if between:
        found += [trial for trial, ok in zip(between, _clearing(case, between), strict=True) if ok]
    found.sort(key=lambda trial: _rank(case, trial))
    holding, hindered = _parted(case, found) if found else ([], [])
    if not holding:
        seconds = [t for trial, in_way in hindered[:_SECONDS] for t in with_second(case.board.circuit, trial, in_way)]
        holding, _ = _parted(case, seconds[:MOST]) if seconds else ([], [])
    return sorted(holding, key=lambda trial: _rank(case, trial))


def _clearing(case: _Case, tried: Sequence[Trial]) -> list[bool]:
    """Which trials clear the finding in the scenario in which it is worst, by its own rule and stages alone."""
    stack, start = _stacked(case, tried)
    examination = examine(stack, (case.verdict.rule,), case.limits, frozenset(case.verdict.stages))
    good = cleared(examination, case.verdict, start - 1)
    return [bool(good[i]) and judged_at(examination, case.verdict, i) for i in range(start, len(good))]


def _parted(case: _Case, tried: Sequence[Trial]) -> tuple[list[Trial], list[tuple[Trial, tuple[Lever, ...]]]]:
    """Trials that bring up nothing as heavy there, and those that bring up a single one, with what mends that."""
    stack, start = _stacked(case, tried)
    examination = examine(stack, case.broad, case.limits)
    good = cleared(examination, case.verdict, start - 1)
    holding = [trial for trial, ok in zip(tried, good[start:], strict=True) if ok]
    new = [hindrances(examination, case.verdict, start - 1, start + number) for number in range(len(tried))]
    hindered = [(t, each[0].evidence.levers) for t, each in zip(tried, new, strict=True) if len(each) == 1]
    return holding, [(trial, turn) for trial, turn in hindered if turn]


def _stacked(case: _Case, tried: Sequence[Trial]) -> tuple[Examined, int]:
    """The nominal, the scenario in which the finding is worst, then that one with each trial; and where these start."""
    nominal, condition = case.board.scenarios[0], case.board.scenarios[case.verdict.worst]
    conditions = (nominal,) if case.verdict.worst == 0 else (nominal, condition)
    return case.rebuild((*conditions, *all_over(condition, tried))), len(conditions)


def _rank(case: _Case, trial: Trial) -> tuple[int, float, tuple[str, ...]]:
    return len(trial), size(trial, case.board.circuit), tuple(change.part for change in trial)


def _rounds(ranked: Sequence[Trial]) -> Iterator[Sequence[Trial]]:
    """The smallest changes, then a sample of the others in order."""
    few, more = _VERIFIED
    if ranked:
        yield ranked[:few]
    rest = ranked[few:]
    if rest:
        yield rest[:: -(-len(rest) // more)]


def _prove(case: _Case, chosen: Sequence[Trial]) -> Remedy | None:
    """The first of the trials that holds in all scenarios of the board, each compared with the same one unchanged, and
    brings up the fewest lighter findings."""
    drawn = case.board.scenarios
    changed = [laid_over(each, trial, each.name) for trial in chosen for each in drawn]
    stack = case.rebuild((*drawn, *changed))
    examination = examine(stack, case.broad, case.limits)
    starts = [len(drawn) * (number + 1) for number in range(len(chosen))]
    new = {start: lighter(examination, case.verdict, len(drawn), start) for start in starts}
    for _, start in sorted((count, start) for start, count in new.items() if count is not None):
        trial = chosen[start // len(drawn) - 1]
        final = _final(case, trial)
        if final is not None:
            return Remedy(
                changes=changes_of(trial, case.board.circuit),
                effects=effects_of(case.verdict, final, stack, start),
                verified_over=tuple(scenario.name for scenario in drawn),
            )
    return None


def _final(case: _Case, trial: Trial) -> Examined | None:
    """The nominal as drawn, with the change, and the corners of the changed board, where all rules hold; else None.

    Which end of a tolerance raises a current may turn with the change, so the corners of the drawing do not suffice.
    """
    nominal = case.board.scenarios[0]
    corners = [laid_over(each, trial, each.name, "corner") for each in case.corners(trial)]
    board = case.rebuild((nominal, laid_over(nominal, trial, "trial"), *corners))
    examination = examine(board, case.rules, case.limits)
    at_nominal = bool(cleared(examination, case.verdict, 0)[1]) and judged_at(examination, case.verdict, 1)
    holds = at_nominal and holds_in_corners(examination, case.verdict, case.drawn, 2)
    return board if holds else None
