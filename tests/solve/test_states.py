"""Circuits with one rest, and with more."""

from __future__ import annotations

import numpy as np
import pytest

from checker.solve.operating import OperatingPoint, operating_point
from checker.solve.poles import growing_poles
from checker.solve.states import searched
from tests.bench import Bench
from tests.reference.boards import differential_pair, feedback_pair


def _latch() -> Bench:
    """Two cross-coupled transistors without lead resistances, so that its nets are all its unknowns."""
    b = Bench(27.0)
    b.v("VCC", "vcc", "0", 5.0)
    for j, other in ((1, 2), (2, 1)):
        b.r(f"RC{j}", "vcc", f"c{j}", 1e3)
        b.r(f"RX{j}", f"c{j}", f"b{other}", 10e3)
        b.c(f"C{j}", f"c{j}", "0", 10e-12)
        b.q(f"Q{j}", f"c{j}", f"b{j}", "0", bf=200.0, vaf=80.0)
    return b


def _rest_of(balance: OperatingPoint) -> OperatingPoint:
    """From a start with Q1 on and Q2 off."""
    start = balance.solved.x.copy()
    rows = [balance.plan.unknown[balance.circuit.node(n)] for n in ("c1", "b1", "c2", "b2")]
    start[0, rows] = [0.1, 0.7, 4.5, 0.1]
    rest = operating_point(balance.circuit, near=balance, x0=start)
    v = rest.v_v[0]
    assert v[rest.circuit.node("c2")] - v[rest.circuit.node("c1")] > 3.0
    return rest


def _solved(b: Bench) -> OperatingPoint:
    return searched(operating_point(b.circuit()))


def test_latch_has_two_rests() -> None:
    (island,) = _solved(_latch()).islands
    assert island.states == 2
    assert island.exhaustive


def test_balance_of_a_latch_has_a_growing_pole_and_its_rests_have_none() -> None:
    """Both transistors equal: a current-balance test alone would pass this point."""
    balance = operating_point(_latch().circuit())
    v = balance.v_v[0]
    np.testing.assert_allclose(v[balance.circuit.node("c1")], v[balance.circuit.node("c2")], rtol=1e-6)
    assert balance.islands[0].kcl[0] < 1e-9
    assert len(growing_poles(balance)) == 1
    assert len(growing_poles(_rest_of(balance))) == 0


@pytest.mark.parametrize("make", [differential_pair, feedback_pair])
def test_amplifiers_have_one_rest(make: object) -> None:
    point = _solved(make().bench)  # type: ignore[operator]
    assert [island.states for island in point.islands] == [1]
    assert all(island.exhaustive for island in point.islands)
    assert len(growing_poles(point)) == 0


def test_sign_of_the_determinant_turns_at_the_balance() -> None:
    """The signs of det J over all solutions sum to one: the balance point of a latch has the other sign."""
    balance = operating_point(_latch().circuit())
    assert _rest_of(balance).jacobian(0)[1] == -balance.jacobian(0)[1] != 0.0
