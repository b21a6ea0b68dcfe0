"""Temperature laws: against physics that a bench would show, and against closed forms."""

from __future__ import annotations

import numpy as np
import pytest

from checker.constants import thermal_voltage_v
from checker.devices import bipolar
from checker.devices.junction import band_gap_ev, capacitance_at, potential_at, saturation_ratio
from tests.devices.evaluated import bipolar_params, diode_params


def _vbe_at(ic: float, t_c: float, **given: float) -> float:
    """Base-emitter voltage that carries `ic` with the collector at 5 V (bisection on the program's equations)."""
    p = bipolar_params(given, 1, t_c)
    low, high = 0.0, 1.2
    for _ in range(200):
        mid = 0.5 * (low + high)
        k = bipolar.core(p, np.array([[mid]]), np.array([[mid - 5.0]]))
        low, high = (mid, high) if float(k.ic[0, 0]) < ic else (low, mid)
    return 0.5 * (low + high)


def test_vbe_falls_two_millivolts_a_kelvin() -> None:
    """About -2 mV/K at constant current: common practice, no source."""
    slope = (_vbe_at(1e-3, 37.0) - _vbe_at(1e-3, 17.0)) / 20.0
    assert -2.2e-3 < slope < -1.5e-3


@pytest.mark.parametrize("ic", [1e-6, 1e-3])
def test_vbe_slope_is_the_closed_form(ic: float) -> None:
    """dVBE/dT = (VBE - EG - XTI VT)/T, from differentiating IC = IS(T) exp(VBE/VT) at constant IC."""
    t = 300.15
    slope = (_vbe_at(ic, 27.01) - _vbe_at(ic, 26.99)) / 0.02
    expected = (_vbe_at(ic, 27.0) - 1.11 - 3.0 * thermal_voltage_v(t)) / t
    # Central difference over 20 mK of a curve bent by XTI k/(q T): 1e-6 is far above its error.
    np.testing.assert_allclose(slope, expected, rtol=1e-6)


def test_difference_of_two_vbe_is_proportional_to_absolute_temperature() -> None:
    """Two equal devices at a current ratio of 8 differ by VT ln 8: the base of every bandgap reference."""
    for t_c in (-40.0, 27.0, 125.0):
        difference = _vbe_at(8e-5, t_c) - _vbe_at(1e-5, t_c)
        # With the collector at 5 V, IC = IS exp(VBE/VT) + IS/BR: the reverse current counts at 125 degC.
        leak = float(bipolar_params({}, 1, t_c)["is"][0, 0])
        expected = thermal_voltage_v(t_c + 273.15) * np.log((8e-5 - leak) / (1e-5 - leak))
        np.testing.assert_allclose(difference, expected, rtol=1e-9)


def test_saturation_current_grows_as_the_stated_law() -> None:
    """IS(T) = IS (T/Tnom)^XTI exp[EG/VT (T/Tnom - 1)], here worked by hand for 127 degC from 27 degC.

    T/Tnom = 400.15/300.15 = 1.3331667; VT = 34.4823 mV; exponent = 1.11/0.0344823 * 0.3331667 = 10.7248.
    """
    got = saturation_ratio(np.array(1.11), np.array(3.0), np.array(400.15), np.array(300.15))
    np.testing.assert_allclose(got, 1.3331667**3 * np.exp(10.72476), rtol=1e-4)


def test_reference_temperature_changes_nothing() -> None:
    p = bipolar_params({"ise": 1e-13, "isc": 1e-12, "xtb": 1.5, "cje": 1e-11, "cjc": 2e-12}, 1, 27.0)
    for key, value in (("is", 1e-14), ("bf", 100.0), ("ise", 1e-13), ("isc", 1e-12), ("cje", 1e-11), ("vje", 0.75)):
        np.testing.assert_allclose(p[key], value, rtol=1e-14)


def test_gain_follows_xtb() -> None:
    cold, hot = (bipolar_params({"bf": 200.0, "xtb": 1.5}, 1, t) for t in (27.0, 127.0))
    np.testing.assert_allclose(hot["bf"] / cold["bf"], (400.15 / 300.15) ** 1.5, rtol=1e-14)


def test_emitter_leakage_keeps_ise_over_is_to_one_over_ne() -> None:
    """ISE(T) (T/Tnom)^XTB / ISE = (IS(T)/IS)^(1/NE)."""
    hot = bipolar_params({"ise": 1e-13, "ne": 1.8, "xtb": 1.5}, 1, 127.0)
    beta = (400.15 / 300.15) ** 1.5
    np.testing.assert_allclose(hot["ise"] * beta / 1e-13, (hot["is"] / 1e-14) ** (1 / 1.8), rtol=1e-13)


@pytest.mark.parametrize(("kelvin", "gap"), [(0.0, 1.16), (300.0, 1.115128), (400.0, 1.085517)])
def test_band_gap(kelvin: float, gap: float) -> None:
    """EG(T) = 1.16 - 7.02e-4 T^2/(T + 1108) (constants of Antognetti and Massobrio, ch. 1, from memory).

    By hand: 300 K: 7.02e-4 * 90000/1408 = 0.0448722; 400 K: 7.02e-4 * 160000/1508 = 0.0744828.
    """
    np.testing.assert_allclose(band_gap_ev(np.array(kelvin)), gap, atol=1e-6)


def test_junction_potential_and_capacitance_move_together() -> None:
    """Hotter: the potential falls by some 2 mV/K and the capacitance at zero volts rises a little."""
    t, t0 = np.array(358.15), np.array(300.15)
    vj = potential_at(np.array(0.75), t, t0)
    assert -0.15 < float(vj) - 0.75 < -0.08
    cj = capacitance_at(np.array(1e-12), np.array(0.33), np.array(0.75), vj, t, t0)
    np.testing.assert_allclose(cj, 1e-12 * (1 + 0.33 * (4e-4 * 58.0 + 1 - float(vj) / 0.75)), rtol=1e-14)
    assert float(cj) > 1e-12


def test_silicon_diode_leakage_doubles_about_every_ten_kelvin() -> None:
    """Doubling per 10 K is common practice, no source; the law with XTI 3 gives 1.6 to 4 times near room heat."""
    ratio = diode_params({"n": 1.0}, 1, 37.0)["is"] / diode_params({"n": 1.0}, 1, 27.0)["is"]
    assert 1.6 < float(ratio[0, 0]) < 4.5
