"""One pass of the rules over a board: verdicts, gaps, failures."""

from __future__ import annotations

import math
from collections.abc import Iterable, Mapping

import pytest

from checker.circuit.types import Port
from checker.examine import NO_SINGLE_DATUM, examine
from checker.judge.gaps import to_unchecked
from checker.judge.guard import RAISE
from checker.judge.subjects import subjects
from checker.judge.verdict import Failure, Open
from checker.rulekit import Applies, Board, Bound, Evidence, Stage
from checker.trouble import Unsolved
from tests.judge.samples import SAMPLE_LIMITS, Sample
from tests.rules.fake import FakeBoard, Use, figure, stage

NAN = math.nan


class Broken(Sample):
    """Reads a limit that it does not have."""

    def judge(self, board: Board, subject: Stage, limits: Mapping[str, Bound]) -> Iterable[Evidence]:  # noqa: ARG002
        """Never comes back."""
        raise KeyError(limits["mots_v"])


class Stuck(Sample):
    """Asks of an island that is not solved."""

    def judge(self, board: Board, subject: Stage, limits: Mapping[str, Bound]) -> Iterable[Evidence]:  # noqa: ARG002
        """Never comes back."""
        raise Unsolved("net N1 floats")


def board(*values: float, **more: object) -> FakeBoard:
    """VCE of Q1 in the nominal and two corners."""
    return FakeBoard(figures={("vce_v", "Q1"): figure(list(values), quantity="vce_v", **more)})


def test_a_nominal_fault() -> None:
    (verdict,) = examine(board(2.0, 3.0, 0.5), [Sample()], SAMPLE_LIMITS).verdicts
    assert (verdict.outcome, verdict.severity, verdict.worst) == ("violates", "must-fix", 0)
    assert (verdict.name, verdict.state, verdict.stages) == (None, None, ("Q1",))
    assert verdict.failed.tolist() == [True, True, False]


def test_a_fault_of_a_corner() -> None:
    (verdict,) = examine(board(0.5, 3.0, 2.0), [Sample()], SAMPLE_LIMITS).verdicts
    assert (verdict.outcome, verdict.severity, verdict.name) == ("may-violate", "review", "hot")


def test_a_missing_datum_is_a_gap_and_not_clean() -> None:
    examination = examine(FakeBoard(), [Sample()], SAMPLE_LIMITS)
    assert examination.verdicts == ()
    assert examination.unchecked == (
        Open(subject="Q1", rule="sample-rule", datum="vce_v of Q1", supply="a figure in the test"),
    )


def test_an_unsolved_island_is_a_gap() -> None:
    (gap,) = examine(board(1.0, 1.0, 1.0), [Stuck()], SAMPLE_LIMITS).unchecked
    assert gap.datum == "net N1 floats"


def test_no_value_at_nominal_is_a_gap_with_its_reason() -> None:
    (gap,) = examine(board(NAN, NAN, NAN, reason="no output link"), [Sample()], SAMPLE_LIMITS).unchecked
    assert (gap.datum, gap.supply) == ("no output link", NO_SINGLE_DATUM)


def test_no_value_at_a_corner_names_the_corner() -> None:
    (gap,) = examine(board(0.5, NAN, 0.5), [Sample()], SAMPLE_LIMITS).unchecked
    assert gap.datum == "vce_v has no value in hot"


def test_a_figure_that_does_not_apply_is_clean() -> None:
    examination = examine(board(NAN, NAN, NAN, reason="not applicable: no divider"), [Sample()], SAMPLE_LIMITS)
    assert (examination.verdicts, examination.unchecked) == ((), ())


def test_a_rule_that_breaks_down_is_reported_and_the_others_go_on(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.delenv(RAISE, raising=False)
    examination = examine(board(2.0, 2.0, 2.0), [Broken(), Sample()], SAMPLE_LIMITS)
    (failure,) = examination.failures
    assert isinstance(failure, Failure)
    assert "KeyError: 'mots_v'" in str(failure)
    assert "test_examine.py:" in str(failure)
    assert len(examination.verdicts) == 1


def test_in_our_tests_it_raises(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv(RAISE, "1")
    with pytest.raises(KeyError, match="mots_v"):
        examine(board(2.0, 2.0, 2.0), [Broken()], SAMPLE_LIMITS)


def test_only_what_concerns_some_stages() -> None:
    both = FakeBoard(stages=(stage("Q1"), stage("Q2")))
    unchecked = examine(both, [Sample()], SAMPLE_LIMITS, frozenset({"Q2"})).unchecked
    assert [gap.subject for gap in unchecked] == ["Q2"]


def test_subjects_are_chosen_by_configuration_and_role() -> None:
    here = FakeBoard(
        stages=(stage("Q1"), stage("Q2", "common-base")),
        uses=(Use(part="C1", use="bypass", stage="Q1"), Use(part="C2", use="bypass", stage="Q2")),
        ports=(Port(name="in", net="in", node=1, role="input", reference_ohm=50.0),),
        at_port={"in": stage("Q2", "common-base")},
    )

    def names(applies: Applies) -> list[str]:
        return [subject.name for subject in subjects(here, ("in",), applies)]

    assert names(Applies(kind="stage")) == ["Q1", "Q2"]
    assert names(Applies(kind="stage", configurations=("common-base",))) == ["Q2"]
    assert names(Applies(kind="stage", roles=("switch",))) == []
    assert names(Applies(kind="capacitor", configurations=("common-emitter",))) == ["C1"]
    assert names(Applies(kind="port")) == ["in"]


def test_equal_gaps_are_listed_once() -> None:
    examination = examine(FakeBoard(), [Sample(), Sample()], SAMPLE_LIMITS)
    assert len(to_unchecked(examination)) == 1
