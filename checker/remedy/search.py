"""A change that mends a finding, tried before it is proposed: many in one solve, the best over all conditions."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Iterator, Sequence
from dataclasses import dataclass

from checker.circuit.types import Scenario
from checker.examine import Examined, examine
from checker.judge.verdict import AnyRule, Limits, Verdict
from checker.record.finding import Remedy
from checker.remedy.candidates import Trial, finer, size, trials
from checker.remedy.compare import cleared, judged_at, lighter
from checker.remedy.effects import changes_of, effects_of
from checker.remedy.stack import Kind, all_over, laid_over

Rebuild = Callable[[Sequence[Scenario]], Examined]
"""A board of the same circuit over other scenarios; the first is always the nominal one."""

_VERIFIED = (6, 12)
"""Trials that are taken through all conditions: the smallest first; if none holds, some of the larger ones."""


@dataclass(frozen=True, slots=True, kw_only=True)
class _Case:
    """What stays the same throughout the search for one finding."""

    verdict: Verdict
    board: Examined
    rules: tuple[AnyRule, ...]
    limits: Limits
    rebuild: Rebuild


def propose(
    verdict: Verdict, board: Examined, rules: Iterable[AnyRule], limits: Limits, rebuild: Rebuild
) -> Remedy | None:
    """The smallest change to standard values that clears the finding in every scenario of `board` and brings up no
    other of its weight or worse; None where no trial does.

    Fewer parts first, then the smaller sum of |ln(new/old)|. One stack of at most `candidates.MOST` trials is judged by
    the finding's own rule; those that clear it, and the values between, by all rules; the smallest of these over all
    scenarios of `board`; the chosen one once more for the figures that are given at nominal alone.
    """
    case = _Case(verdict=verdict, board=board, rules=tuple(rules), limits=limits, rebuild=rebuild)
    tried = trials(board.circuit, verdict.evidence.levers, in_step=verdict.evidence.in_step)
    ranked = _worth_proving(case, tried) if tried else []
    for chosen in _rounds(ranked):
        proved = _prove(case, chosen)
        if proved is not None:
            return proved
    return None


def _worth_proving(case: _Case, tried: Sequence[Trial]) -> list[Trial]:
    """Trials, and values between them, that hold where the finding is worst; the smallest change first."""
    clear = _clearing(case, tried, own=True)
    again = [trial for trial, ok in zip(tried, clear, strict=True) if ok]
    again += finer(case.board.circuit, tried, clear)
    clean = _clearing(case, again, own=False) if again else []
    holding = (trial for trial, ok in zip(again, clean, strict=True) if ok)
    return sorted(holding, key=lambda trial: _rank(case, trial))


def _clearing(case: _Case, tried: Sequence[Trial], *, own: bool) -> list[bool]:
    """Which trials clear the finding in the scenario in which it is worst; by its `own` rule and stages, or by all
    rules, of which none as heavy may be new."""
    nominal, condition = case.board.scenarios[0], case.board.scenarios[case.verdict.worst]
    conditions = (nominal,) if case.verdict.worst == 0 else (nominal, condition)
    kind: Kind = "candidate" if own else "sample"
    stack = case.rebuild((*conditions, *all_over(condition, tried, kind)))
    rules = (case.verdict.rule,) if own else case.rules
    about = frozenset(case.verdict.stages) if own else frozenset()
    examination = examine(stack, rules, case.limits, about)
    good = cleared(examination, case.verdict, len(conditions) - 1)
    places = range(len(conditions), len(good))
    return [bool(good[i]) and (not own or judged_at(examination, case.verdict, i)) for i in places]


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
    changed = [laid_over(each, trial, each.name, "sample") for trial in chosen for each in drawn]
    stack = case.rebuild((*drawn, *changed))
    examination = examine(stack, case.rules, case.limits)
    starts = [len(drawn) * (number + 1) for number in range(len(chosen))]
    new = {start: lighter(examination, case.verdict, len(drawn), start) for start in starts}
    holding = sorted((count, start) for start, count in new.items() if count is not None)
    for _, start in holding:
        trial = chosen[start // len(drawn) - 1]
        nominal = _at_nominal(case, trial)
        if nominal is not None:
            return Remedy(
                changes=changes_of(trial, case.board.circuit),
                effects=effects_of(case.verdict, nominal, stack, start),
                verified_over=tuple(scenario.name for scenario in drawn),
            )
    return None


def _at_nominal(case: _Case, trial: Trial) -> Examined | None:
    """The nominal as drawn and with the change, where all rules hold, those figures included that the board answers for
    a candidate alone; else None."""
    nominal = case.board.scenarios[0]
    board = case.rebuild((nominal, laid_over(nominal, trial, "trial", "candidate")))
    examination = examine(board, case.rules, case.limits)
    holds = bool(cleared(examination, case.verdict, 0)[1]) and judged_at(examination, case.verdict, 1)
    return board if holds else None
