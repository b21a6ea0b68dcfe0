"""`require` decides over scenarios: worst frequency, missing values, boundaries."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from checker.rulekit import Bound, CannotTell, Relation, ceiling, levers, magnitude, require, where_code
from checker.trouble import Trouble
from tests.rules.fake import figure

NAN = math.nan
TEN = Bound.at(10.0, "dB", "a test")


def test_the_worst_frequency_speaks_for_a_scenario() -> None:
    check = require(figure([[12.0, 9.0, 11.0], [12.0, 11.0, 10.5]]), "at least", TEN)
    assert check.failed.tolist() == [True, False]
    assert check.worst.tolist() == [1, 2]
    assert check.excess == pytest.approx([1.0, -0.5], abs=1e-7)


@pytest.mark.parametrize(
    ("relation", "value", "failed"),
    [
        ("at least", 10.0, False),
        ("at least", 10.0 - 1e-12, False),
        ("at least", 9.999999, True),
        ("at most", 10.0, False),
        ("at most", 10.000001, True),
        ("at most", math.inf, True),
        ("at least", math.inf, False),
        ("equals", 10.0, False),
        ("equals", 10.1, True),
    ],
)
def test_a_limit_that_is_met_is_met(relation: Relation, value: float, failed: bool) -> None:
    assert require(figure([value]), relation, TEN).failed.tolist() == [failed]


def test_within_takes_both_ends() -> None:
    bound = Bound(low=18.0, high=24.0, unit="dB", source="a target")
    check = require(figure([17.0, 18.0, 20.0, 24.0, 25.0]), "within", bound)
    assert check.failed.tolist() == [True, False, False, False, True]


def test_nan_never_accuses_and_never_counts_as_kept() -> None:
    check = require(figure([[NAN, 12.0], [NAN, 9.0], [NAN, NAN]]), "at least", TEN)
    assert check.failed.tolist() == [False, True, False]
    assert check.unknown.tolist() == [True, False, True]
    assert check.applies


def test_a_bound_of_its_own_for_each_scenario() -> None:
    bound = Bound(high=np.array([1.0, 0.5, NAN]), unit="W", source="a card")
    check = require(figure([0.7, 0.7, 0.7]), "at most", bound)
    assert check.failed.tolist() == [False, True, False]
    assert check.unknown.tolist() == [False, False, True]


def test_an_open_end_that_the_relation_needs_is_unknown_not_kept() -> None:
    check = require(figure([5.0]), "at least", Bound(high=3.0, unit="V", source="a slip"))
    assert (check.failed.tolist(), check.unknown.tolist()) == ([False], [True])


def test_a_complex_figure_is_judged_by_its_magnitude() -> None:
    assert require(figure(np.array([3 + 4j])), "at most", Bound.at(5.0, "ohm", "")).failed.tolist() == [False]
    assert require(figure(np.array([3 + 4j])), "at most", Bound.at(4.9, "ohm", "")).failed.tolist() == [True]


def test_not_applicable_is_clean_and_another_reason_is_not() -> None:
    assert not require(figure([NAN], reason="not applicable: no divider"), "at most", TEN).applies
    assert require(figure([NAN], reason="the island is not solved"), "at most", TEN).applies


@given(st.lists(st.floats(-1e6, 1e6), min_size=1, max_size=6), st.floats(-1e3, 1e3))
def test_at_least_and_at_most_part_the_line(values: list[float], limit: float) -> None:
    bound = Bound.at(limit, "V", "")
    low = require(figure(values), "at least", bound).failed
    high = require(figure(values), "at most", bound).failed
    assert not (low & high).any()
    slack = 1e-9 * abs(limit)
    assert low.tolist() == [value < limit - slack for value in values]
    assert high.tolist() == [value > limit + slack for value in values]


def test_the_value_of_a_bound() -> None:
    assert Bound.at(3.0, "V", "").value == 3.0
    assert Bound(high=2.0, unit="V", source="").value == 2.0
    with pytest.raises(ValueError, match="no value"):
        _ = Bound(unit="V", source="").value


def test_shared_formulas() -> None:
    assert magnitude(figure([-2.0])).values.tolist() == [[2.0]]
    bound = ceiling(figure([0.6, 0.4], "W"), share=0.5, less=0.1)
    assert np.asarray(bound.high) == pytest.approx([0.2, 0.1])
    assert bound.source == "a test"
    assert [(lever.part, lever.direction) for lever in levers(("R1", "R2"), "down")] == [("R1", "down"), ("R2", "down")]


def test_where_code_keeps_nan_and_passes_the_rest() -> None:
    coded = figure([0.0, 1.0, NAN])
    kept = where_code(figure([5.0, 6.0, 7.0]), coded, (1,), math.inf).values[:, 0]
    assert kept[0] == math.inf
    assert kept[1] == 6.0
    assert math.isnan(kept[2])


def test_cannot_tell_carries_what_to_supply_and_is_two_kinds() -> None:
    missing = CannotTell("the resistance of K1", "a [[part]] entry")
    assert (missing.datum, missing.supply) == ("the resistance of K1", "a [[part]] entry")
    assert isinstance(missing, LookupError)
    assert isinstance(missing, Trouble)
    assert str(missing) == "the resistance of K1: a [[part]] entry"
