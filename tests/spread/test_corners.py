"""The corner of a stage's current is the worst of all ends of its resistors; influences against closed forms."""

from __future__ import annotations

from itertools import product

import numpy as np
import pytest
from scipy.optimize import brentq

from checker.setup import Setup
from tests.measure.nodal import IDEAL, VT
from tests.whole import intent_text, mirrored, set_up_from

STAGE = "V1 VCC 0 12\nR1 VCC B 47k\nR2 B 0 10k\nRC VCC C 4.7k\nRE E 0 1k\nQ1 C B E QI\n"
NO_BAND = intent_text(band=None)
NAMES = ("R1", "R2", "RE")


def collector_a(r1: float, r2: float, re: float, beta: float = 100.0) -> float:
    """IC of the ideal stage by bracketing."""
    vth, rth = 12.0 * r2 / (r1 + r2), r1 * r2 / (r1 + r2)
    return brentq(
        lambda ic: vth - ic / beta * rth - VT * np.log(ic / 1e-14) - ic * (1.0 + 1.0 / beta) * re,
        1e-9,
        12.0 / re,
        rtol=1e-13,
    )


@pytest.fixture(scope="module")
def setup() -> Setup:
    """The ideal stage."""
    return set_up_from(STAGE + IDEAL, NO_BAND)


def test_slopes(setup: Setup) -> None:
    """d ln IC / d ln R by central differences of the closed form."""
    values = {"R1": 47e3, "R2": 10e3, "RE": 1e3}
    for name in NAMES:
        up, down = ({**values, name: values[name] * factor} for factor in (1.0 + 1e-4, 1.0 - 1e-4))
        wanted = (np.log(collector_a(*up.values())) - np.log(collector_a(*down.values()))) / 2e-4
        found = setup.influence.slope[setup.influence.resistors.index(name), 0]
        assert found == pytest.approx(wanted, rel=1e-5)
    assert setup.influence.slope[setup.influence.resistors.index("RC"), 0] == pytest.approx(0.0, abs=1e-6)


def test_the_strongest_come_first(setup: Setup) -> None:
    order = setup.influence.order("Q1")
    column = np.abs([setup.influence.slope[setup.influence.resistors.index(name), 0] for name in order])
    assert set(order) == set(NAMES)
    assert (np.diff(column) <= 0.0).all()


def test_the_current_corners_are_the_extremes_of_all_ends(setup: Setup) -> None:
    """All 16 ends of three resistors of 5 % and of the gain (half, twice), solved by hand."""
    ends = [
        collector_a(47e3 * a, 10e3 * b, 1e3 * c, beta)
        for a, b, c in product((0.95, 1.05), repeat=3)
        for beta in (50.0, 200.0)
    ]
    ic = setup.board(setup.scenarios).ask("ic_a", "Q1").values[:, 0]
    by_name = {scenario.name: float(value) for scenario, value in zip(setup.scenarios, ic, strict=True)}
    assert by_name["current of Q1 highest"] == pytest.approx(max(ends), rel=1e-6)
    assert by_name["current of Q1 lowest"] == pytest.approx(min(ends), rel=1e-6)
    assert by_name["current gain lowest"] == pytest.approx(collector_a(47e3, 10e3, 1e3, 50.0), rel=1e-6)


def test_pnp_corners_are_those_of_npn() -> None:
    text = mirrored(STAGE.replace("QI", "QN")).replace("QP", "QI")
    turned = set_up_from(text + IDEAL.replace("NPN", "PNP"), NO_BAND)
    npn = set_up_from(STAGE + IDEAL, NO_BAND)
    assert [s.changes for s in turned.scenarios] == [s.changes for s in npn.scenarios]
    np.testing.assert_allclose(turned.influence.slope, npn.influence.slope, rtol=1e-6, atol=1e-9)


def test_a_written_tolerance_is_kept() -> None:
    """1 % on one resistor alone: its factor in the corner is 0.99 or 1.01, the others' 0.95 or 1.05."""
    part = '[[part]]\nref = "RE"\ntolerance = "1 %"\n'
    corner = set_up_from(STAGE + IDEAL, NO_BAND + part).scenarios[-2]
    factors = {change.part: change.value for change in corner.changes if change.property == "factor"}
    assert factors == pytest.approx({"R1": 0.95, "R2": 1.05, "RE": 0.99})


def test_a_supply_with_a_tolerance_has_corners_and_a_state() -> None:
    """10 % on the 12 V supply: the divider's open voltage moves with it; without the supply nothing flows."""
    said = '[rails]\nVCC = { volts = "12 V", tolerance = "10 %", may_be_absent = true }\n'
    setup = set_up_from(STAGE.replace("V1 VCC 0 12\n", "") + IDEAL, NO_BAND + said)
    ic = setup.board(setup.scenarios).ask("ic_a", "Q1").values[:, 0]
    by_name = {scenario.name: float(value) for scenario, value in zip(setup.scenarios, ic, strict=True)}
    for name, factor in (("supplies lowest", 0.9), ("supplies highest", 1.1)):
        vth, rth = factor * 12.0 * 10.0 / 57.0, 470.0 / 57.0 * 1e3
        wanted = brentq(lambda i, v=vth, r=rth: v - i / 100.0 * r - VT * np.log(i / 1e-14) - i * 1.01e3, 1e-9, 0.01)
        assert by_name[name] == pytest.approx(wanted, rel=1e-6)
    assert abs(by_name["without VCC"]) < 1e-12
