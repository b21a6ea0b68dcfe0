"""Every rule brings circuits that break it, keep it and stand at its limit; a rule without them is refused.

`expect.toml` beside them says the first subject, the limit, and for each circuit the outcome and the value measured at
nominal (pinned: our own output, which a better card may move by a few per cent).
"""

from __future__ import annotations

import tomllib
from functools import cache
from pathlib import Path
from typing import Any

import pytest

import rules
from checker.examine import examine
from checker.judge.discover import load_rules
from checker.judge.limits import resolve_limits
from checker.judge.message import end_at, value_at
from checker.judge.verdict import Examination, Judged
from checker.pipeline import ready

CIRCUITS = Path(rules.__file__).parent / "circuits"
KINDS = ("fails", "keeps", "boundary")
IDS = [rule.id for rule in load_rules().rules if type(rule).__module__.startswith("rules.")]
PINNED = 0.03


def expected(rule: str) -> dict[str, Any]:
    """The table beside a rule's circuits."""
    return tomllib.loads((CIRCUITS / rule / "expect.toml").read_text("utf-8"))


def board_of(rule: str, kind: str) -> Path:
    """A circuit in SPICE text, or as an export where pads and packages matter."""
    found = [CIRCUITS / rule / f"{kind}.{form}" for form in ("cir", "net")]
    (path,) = (each for each in found if each.exists())
    return path


@cache
def examined(rule: str, kind: str) -> Examination:
    """One of the rule's circuits, judged by all rules."""
    setup = ready(board_of(rule, kind), None)
    every = load_rules().rules
    return examine(setup.board(setup.scenarios), every, resolve_limits(every, setup.intent))


def evidence(rule: str, kind: str) -> list[Judged]:
    """The rule's own evidence about the expected subject."""
    table = expected(rule)
    first = table[kind].get("subject", table["subject"])
    return [each for each in examined(rule, kind).judged if each.rule.id == rule and each.evidence.subject[0] == first]


def test_every_rule_has_its_circuits_and_no_others_lie_there() -> None:
    assert sorted(path.name for path in CIRCUITS.iterdir()) == sorted(IDS)
    for rule in IDS:
        names = {"expect.toml", "intent.toml", *(board_of(rule, kind).name for kind in KINDS)}
        assert {path.name for path in (CIRCUITS / rule).iterdir()} == names


@pytest.mark.parametrize("rule", IDS)
@pytest.mark.parametrize("kind", KINDS)
def test_outcome(rule: str, kind: str) -> None:
    examination = examined(rule, kind)
    wanted = expected(rule)[kind]["outcome"]
    found = {verdict.outcome for verdict in examination.verdicts if verdict.rule.id == rule}
    open_ = {each.subject for each in examination.unchecked if each.rule == rule}
    assert found == ({wanted} if wanted in ("violates", "may-violate") else set())
    assert bool(open_) == (wanted == "cannot-tell")
    assert not examination.failures


@pytest.mark.parametrize("rule", IDS)
@pytest.mark.parametrize("kind", KINDS)
def test_subject_value_and_limit(rule: str, kind: str) -> None:
    table = expected(rule)
    for each in evidence(rule, kind):
        check = each.evidence.check
        assert end_at(check.bound.high if check.relation == "at most" else check.bound.low, 0) == pytest.approx(
            table["limit"], rel=1e-9, abs=1e-12
        )
        if "measured" in table[kind]:
            assert value_at(check, 0) == pytest.approx(table[kind]["measured"], rel=PINNED)


@pytest.mark.parametrize("rule", IDS)
def test_there_is_something_to_judge(rule: str) -> None:
    assert evidence(rule, "fails")
    assert evidence(rule, "keeps")


@pytest.mark.parametrize("rule", IDS)
def test_the_circuit_that_keeps_the_rule_keeps_all_others(rule: str) -> None:
    examination = examined(rule, "keeps")
    assert [(each.rule.id, each.outcome) for each in examination.verdicts] == []
    assert examination.unchecked == ()


@pytest.mark.parametrize("rule", IDS)
def test_the_boundary_is_one(rule: str) -> None:
    """Within a quarter of the limit, or the third outcome, or a yes-or-no rule."""
    table = expected(rule)
    measured, limit = table["boundary"].get("measured"), table["limit"]
    near = measured is not None and abs(measured - limit) <= 0.25 * max(abs(limit), 2.0)
    assert near or table["boundary"]["outcome"] in ("cannot-tell", "may-violate") or rule == "reverse-active"
