"""A target that names what is not there stops the run with its line."""

from __future__ import annotations

import pytest

import checker.board  # noqa: F401 - registers the quantities
from checker.intent.types import TargetIntent
from checker.judge.wanted import check_targets
from checker.quantity.value import Origin
from checker.stages.types import Recognition
from checker.trouble import InputTrouble
from tests.rules.fake import stage

HERE = Recognition(stages=(stage("Q1"), stage("Q2")), groups=(), paths=())
PORTS = ("antenna", "IF")


def target(quantity: str = "voltage_gain_db", **names: str) -> TargetIntent:
    """On line 9."""
    return TargetIntent(quantity=quantity, origin=Origin(kind="intent", file="a.toml", line=9), minimum=1.0, **names)


@pytest.mark.parametrize(
    "good", [target(stage="Q1"), target(group="Q1+Q2"), target("emf_gain_db", source="antenna", to="IF")]
)
def test_what_is_there_passes(good: TargetIntent) -> None:
    check_targets((good,), HERE, PORTS)


@pytest.mark.parametrize(
    ("slip", "said"),
    [
        (target(stage="Q9"), "unknown stage of a target 'Q9'"),
        (target(group="Q1+Q3"), "unknown device in a target's group 'Q3'"),
        (target(source="antena", to="IF"), "did you mean 'antenna'"),
        (target("emf_gain_db", stage="Q1"), "unknown quantity of a stage 'emf_gain_db'"),
        (target("ic_a", source="antenna", to="IF"), "unknown quantity of a path from port to port 'ic_a'"),
    ],
)
def test_a_slip_is_named_with_its_line(slip: TargetIntent, said: str) -> None:
    with pytest.raises(InputTrouble) as caught:
        check_targets((slip,), HERE, PORTS)
    assert said in str(caught.value)
    assert str(caught.value).startswith("a.toml:9: ")
