"""Analytic derivatives and charges of the diode against an independent form of its equations at 30 digits."""

from __future__ import annotations

import mpmath as mp
import numpy as np
import pytest

from checker.devices import diode
from tests.devices.evaluated import DIODE_SETS, diode_params
from tests.reference.physics import Diode, depletion_charge

VOLTS = (-105.0, -100.0, -6.2, -5.6, -5.0, -1.0, -1e-6, 1e-6, 0.1, 0.35, 0.5, 0.69, 0.75, 0.9, 1.05)
CASES = [(which, v) for which in DIODE_SETS for v in VOLTS if not (which == "breakdown" and v < -7.0)]


@pytest.mark.parametrize("t_c", [27.0, 85.0])
@pytest.mark.parametrize(("which", "volts"), CASES)
def test_current_and_conductance(which: str, volts: float, t_c: float) -> None:
    reference = Diode(DIODE_SETS[which], t_c)
    i, g = diode.current(diode_params(DIODE_SETS[which], 1, t_c), np.array([[volts]]))
    floor = 4e-16 * float(reference.exact["is"] + reference.exact["isr"])
    np.testing.assert_allclose(i, float(reference.current(mp.mpf(volts))), rtol=3e-12, atol=floor)
    np.testing.assert_allclose(g, float(mp.diff(reference.current, mp.mpf(volts))), rtol=3e-12, atol=100 * floor)


@pytest.mark.parametrize(("which", "volts"), [c for c in CASES if c[1] > -100.0])
def test_charge(which: str, volts: float) -> None:
    p = diode_params(DIODE_SETS[which], 1)
    v = np.array([[[volts, 0.0, volts]]])
    c = diode.capacitance(p, np.array([1.0]), v)[0, 0]
    reference = Diode(DIODE_SETS[which])
    wanted = float(reference.linear(mp.mpf(volts)).c)
    np.testing.assert_allclose(c[1:, 1:], wanted * np.array([[1.0, -1.0], [-1.0, 1.0]]), rtol=1e-11, atol=1e-26)
    np.testing.assert_array_equal(c[0], 0.0)


def test_breakdown_carries_ibv_at_bv() -> None:
    """IBV flows at -BV by definition of the two parameters (SPICE-style; Antognetti and Massobrio, from memory)."""
    p = diode_params({"bv": 12.0, "ibv": 5e-3}, 1)
    i, _ = diode.current(p, np.array([[-12.0]]))
    np.testing.assert_allclose(i, -5e-3, rtol=1e-9)


def test_high_injection_halves_the_slope() -> None:
    """Far above IKF the current goes as exp(V/2nVT): one decade takes twice the voltage."""
    p = diode_params({"is_": 1e-14, "ikf": 1e-6}, 2)
    i, g = diode.current(p, np.array([[0.9], [0.9 + 1e-3]]))
    np.testing.assert_allclose(g[0] / i[0], 1.0 / (2.0 * p["vt"][0]), rtol=1e-3)


def test_depletion_charge_of_the_reference_is_continuous() -> None:
    """The reference integral itself: value and slope meet at FC VJ."""
    args = (mp.mpf("2e-12"), mp.mpf("0.7"), mp.mpf("0.4"), mp.mpf("0.5"))
    below, above = (depletion_charge(mp.mpf("0.35") + d, *args) for d in (mp.mpf("-1e-20"), mp.mpf("1e-20")))
    assert abs(above - below) < mp.mpf("1e-31")
