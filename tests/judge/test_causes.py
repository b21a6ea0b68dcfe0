"""Which finding follows from which."""

from __future__ import annotations

import numpy as np

from checker.judge.causes import CAUSES, CAUSES_AT_ONE_FREQUENCY, CAUSES_BY_QUANTITY, PRIMACY, causes
from checker.judge.discover import load_rules
from checker.words import Outcome
from tests.judge.samples import verdict
from tests.rules.fake import figure

OUTCOMES: tuple[Outcome, ...] = ("violates", "may-violate")


def test_the_tables_name_rules_that_exist_and_can_be_ranked() -> None:
    ids = {rule.id for rule in load_rules().rules}
    by_quantity = [rule for table in CAUSES_BY_QUANTITY.values() for rules in table.values() for rule in rules]
    at_one = [rule for rules in CAUSES_AT_ONE_FREQUENCY.values() for rule in rules]
    named = {*by_quantity, *at_one, *(rule for rules in CAUSES.values() for rule in rules)}
    assert named <= set(PRIMACY) <= ids
    assert set(CAUSES) | set(CAUSES_BY_QUANTITY) <= ids


def test_a_dead_stage_explains_its_other_findings() -> None:
    found = [
        verdict("input-mismatch", ("Q1", "J1")),
        verdict("saturated-at-rest"),
        verdict("bypass-loss", ("C2", "Q1")),
    ]
    found[2] = verdict("bypass-loss", ("C2", "Q1"), stages=("Q1",))
    assert causes(found) == (1, None, 1)


def test_the_root_of_several_causes_is_named() -> None:
    found = [verdict("cut-off-at-rest"), verdict("no-base-path"), verdict("target-missed")]
    assert causes(found) == (1, None, 1)


def test_another_stage_explains_nothing() -> None:
    assert causes([verdict("saturated-at-rest", ("Q1",)), verdict("coupling-loss", ("Q2",))]) == (None, None)


def test_what_only_may_happen_explains_nothing_that_does() -> None:
    found = [verdict("saturated-at-rest", outcome="may-violate", worst=1), verdict("coupling-loss")]
    assert causes(found) == (None, None)


def test_saturation_over_the_spread_follows_from_the_bias() -> None:
    found = [verdict("saturated-at-rest", outcome="may-violate", worst=1), verdict("beta-dependent-bias")]
    assert causes(found) == (1, None)


def test_no_circle() -> None:
    assert causes([verdict("saturated-at-rest"), verdict("beta-dependent-bias")]) == (None, 0)
    every = [verdict(rule, outcome=outcome) for rule in (*PRIMACY, "target-missed") for outcome in OUTCOMES]
    found = causes(every)
    for start in range(len(every)):
        seen, here = set(), start
        while here is not None:
            assert here not in seen
            seen.add(here)
            here = found[here]


def test_a_target_follows_from_a_capacitor_at_its_own_frequency_only() -> None:
    edges = np.array([100.0, 1e3, 10e3])
    lost = figure([[14.0, 0.1, 0.0]] * 3, "dB", quantity="own_loss_db", f_hz=edges)
    low = figure([[9.0, 2.0, 3.0]] * 3, "dB", quantity="voltage_gain_db", f_hz=edges)
    middle = figure([[2.0, 9.0, 3.0]] * 3, "dB", quantity="voltage_gain_db", f_hz=edges)
    loss = verdict("coupling-loss", ("C1", "Q1"), stages=("Q1",), judged=lost)
    assert causes([verdict("target-missed", judged=low), loss]) == (1, None)
    assert causes([verdict("target-missed", judged=middle), loss]) == (None, None)
