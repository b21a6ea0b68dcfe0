"""What single rules are shown, leave alone, and cannot tell."""

from __future__ import annotations

import math
from collections.abc import Mapping
from pathlib import Path

import pytest

from checker.circuit.types import Port
from checker.intent.types import Intent, TargetIntent
from checker.judge.discover import load_rules
from checker.judge.limits import resolve_limits
from checker.judge.verdict import AnyRule
from checker.pipeline import check_board
from checker.record.finding import Finding
from checker.rulekit import Bound, CannotTell, Evidence
from checker.words import Configuration
from tests.rules.fake import NOWHERE, FakeBoard, Use, figure, stage

BOOK = load_rules().rules
RULES: Mapping[str, AnyRule] = {rule.id: rule for rule in BOOK}
LIMITS = resolve_limits(BOOK, Intent())


def judge(rule: str, board: FakeBoard, subject: object) -> list[Evidence]:
    """The rule's evidence with its default limits."""
    return list(RULES[rule].judge(board, subject, LIMITS[rule]))


def port(**more: object) -> Port:
    """A coaxial 50 ohm input."""
    given = {"reference_ohm": 50.0, "role": "input", "coaxial": True, "part": "J1", **more}
    return Port(name="antenna", net="in", node=1, **given)  # type: ignore[arg-type]


RF = FakeBoard(
    figures={
        ("return_loss_db", "antenna"): figure([4.5] * 3, "dB"),
        ("impedance_ohm", "antenna"): figure([12.7 + 0j] * 3, "ohm"),
    },
    at_port={"antenna": stage("Q1", "common-base", entry="emitter")},
)


def test_a_mismatch_names_stage_connector_and_impedance() -> None:
    (found,) = judge("input-mismatch", RF, port())
    assert found.subject == ("Q1", "J1")
    assert found.check.failed.all()
    assert "50 Ω" in found.message
    assert [lever.part for lever in found.levers] == ["R4", "R2", "R1"]


@pytest.mark.parametrize(
    "other",
    [port(reference_ohm=None), port(role="output"), port(role=None), port(coaxial=False, declared=False)],
)
def test_no_mismatch_without_a_reference_that_was_meant(other: Port) -> None:
    assert judge("input-mismatch", RF, other) == []


def test_a_coaxial_connector_that_feeds_nothing_known_cannot_be_told() -> None:
    with pytest.raises(CannotTell, match="what port antenna feeds"):
        judge("input-mismatch", FakeBoard(figures=RF.figures), port())


@pytest.mark.parametrize(("rule", "use"), [("coupling-loss", "coupling"), ("bypass-loss", "bypass")])
def test_a_capacitor_is_judged_by_its_own_job(rule: str, use: str) -> None:
    board = FakeBoard(figures={("own_loss_db", "C1"): figure([3.0] * 3, "dB")})
    other = "bypass" if use == "coupling" else "coupling"
    (found,) = judge(rule, board, Use(part="C1", use=use, stage="Q1"))
    assert found.subject == ("C1", "Q1")
    assert (found.levers[0].part, found.levers[0].property, found.levers[0].direction) == ("C1", "c_f", "up")
    assert judge(rule, board, Use(part="C1", use=other, stage="Q1")) == []


def test_the_base_capacitor_of_a_common_base_stage_is_left_to_its_own_rule() -> None:
    assert "common-base" not in RULES["bypass-loss"].applies.configurations
    assert RULES["base-not-grounded"].applies.configurations == ("common-base", "common-gate")


def resting(code: float, configuration: Configuration, ic: float = 1e-3) -> list[Evidence]:
    """All evidence of the three rules of rest, for one region code."""
    board = FakeBoard(
        stages=(stage("Q1", configuration),),
        figures={
            ("region_code", "Q1"): figure([code] * 3, ""),
            ("vce_v", "Q1"): figure([-4.0 if code == 3 else 4.0] * 3),
            ("vbe_v", "Q1"): figure([0.6] * 3),
            ("ic_a", "Q1"): figure([ic] * 3, "A"),
            ("headroom_v", "Q1"): figure([-0.1 if code == 1 else 2.0] * 3),
        },
    )
    subject = board.stages[0]
    return [
        found
        for rule in ("saturated-at-rest", "cut-off-at-rest", "reverse-active")
        for found in judge(rule, board, subject)
        if found.check.failed.any()
    ]


def test_each_region_has_its_rule_and_active_has_none() -> None:
    assert resting(0, "common-emitter") == []
    assert [found.check.figure.quantity for found in resting(1, "common-emitter")] == ["headroom_v"]
    assert [found.check.figure.quantity for found in resting(2, "common-emitter", 1e-9)] == ["ic_a"]
    assert [found.check.figure.quantity for found in resting(3, "common-emitter")] == ["vce_v"]


def test_a_fair_current_beside_a_larger_possible_one_is_no_cut_off() -> None:
    assert resting(2, "current-source", 160e-6) == []


