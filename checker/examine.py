"""Circuit, scenarios and rules to verdicts: one pass, no knowledge of remedies."""

from __future__ import annotations

from collections.abc import Iterable
from typing import Protocol

from checker.circuit.types import Circuit, Port, Scenario
from checker.judge.guard import guarded
from checker.judge.outcome import decide, severity, unknown_in
from checker.judge.subjects import Subject, subjects
from checker.judge.verdict import AnyRule, Examination, Failure, Judged, Limits, Open, Verdict
from checker.rulekit import Board

NO_SINGLE_DATUM = "no single datum: see the reason"


class Examined(Board, Protocol):
    """A board that also says what its axis 0 is; rules do not see this."""

    @property
    def circuit(self) -> Circuit: ...
    @property
    def ports(self) -> tuple[Port, ...]: ...
    @property
    def scenarios(self) -> tuple[Scenario, ...]: ...


def examine(
    board: Examined, rules: Iterable[AnyRule], limits: Limits, about: frozenset[str] = frozenset()
) -> Examination:
    """Show every rule its subjects and decide what comes back, in the order of rules and subjects.

    `about`: only subjects that concern one of these stages; empty for all.
    """
    judged: list[Judged] = []
    unchecked: list[Open] = []
    failures: list[Failure] = []
    ports = tuple(port.name for port in board.ports)
    for rule in rules:
        for subject in subjects(board, ports, rule.applies):
            if about and not about & set(subject.stages):
                continue
            answer = _ask(rule, board, subject, limits)
            if isinstance(answer, Open):
                unchecked.append(answer)
            elif isinstance(answer, Failure):
                failures.append(answer)
            else:
                judged += answer
    verdicts = [verdict for each in judged if (verdict := _verdict(each, board.scenarios)) is not None]
    unchecked += [gap for each in judged if (gap := _gap(each, board.scenarios)) is not None]
    return Examination(
        scenarios=board.scenarios,
        judged=tuple(judged),
        verdicts=tuple(verdicts),
        unchecked=tuple(unchecked),
        failures=tuple(failures),
    )


def _ask(rule: AnyRule, board: Examined, subject: Subject, limits: Limits) -> list[Judged] | Open | Failure:
    answer = guarded(rule.id, subject.name, lambda: tuple(rule.judge(board, subject.item, limits[rule.id])))
    if isinstance(answer, Open | Failure):
        return answer
    return [Judged(rule=rule, evidence=evidence, stages=subject.stages) for evidence in answer]


def _verdict(judged: Judged, scenarios: tuple[Scenario, ...]) -> Verdict | None:
    rule, check = judged.rule, judged.evidence.check
    decided = decide(check, scenarios, always=rule.always)
    if decided is None:
        return None
    scenario = scenarios[decided.worst]
    return Verdict(
        rule=rule,
        evidence=judged.evidence,
        outcome=decided.outcome,
        severity=severity(decided.outcome, rule.weight),
        worst=decided.worst,
        name=scenario.name if scenario.kind in ("corner", "sample") else None,
        state=scenario.name if scenario.kind == "state" else None,
        stages=judged.stages,
        failed=check.failed,
    )


def _gap(judged: Judged, scenarios: tuple[Scenario, ...]) -> Open | None:
    """What a `nan` left open; none where the rule has a finding on the same evidence all the same."""
    check, rule = judged.evidence.check, judged.rule
    names = unknown_in(check, scenarios, always=rule.always)
    if not names or decide(check, scenarios, always=rule.always) is not None:
        return None
    reason = check.figure.reason or f"{check.figure.quantity} has no value"
    where = "" if check.unknown[0] else f" in {', '.join(names[:3])}{' and others' if len(names) > 3 else ''}"
    return Open(subject=judged.evidence.subject[0], rule=rule.id, datum=reason + where, supply=NO_SINGLE_DATUM)
