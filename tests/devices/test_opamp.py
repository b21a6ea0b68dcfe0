"""The operational amplifier: derivatives against differences, sums of currents, limits of its output."""

from __future__ import annotations

import numpy as np
import pytest

from checker.devices import opamp

P = {
    name: np.full((1, 1), value)
    for name, value in {"gain": 1e5, "gbw": 3e6, "rout": 75.0, "high": 1.5, "low": 1.0}.items()
}
POLARITY = np.ones(1)
CASES = {
    "active": [1.0, 1.0 - 2e-5, 2.0, 12.0, -12.0, 2.0001],
    "near the upper limit": [1.0, 1.0 - 9e-5, 9.0, 12.0, -12.0, 9.001],
    "at the upper limit": [2.0, 1.0, 10.0, 12.0, -12.0, 10.4],
    "at the lower limit": [-2.0, 1.0, -10.9, 12.0, -12.0, -10.95],
    "supplies too low": [0.0, 1e-6, 0.1, 1.0, 0.0, 0.2],
}


def terminals(case: str) -> np.ndarray:
    return np.array(CASES[case])[None, None, :]


@pytest.mark.parametrize("case", CASES)
def test_conductances_are_slopes_of_the_currents(case: str) -> None:
    """Central differences of the currents at the linearisation's own point."""
    v = terminals(case)
    g = opamp.evaluate(P, POLARITY, v, opamp.junctions(v, POLARITY), 0.0).g[0, 0]
    for pin in range(opamp.TERMINALS):
        step = 1e-9 if pin < 2 else 1e-8
        sides = []
        for sign in (1.0, -1.0):
            moved = v.copy()
            moved[..., pin] += sign * step
            sides.append(opamp.evaluate(P, POLARITY, moved, opamp.junctions(moved, POLARITY), 0.0).i[0, 0])
        slope = (sides[0] - sides[1]) / (2.0 * step)
        # What rounding of the currents themselves leaves of a difference over so small a step.
        rounding = 1e-15 * np.abs(opamp.evaluate(P, POLARITY, v, opamp.junctions(v, POLARITY), 0.0).i).max() / step
        np.testing.assert_allclose(g[:, pin], slope, rtol=1e-4, atol=20.0 * rounding)


@pytest.mark.parametrize("case", CASES)
def test_no_current_is_lost(case: str) -> None:
    v = terminals(case)
    e = opamp.evaluate(P, POLARITY, v, opamp.junctions(v, POLARITY), 0.0)
    assert abs(e.i.sum()) < 1e-12 * np.abs(e.i).max() + 1e-15
    np.testing.assert_allclose(e.g.sum(axis=-2), 0.0, atol=1e-9 * np.abs(e.g).max())
    assert not e.i[..., :2].any()


def test_linearised_elsewhere_it_is_the_tangent() -> None:
    v, at = terminals("active"), np.array([[[1e-5]]])
    e = opamp.evaluate(P, POLARITY, v, at, 0.0)
    moved = v.copy()
    moved[..., opamp.PLUS] = moved[..., opamp.MINUS] + 1e-5
    own = opamp.evaluate(P, POLARITY, moved, at, 0.0)
    rise = (v - moved)[0, 0]
    assert e.i[0, 0, opamp.INSIDE] == pytest.approx(own.i[0, 0, opamp.INSIDE] + own.g[0, 0, opamp.INSIDE] @ rise)


@pytest.mark.parametrize(("case", "limit"), [("at the upper limit", 10.5), ("at the lower limit", -11.0)])
def test_the_output_stops_short_of_its_supply(case: str, limit: float) -> None:
    """12 V less 1.5 V, and -12 V plus 1.0 V."""
    v = terminals(case)
    swing = opamp.figures(P, POLARITY, v)["swing"][0, 0]
    f, *_ = opamp._output(P, v, v[..., 0] - v[..., 1])
    assert abs(swing) > 0.99
    assert f[0, 0] == pytest.approx(limit, abs=1e-3)


def test_steps_are_held_but_small_ones_pass() -> None:
    old, far, near = np.zeros((1, 1, 1)), np.full((1, 1, 1), 0.5), np.full((1, 1, 1), 1e-6)
    held = opamp.limit(P, far, old)
    assert np.arcsinh(1e5 * held[0, 0, 0]) == pytest.approx(opamp.MOST_STEP)
    np.testing.assert_array_equal(opamp.limit(P, near, old), near)


def test_the_pole_lies_at_gbw_over_gain() -> None:
    c = opamp.capacitance(P, POLARITY, terminals("active"))[0, 0]
    assert opamp.INNER_S / (2 * np.pi * c[5, 5]) == pytest.approx(3e6 / 1e5)
    assert np.count_nonzero(c) == 1


def test_dissipation_is_that_of_the_load_current() -> None:
    """1 mA from +12 V at 2 V out: 10 mW; into -12 V the drop counts from below."""
    v = terminals("active")
    v[..., opamp.INSIDE] = opamp._output(P, v, v[..., 0] - v[..., 1])[0] - 1e-3
    assert opamp.figures(P, POLARITY, v)["power_w"][0, 0] == pytest.approx(10e-3)
    v[..., opamp.INSIDE] += 2e-3
    assert opamp.figures(P, POLARITY, v)["power_w"][0, 0] == pytest.approx(14e-3)