def test_the_current_of_a_pnp_counts_by_its_magnitude() -> None:
    assert resting(2, "common-emitter", -160e-6) == []
    assert len(resting(2, "common-emitter", -1e-9)) == 1


@pytest.mark.parametrize("code", [1, 2, 3])
def test_a_device_of_unknown_work_accuses_nobody(code: int) -> None:
    with pytest.raises(CannotTell, match="what Q1 is for"):
        resting(code, "unclassified", 1e-9)


def test_an_unclassified_device_that_is_active_is_clean() -> None:
    assert resting(0, "unclassified") == []


def test_an_unknown_region_is_unknown_and_no_accusation() -> None:
    assert resting(math.nan, "common-emitter") == []


@pytest.mark.parametrize("rule", ["saturated-at-rest", "cut-off-at-rest", "reverse-active", "soft-divider"])
def test_switches_are_not_asked_how_they_rest(rule: str) -> None:
    assert "switch" not in RULES[rule].applies.configurations


def test_stress_is_judged_against_the_derated_rating_of_each_temperature() -> None:
    board = FakeBoard(
        figures={
            ("power_w", "Q1"): figure([0.5, 0.5, 0.5], "W"),
            ("power_limit_w", "Q1"): figure([0.625, 0.4, 0.625], "W"),
        }
    )
    (found,) = judge("dissipation", board, board.stages[0])
    assert found.check.failed.tolist() == [False, True, False]
    half = RULES["dissipation"].judge(board, board.stages[0], {"share": Bound.at(0.5, "%", "house rule")})
    assert next(iter(half)).check.failed.all()
    assert RULES["dissipation"].always


def test_a_missing_rating_cannot_be_told() -> None:
    board = FakeBoard(figures={("power_w", "Q1"): figure([0.5] * 3, "W")})
    with pytest.raises(CannotTell, match="power_limit_w of Q1"):
        judge("dissipation", board, board.stages[0])


@pytest.mark.parametrize(
    ("ends", "relation", "failed"),
    [
        ({"minimum": 18.0}, "at least", [False, True, False]),
        ({"maximum": 19.0}, "at most", [True, False, True]),
        ({"minimum": 18.0, "maximum": 30.0}, "within", [False, True, True]),
    ],
)
def test_a_target_is_judged_by_the_ends_it_has(ends: dict[str, float], relation: str, failed: list[bool]) -> None:
    board = FakeBoard(figures={("voltage_gain_db", "Q1"): figure([20.0, 17.0, 31.0], "dB")})
    wanted = TargetIntent(quantity="voltage_gain_db", origin=NOWHERE, stage="Q1", **ends)
    (found,) = judge("target-missed", board, wanted)
    assert found.check.relation == relation
    assert found.check.failed.tolist() == failed


def test_a_group_that_was_not_recognised_cannot_be_told() -> None:
    wanted = TargetIntent(quantity="voltage_gain_db", origin=NOWHERE, group="Q1+Q2", minimum=1.0)
    with pytest.raises(CannotTell, match="not recognised as a group"):
        judge("target-missed", FakeBoard(), wanted)


SOFT = """* divider of 82k and 22k on a gain of 50
V1 vcc 0 18
R1 vcc b 82k
R2 b 0 22k
R3 vcc c 5.6k
R4 e 0 1.2k
Q1 c b e QX
C1 b in 10u
C2 c out 10u
C3 e 0 1000u
XJ1 in 0 CONN_01X02
XJ2 out 0 CONN_01X02
.model QX NPN(bf=50 is=1e-14)
.end
"""
INTENT = """[band]
low = "1 kHz"
high = "10 kHz"
[[port]]
name = "in"
net = "in"
role = "input"
impedance = "600 ohm"
[[port]]
name = "out"
net = "out"
role = "output"
impedance = "100 kohm"
[limits.input-mismatch]
return_loss_db = 0
"""


def findings(folder: Path, text: str) -> tuple[Finding, ...]:
    """Of a board written to a folder."""
    (folder / "board.cir").write_text(text, "utf-8")
    (folder / "board.intent.toml").write_text(INTENT, "utf-8")
    return check_board(folder / "board.cir", None).report.findings


def test_a_divider_that_books_call_soft_is_found_and_nothing_else(tmp_path: Path) -> None:
    """Boylestad, example 4.10 (as transcribed): exact IC 1.9783 mA, by the stiff shortcut 2.5897 mA, so 24 % under it;
    the shortcut there takes VBE as 0.7 V and IE as IC."""
    nominal = [finding for finding in findings(tmp_path, SOFT) if finding.outcome == "violates"]
    assert [finding.rule for finding in nominal if finding.severity == "must-fix"] == []
    (found,) = [finding for finding in nominal if finding.rule == "soft-divider"]
    assert found.subject[0] == "Q1"
    assert found.measured is not None
    assert found.measured.value == pytest.approx(100 * (1 - 1.9783 / 2.5897), abs=2.0)
