"""Circuits that have no answer, or only part of one: the reason names the part or the net, the rest is solved."""

from __future__ import annotations

import numpy as np
import pytest

from checker.solve.operating import operating_point
from tests.bench import Bench
from tests.reference.boards import NPN


def _good_stage(b: Bench) -> None:
    b.v("VCC", "vcc", "0", 10.0)
    b.r("RB", "vcc", "b", 470e3)
    b.r("RC", "vcc", "c", 1e3)
    b.q("Q1", "c", "b", "0", **NPN)


def test_net_between_capacitors_has_no_voltage_and_says_so() -> None:
    b = Bench(27.0)
    _good_stage(b)
    b.c("C1", "c", "x", 1e-6)
    b.c("C2", "x", "0", 1e-6)
    point = operating_point(b.circuit())
    assert np.isnan(point.v_v[0, point.circuit.node("x")])
    assert "x" in point.reason("x")
    assert "block direct current" in point.reason("x")
    assert point.reason("c") == ""


def test_floating_island_is_named_and_the_rest_solved() -> None:
    b = Bench(27.0)
    _good_stage(b)
    b.r("RX", "x", "y", 1e3)
    b.c("CX", "y", "c", 1e-6)
    point = operating_point(b.circuit())
    assert np.isnan(point.v_v[0, point.circuit.node("y")])
    assert "no DC path" in point.reason("x")
    assert "x" in point.reason("x").split()
    assert np.isfinite(point.v_v[0, point.circuit.node("c")])


def test_base_without_path_carries_only_leakage_or_is_refused() -> None:
    """A base on a capacitor alone has a path through its junctions: the stage is solved, cut off."""
    b = Bench(27.0)
    b.v("VCC", "vcc", "0", 10.0)
    b.c("C1", "in", "b", 1e-6)
    b.r("RC", "vcc", "c", 1e3)
    b.r("RE", "e", "0", 1e3)
    b.q("Q1", "c", "b", "e", **NPN)
    point = operating_point(b.circuit())
    assert np.isfinite(point.v_v[0, point.circuit.node("b")])
    assert abs(point.bipolar["ic_a"][0, 0]) < 1e-9
    np.testing.assert_allclose(point.bipolar["ib_a"][0, 0], 0.0, atol=1e-18)


def test_two_sources_that_agree_are_no_trouble() -> None:
    b = Bench(27.0)
    _good_stage(b)
    b.v("VB", "vcc", "0", 10.0)
    assert all(island.ok.all() for island in operating_point(b.circuit()).islands)


def test_sources_that_contradict_are_named() -> None:
    b = Bench(27.0)
    _good_stage(b)
    b.v("VBAD", "vcc", "0", 9.0)
    point = operating_point(b.circuit())
    assert "VBAD" in point.reason("c")
    assert np.isnan(point.v_v[0, point.circuit.node("c")])


def test_contradiction_in_another_scenario_is_seen_too() -> None:
    b = Bench(27.0)
    b.v("VCC", "vcc", "0", [10.0, 10.0])
    b.v("VB", "vcc", "0", [10.0, 9.0])
    b.r("RB", "vcc", "b", 470e3)
    b.q("Q1", "vcc", "b", "0", **NPN)
    point = operating_point(b.circuit())
    assert not np.isfinite(point.v_v[1, point.circuit.node("b")])


def test_floating_source_loop_is_named() -> None:
    b = Bench(27.0)
    _good_stage(b)
    b.v("V1", "p", "q", 1.0)
    b.v("V2", "p", "q", 2.0)
    b.r("R1", "p", "0", 1e3)
    b.r("R2", "q", "0", 1e3)
    point = operating_point(b.circuit())
    assert "V2" in point.reason("p")
    assert "loop" in point.reason("p")
    assert np.isfinite(point.v_v[0, point.circuit.node("c")])


def test_inductor_across_a_supply_is_named() -> None:
    b = Bench(27.0)
    _good_stage(b)
    b.l("L1", "vcc", "y", 1e-3)
    b.l("L2", "y", "0", 1e-3)
    point = operating_point(b.circuit())
    assert "L2" in point.reason("y")


def test_inductors_in_parallel_and_in_a_ring_are_solved() -> None:
    """How the current divides is not determined; all voltages are."""
    b = Bench(27.0)
    _good_stage(b)
    b.r("RL", "vcc", "k", 1e3)
    b.l("L1", "k", "m", 1e-3)
    b.l("L2", "k", "m", 2e-3)
    b.l("L3", "m", "n", 1e-3)
    b.l("L4", "n", "k", 1e-3)
    b.r("RM", "m", "0", 1e3)
    point = operating_point(b.circuit())
    for net in ("k", "m", "n"):
        np.testing.assert_allclose(point.v_v[0, point.circuit.node(net)], 5.0, rtol=1e-12)


def test_floating_supply_between_two_nets() -> None:
    """A battery between collector and load: its current is an unknown of its own."""
    b = Bench(27.0)
    b.v("VCC", "vcc", "0", 10.0)
    b.r("R1", "vcc", "p", 1e3)
    b.v("VF", "p", "q", 3.0)
    b.r("R2", "q", "0", 1e3)
    point = operating_point(b.circuit())
    v = point.v_v[0]
    np.testing.assert_allclose(v[point.circuit.node("p")], 6.5, rtol=1e-12)
    np.testing.assert_allclose(v[point.circuit.node("q")], 3.5, rtol=1e-12)


def test_current_into_nothing_is_refused() -> None:
    """A current source into a net that only a capacitor leaves has no answer."""
    b = Bench(27.0)
    _good_stage(b)
    b.i("I1", "0", "x", 1e-3)
    b.c("CX", "x", "0", 1e-6)
    point = operating_point(b.circuit())
    assert np.isnan(point.v_v[0, point.circuit.node("x")])
    assert point.reason("x")
    assert np.isfinite(point.v_v[0, point.circuit.node("c")])


def test_current_against_a_blocking_diode_is_not_certified() -> None:
    """1 mA forced backwards through a diode without breakdown: no finite voltage carries it, and none is invented."""
    b = Bench(27.0)
    _good_stage(b)
    b.i("I1", "0", "x", 1e-3)
    b.d("D1", "0", "x", is_=1e-14)
    point = operating_point(b.circuit())
    assert np.isnan(point.v_v[0, point.circuit.node("x")])
    assert "did not converge" in point.reason("x")
    assert np.isfinite(point.v_v[0, point.circuit.node("c")])


@pytest.mark.parametrize("volt", [np.nan, np.inf])
def test_a_value_that_is_no_number_is_never_certified(volt: float) -> None:
    b = Bench(27.0)
    b.v("VCC", "vcc", "0", volt)
    b.r("RB", "vcc", "b", 470e3)
    b.q("Q1", "vcc", "b", "0", **NPN)
    with np.errstate(all="ignore"):
        point = operating_point(b.circuit())
    assert not np.isfinite(point.v_v[0, point.circuit.node("b")])


def test_empty_circuit() -> None:
    b = Bench(27.0)
    b.v("VCC", "vcc", "0", 10.0)
    point = operating_point(b.circuit())
    assert point.islands == ()
    assert point.v_v[0, 1] == 10.0
