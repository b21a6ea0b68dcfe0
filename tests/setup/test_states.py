"""Boards of several rests: refused where none can be told, searched and counted elsewhere."""

from __future__ import annotations

import numpy as np
import pytest

from checker.setup import Setup
from checker.solve.operating import operating_point
from tests.whole import intent_text, mirrored, set_up_from

FLIP_FLOP = "V1 VCC 0 5\nR1 VCC A 1k\nR2 VCC C 1k\nR3 A X 10k\nR4 C Y 10k\nQ1 A Y 0 QN\nQ2 C X 0 QN"
TRIGGER = """V1 VCC 0 12
V2 IN 0 {volts}
R1 VCC A 4.7k
R2 A X 10k
R3 X 0 22k
R4 VCC C 2.2k
RE E 0 470
RB IN B 1k
Q1 A B E QN
Q2 C X E QN"""
NO_BAND = intent_text(band=None)


def trigger(volts: float) -> Setup:
    """The trigger at an input voltage."""
    return set_up_from(TRIGGER.format(volts=volts), NO_BAND)


@pytest.mark.parametrize("text", [FLIP_FLOP, mirrored(FLIP_FLOP)], ids=["NPN", "PNP"])
def test_a_flip_flop_has_no_single_rest(text: str) -> None:
    """Its balance obeys all node equations and is no rest: nothing is printed of it."""
    setup = set_up_from(text, NO_BAND)
    ((place, island),) = [(k, i) for k, i in enumerate(setup.point.islands) if "A" in i.nets]
    assert (island.states, island.exhaustive, bool(island.ok[0])) == (2, True, False)
    assert setup.point.jacobian(place)[1] == -1.0, "an odd sign is what proves it"
    assert "2 rests" in island.reason
    assert np.isnan(setup.point.v_v[0, setup.circuit.node("A")])
    assert {s.reason for s in setup.recognition.stages} == {island.reason}
    assert setup.recognition.groups == ()


@pytest.mark.parametrize(("volts", "rests", "first_on"), [(0.5, 1, False), (2.6, 2, False), (6.0, 1, True)])
def test_a_trigger_is_searched(volts: float, rests: int, first_on: bool) -> None:
    """Below, between and above its thresholds (about 1.6 V and 3 V)."""
    setup = trigger(volts)
    (island,) = [i for i in setup.point.islands if "A" in i.nets]
    assert (island.states, island.exhaustive, bool(island.ok[0])) == (rests, True, True)
    ic = dict(zip(setup.circuit.bipolars.names, setup.point.bipolar["ic_a"][0], strict=True))
    assert bool(ic["Q1"] > 1e-3) is first_on
    assert bool(ic["Q2"] > 1e-3) is not first_on


def test_the_second_rest_is_there() -> None:
    """Come to 2.6 V from 6 V, a small step at a time: the trigger still holds its other state, and balances."""
    point = trigger(6.0).point
    for volts in (5.0, 4.0, 3.5, 3.0, 2.6):
        point = operating_point(trigger(volts).circuit, near=point)
    assert all(island.ok.all() for island in point.islands)
    ic = dict(zip(point.circuit.bipolars.names, point.bipolar["ic_a"][0], strict=True))
    assert ic["Q1"] > 1e-3 > ic["Q2"]


def test_a_trigger_is_no_differential_pair() -> None:
    assert trigger(0.5).recognition.groups == ()


def test_two_transistors_without_a_loop_have_one_rest() -> None:
    netlist = "V1 VCC 0 12\nR1 VCC B 470k\nR2 B 0 470k\nRE E2 0 470\nQ1 VCC B E1 QN\nQ2 VCC E1 E2 QN"
    (island,) = [i for i in set_up_from(netlist, NO_BAND).point.islands if "B" in i.nets]
    assert (island.states, island.exhaustive) == (1, True)
