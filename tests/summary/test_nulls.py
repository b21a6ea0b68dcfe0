"""Every null of a report is explained, on boards that are whole and on boards that are not."""

from __future__ import annotations

from pathlib import Path

import pytest

from checker.record import Report, at, unexplained
from tests.boards.test_planted import PLANTED
from tests.boards.writer import SAMPLES
from tests.pipeline.formats import checked
from tests.stages.circuits import CASES, Case
from tests.whole import intent_text, outcome_from

FILES = sorted([*SAMPLES.glob("*/*.cir"), *SAMPLES.glob("*/*.net"), *PLANTED.glob("*.cir")])
NO_MODEL = "V1 VCC 0 12\nRC VCC C 1k\nRB VCC B 100k\nQ1 C B 0 UNHEARD_OF\nRD VCC D 1k\nRE VCC E 100k\nQ2 D E 0 QN\n"


def assert_every_figure_is_there_or_explained(report: Report) -> None:
    """No null without a reason, and no reason for a figure that is there."""
    assert unexplained(report) == []
    assert all(report.unavailable.values())
    stages = {stage.id: stage for stage in report.stages}
    for stage in stages.values():
        for key in ("ic_a", "vce_v", "vbe_v"):
            if at("stages", stage.id, "bias", key) in report.unavailable:
                assert stage.bias is None or getattr(stage.bias, key) is None


@pytest.mark.parametrize("path", FILES, ids=lambda path: path.name)
def test_boards_on_file(path: Path) -> None:
    assert_every_figure_is_there_or_explained(checked(path).report)


@pytest.mark.parametrize("case", CASES, ids=lambda case: case.name)
def test_boards_of_every_kind(case: Case) -> None:
    report = outcome_from(case.netlist, case.intent).report
    assert not report.incomplete, report.faults
    assert_every_figure_is_there_or_explained(report)


@pytest.mark.parametrize(
    ("netlist", "words"),
    [
        (NO_MODEL, "model of Q1"),
        ("XJ1 +V 0 CONN_01X02\nRC +V C 1k\nRB +V B 100k\nQ1 C B 0 QN\n", "+V"),
        ("V1 VCC 0 5\nR1 VCC A 1k\nR2 VCC C 1k\nR3 A X 10k\nR4 C Y 10k\nQ1 A Y 0 QN\nQ2 C X 0 QN\n", "2 rests"),
    ],
)
def test_what_is_missing_is_named(netlist: str, words: str) -> None:
    report = outcome_from(netlist, intent_text(band=None)).report
    assert not report.incomplete, report.faults
    assert_every_figure_is_there_or_explained(report)
    told = [*report.unavailable.values(), *(f"{u.subject} {u.datum} {u.supply}" for u in report.unchecked)]
    assert any(words in each for each in told), told
    assert report.checked.stages < report.checked.of


def test_a_net_between_capacitors_has_no_voltage() -> None:
    report = outcome_from("V1 VCC 0 5\nC1 VCC A 1u\nC2 A B 1u\nR1 B 0 1k\n", "").report
    assert report.nets["A"].dc_v is None
    assert report.nets["B"].dc_v == 0.0
    assert "no DC voltage" in report.unavailable["nets/A/dc_v"]
    assert_every_figure_is_there_or_explained(report)


def test_a_board_without_transistors() -> None:
    report = outcome_from("V1 VCC 0 5\nR1 VCC A 1k\nR2 A 0 1k\n", "").report
    assert report.checked.of == 0
    assert_every_figure_is_there_or_explained(report)
    assert report.nets["A"].dc_v == pytest.approx(2.5, rel=1e-9)


def test_an_oscillator_is_told_with_its_caution() -> None:
    netlist = "V1 VCC 0 12\nR1 VCC B 47k\nR2 B 0 10k\nCB B 0 10n\nL1 VCC C 1u\nRL VCC C 2k\nC1 C E 100p\nC2 E 0 1n\n"
    report = outcome_from(netlist + "RE E 0 1k\nQ1 C B E QN\n", intent_text(band=("10 MHz", "20 MHz"))).report
    assert [stage.configuration for stage in report.stages] == ["oscillator"]
    assert any("growing natural frequency" in words for words in report.cautions)
    assert_every_figure_is_there_or_explained(report)
