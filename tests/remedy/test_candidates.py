"""Trials: standard values, which way, how many, and how they ride on a condition of the board."""

from __future__ import annotations

import math
from dataclasses import replace

import pytest

from checker.circuit.types import Change, Port, Scenario
from checker.quantity.series import mantissas
from checker.remedy.candidates import MOST, drawn, finer, size, trials
from checker.remedy.stack import all_over, laid_over
from checker.rulekit import Lever, levers
from tests.rules.fake import small_circuit

CIRCUIT = small_circuit()
CAPACITOR = (Lever(part="C1", property="c_f", direction="up"),)


def is_standard(value: float, series: str) -> bool:
    """Whether a value is a preferred number."""
    mantissa = value / 10 ** math.floor(math.log10(value) + 1e-9)
    return any(math.isclose(mantissa, each, rel_tol=1e-9) for each in mantissas(series))


def test_a_capacitor_only_grows_and_in_standard_values() -> None:
    values = [change.value for (change,) in trials(CIRCUIT, CAPACITOR)]
    assert values == sorted(values)
    assert min(values) > 1e-6
    assert max(values) >= 20e-6
    assert all(is_standard(value, "E12") for value in values)


def test_resistors_go_both_ways_alone_and_in_pairs() -> None:
    every = trials(CIRCUIT, levers(("R1", "R2")))
    singles = [trial for trial in every if len(trial) == 1]
    assert {change.value < 5.6e3 for (change,) in singles if change.part == "R2"} == {True, False}
    assert all(is_standard(change.value, "E24") for trial in every for change in trial)
    pairs = [trial for trial in every if len(trial) == 2]
    for one, two in pairs:
        assert math.isclose(one.value / 27e3, two.value / 5.6e3, rel_tol=0.11)


def test_never_more_than_the_bound_however_many_levers() -> None:
    assert len(trials(CIRCUIT, levers(("R1", "R2", "R3", "R4") * 20))) <= MOST


def test_levers_in_step_keep_the_ratio_and_move_all_parts() -> None:
    every = trials(CIRCUIT, levers(("R1", "R2"), "down"), in_step=True)
    assert every
    for trial in every:
        assert [change.part for change in trial] == ["R1", "R2"]
        assert trial[0].value < 27e3
        assert math.isclose(trial[0].value / 27e3, trial[1].value / 5.6e3, rel_tol=0.11)


def test_what_is_no_element_or_outside_the_board_is_passed_over() -> None:
    assert trials(CIRCUIT, levers(("R99", "Q1"))) == ()
    assert trials(CIRCUIT, (Lever(part="R1", property="c_f"),)) == ()
    port = Port(name="out", net="c", node=1, role="output", reference_ohm=None, load=("R3",))
    assert trials(replace(CIRCUIT, ports=(port,)), levers(("R3",))) == ()


def test_nothing_that_cannot_be_bought() -> None:
    big = replace(CIRCUIT.capacitors, value=CIRCUIT.capacitors.value * 2200.0)
    assert all(change.value <= 4.7e-3 for (change,) in trials(replace(CIRCUIT, capacitors=big), CAPACITOR))


def test_finer_fills_the_step_in_which_it_first_clears_and_the_next() -> None:
    tried = trials(CIRCUIT, CAPACITOR)
    cleared = [change.value >= 3e-6 for (change,) in tried]
    assert [change.value for (change,) in finer(CIRCUIT, tried, cleared)] == pytest.approx([2.7e-6, 3.9e-6])


def test_finer_walks_away_from_the_drawing_on_both_sides() -> None:
    tried = trials(CIRCUIT, levers(("R4",)))
    cleared = [change.value < 600.0 or change.value > 2e3 for (change,) in tried]
    values = sorted(change.value for (change,) in finer(CIRCUIT, tried, cleared))
    assert [value for value in values if value < 1e3] == pytest.approx([360, 390, 430, 510, 560, 620])
    assert [value for value in values if value > 1e3] == pytest.approx([1600, 1800, 2000, 2400, 2700, 3000])


def test_finer_has_nothing_to_say_where_nothing_clears() -> None:
    tried = trials(CIRCUIT, CAPACITOR)
    assert finer(CIRCUIT, tried, [False] * len(tried)) == ()


def test_size_is_the_sum_of_log_ratios() -> None:
    trial = (
        Change(part="R1", property="r_ohm", value=54e3),
        Change(part="R2", property="r_ohm", value=2.8e3),
    )
    assert size(trial, CIRCUIT) == pytest.approx(2.0 * math.log(2.0), rel=1e-12)
    assert drawn(CIRCUIT, "R1", "r_ohm") == 27e3


def test_a_tolerance_of_the_condition_applies_to_the_new_value() -> None:
    condition = Scenario(
        name="current highest",
        kind="corner",
        changes=(
            Change(part="R1", property="factor", value=0.95),
            Change(part="R3", property="factor", value=1.05),
            Change(part="Q1", property="bf", value=50.0),
        ),
        temperature_k=330.0,
    )
    made = laid_over(condition, (Change(part="R1", property="r_ohm", value=10e3),), "trial", "corner")
    assert made.temperature_k == 330.0
    assert made.kind == "corner"
    assert set(made.changes) == {
        Change(part="R1", property="r_ohm", value=9.5e3),
        Change(part="R3", property="factor", value=1.05),
        Change(part="Q1", property="bf", value=50.0),
    }


def test_one_scenario_a_trial_in_order() -> None:
    every = trials(CIRCUIT, CAPACITOR)
    made = all_over(Scenario(name="nominal"), every)
    assert [scenario.changes for scenario in made] == list(every)
    assert {scenario.kind for scenario in made} == {"candidate"}
