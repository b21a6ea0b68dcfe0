"""From failed scenarios to an outcome and its weight."""

from __future__ import annotations

import math

import pytest

from checker.circuit.types import Scenario
from checker.judge.outcome import Decided, decide, severity, unknown_in
from checker.rulekit import Bound, Check, require
from checker.words import Outcome, Severity
from tests.rules.fake import figure

NAN = math.nan
HERE = (
    Scenario(name="nominal"),
    Scenario(name="hot", kind="corner"),
    Scenario(name="cold", kind="corner"),
    Scenario(name="reset", kind="state"),
    Scenario(name="trial", kind="candidate"),
)


def check(*values: float, **more: object) -> Check:
    """At most 1 in each of the five scenarios."""
    return require(figure(list(values), **more), "at most", Bound.at(1.0, "V", "a test"))


@pytest.mark.parametrize(
    ("values", "always", "wanted"),
    [
        ((0.0, 0.0, 0.0, 0.0, 9.0), True, None),
        ((2.0, 3.0, 0.0, 0.0, 0.0), True, Decided("violates", 0)),
        ((0.0, 2.0, 3.0, 0.0, 0.0), True, Decided("may-violate", 2)),
        ((0.0, 2.0, 0.0, 2.0, 0.0), True, Decided("violates", 3)),
        ((0.0, 2.0, 0.0, 2.0, 0.0), False, Decided("may-violate", 1)),
        ((0.0, 0.0, 0.0, 2.0, 0.0), False, None),
        ((NAN, 2.0, NAN, 0.0, 0.0), False, Decided("may-violate", 1)),
        ((NAN, NAN, NAN, NAN, NAN), True, None),
    ],
)
def test_nominal_then_states_then_corners(values: tuple[float, ...], always: bool, wanted: Decided | None) -> None:
    assert decide(check(*values), HERE, always=always) == wanted


def test_one_sample_in_a_thousand_may_fail() -> None:
    many = (HERE[0], *(Scenario(name=f"sample {n}", kind="sample") for n in range(2000)))
    few = [0.0] * 2001
    few[7] = few[8] = 2.0
    assert decide(check(*few), many, always=False) is None
    few[9] = 3.0
    assert decide(check(*few), many, always=False) == Decided("may-violate", 9)


@pytest.mark.parametrize(
    ("outcome", "weight", "wanted"),
    [
        ("violates", "must-fix", "must-fix"),
        ("may-violate", "must-fix", "review"),
        ("may-violate", "note", "note"),
        ("violates", "review", "review"),
    ],
)
def test_what_only_may_happen_is_worth_a_review(outcome: Outcome, weight: Severity, wanted: Severity) -> None:
    assert severity(outcome, weight) == wanted


def test_unknown_scenarios_are_named() -> None:
    assert unknown_in(check(NAN, NAN, 0.0, 0.0, 0.0), HERE, always=False) == ("nominal",)
    assert unknown_in(check(0.0, NAN, 0.0, NAN, NAN), HERE, always=False) == ("hot",)
    assert unknown_in(check(0.0, NAN, 0.0, NAN, NAN), HERE, always=True) == ("hot", "reset")
    assert unknown_in(check(0.0, NAN, NAN, NAN, NAN, nominal_only=True), HERE, always=True) == ()
    assert unknown_in(check(*[NAN] * 5, reason="not applicable: no divider"), HERE, always=True) == ()
