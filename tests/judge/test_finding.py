"""Findings: messages with the numbers of the worst scenario, measured value, limit, location."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest

from checker.examine import examine
from checker.judge.finding import to_findings
from checker.judge.message import filled
from checker.quantity.figure import Figure
from checker.record.finding import Bound as LimitRecord
from checker.record.finding import Finding, Window
from checker.rulekit import Bound, Evidence, Relation, require
from tests.judge.samples import SAMPLE_LIMITS, Sample
from tests.rules.fake import FakeBoard, fact, figure, small_circuit

BAND = np.array([100.0, 1e3, 10e3])


def finding(values: list[float]) -> Finding:
    """Of the sample rule on VCE of Q1, which stands on line 7."""
    circuit = replace(small_circuit(), parts={"Q1": fact("Q1", "bipolar", 7, C="c", B="b", E="e")})
    board = FakeBoard(figures={("vce_v", "Q1"): figure(values, quantity="vce_v")}, circuit=circuit)
    ((_, made),) = to_findings(examine(board, [Sample()], SAMPLE_LIMITS), circuit)
    return made


def test_everything_a_finding_says() -> None:
    made = finding([2.0, 3.0, 0.5])
    assert (made.rule, made.outcome, made.severity, made.subject) == ("sample-rule", "violates", "must-fix", ("Q1",))
    assert made.message == "Q1 has 2.00 V, at most 1 V"
    assert made.effect == "a sample"
    assert made.measured is not None
    assert (made.measured.quantity, made.measured.value, made.measured.unit) == ("vce_v", 2.0, "V")
    assert isinstance(made.limit, LimitRecord)
    assert (made.limit.relation, made.limit.value, made.limit.source) == ("at most", 1.0, "a test")
    assert made.location is not None
    assert (made.location.file, made.location.line) == ("a.cir", 7)
    assert (made.scenario, made.state, made.frequency_hz, made.caused_by) == (None, None, None, None)


def test_a_corner_speaks_with_its_own_numbers() -> None:
    made = finding([0.5, 3.0, 2.0])
    assert (made.scenario, made.message) == ("hot", "Q1 has 3.00 V, at most 1 V")


def test_a_number_that_json_cannot_hold_is_null() -> None:
    made = finding([math.inf, 0.0, 0.0])
    assert made.measured is not None
    assert made.measured.value is None


def message(judged: Figure, relation: Relation, bound: Bound, text: str, **figures: Figure) -> str:
    """A sentence filled at nominal."""
    check = require(judged, relation, bound)
    return filled(Evidence(check=check, subject=("Q1",), message=text, figures=figures), text, 0)


def test_the_worst_frequency_and_other_figures_at_it() -> None:
    loss = figure([[0.1, 0.2, 3.0]], "dB", f_hz=BAND)
    impedance = figure(np.array([[50 + 0j, 40 + 0j, 30 - 40j]]), "ohm", f_hz=BAND)
    said = message(loss, "at most", Bound.at(1.0, "dB", ""), "{value} at {frequency}, {z}", z=impedance)
    assert said == "3.00 dB at 10.0 kHz, 50.0 Ω at -53°"


def test_both_ends_of_a_window_and_per_cent() -> None:
    assert message(figure([17.0], "dB"), "within", Bound(low=18.0, high=24.0, unit="dB", source=""), "{limit}") == (
        "18 dB to 24 dB"
    )
    assert message(figure([0.283], "%"), "at most", Bound.at(0.1, "%", ""), "{value} > {limit}") == "28.3 % > 10 %"


def test_a_hostile_name_is_only_text() -> None:
    assert message(figure([2.0]), "at most", Bound.at(1.0, "V", ""), "Q{0.__class__} {value") == "Q{0.__class__} {value"


@pytest.mark.parametrize("values", [[17.0, 20.0], [25.0, 20.0]])
def test_a_window_is_a_window_in_the_record(values: list[float]) -> None:
    class Wide(Sample):
        """Between 18 and 24."""

        def judge(self, board, subject, limits):  # type: ignore[no-untyped-def]  # noqa: ARG002
            """One check."""
            bound = Bound(low=18.0, high=24.0, unit="dB", source="a target")
            check = require(board.ask("vce_v", "Q1"), "within", bound)
            return [Evidence(check=check, subject=("Q1",), message="{value}")]

    board = FakeBoard(figures={("vce_v", "Q1"): figure(values, "dB")}, scenarios=FakeBoard().scenarios[:2])
    ((_, made),) = to_findings(examine(board, [Wide()], SAMPLE_LIMITS), board.circuit)
    assert isinstance(made.limit, Window)
    assert (made.limit.low, made.limit.high) == (18.0, 24.0)
