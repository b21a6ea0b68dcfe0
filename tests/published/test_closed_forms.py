"""Exact bias of one junction by the Lambert W function: published number, and values recomputed from the formula."""

from __future__ import annotations

import math

import numpy as np
import pytest
from scipy.special import wrightomega

from checker.constants import thermal_voltage_v
from checker.solve.response import small_signal
from tests.bench import Bench
from tests.published.book import VT_25C, assert_within, bias, celsius_of

K7 = (
    "Banwell & Jayakumar, Electronics Letters 36(4):291-292 (2000), the worked example in a mathematical library's "
    "manual of its Lambert W routine; seen, and recomputed"
)
K9 = "the formula of Banwell & Jayakumar with SI constants at 298.15 K; recomputed"
K13 = "form of Banwell, IEEE Trans. Circuits and Systems I 47(11):1621-1633 (2000), from memory; recomputed"
K18 = "gm = IC/VT, re = VT/IC, r_pi = beta re with SI constants at 25 degC; recomputed"


def _diode_loop(v: float, r: float, i_sat: float, n: float, celsius: float) -> tuple[float, float]:
    b = Bench(celsius)
    b.v("V", "s", "0", v)
    b.r("R", "s", "a", r)
    b.d("D1", "a", "0", is_=i_sat, n=n)
    point = bias(b.circuit())
    return float(point.diode["i_a"][0, 0]), float(point.diode["v_v"][0, 0])


def test_published_diode_and_resistor() -> None:
    """Eight digits in print; 1e-5 asked."""
    current, _ = _diode_loop(0.9, 249.3, 25e-15, 1.0, celsius_of(0.0257025))
    assert_within(current, 1.0848517e-3, 1e-5, K7)


@pytest.mark.parametrize(("v", "current"), [(0.6, 0.22106e-3), (0.7, 1.28754e-3), (0.8, 2.84044e-3), (0.9, 4.55332e-3)])
def test_published_diode_at_another_resistance(v: float, current: float) -> None:
    """Same device with 51.3 ohm; five digits, so half a unit of the last is 2.3e-5."""
    assert_within(_diode_loop(v, 51.3, 25e-15, 1.0, celsius_of(0.0257025))[0], current, 3e-5, K7)


@pytest.mark.parametrize(
    ("v", "r", "i_sat", "n", "current", "vd"),
    [
        (5.0, 1e3, 1e-14, 1.0, 4.311702e-3, 0.688298),
        (3.3, 330.0, 1e-14, 1.0, 7.867425e-3, 0.703750),
        (5.0, 4.7e3, 2.52e-9, 1.752, 0.940949e-3, 0.577539),
        (12.0, 10e3, 1e-12, 1.0, 1.146406e-3, 12.0 - 11.46406),
    ],
)
def test_diode_loops(v: float, r: float, i_sat: float, n: float, current: float, vd: float) -> None:
    got_i, got_v = _diode_loop(v, r, i_sat, n, 25.0)
    assert_within(got_i, current, 1e-5, K9)
    assert_within(got_v, vd, 2e-5, K9)


@pytest.mark.parametrize("exponent", range(-18, -8))
def test_loop_current_equals_lambert_over_nine_decades(exponent: int) -> None:
    """Solver against W through its logarithm (the plain exponent overflows): 1e-9, the certificate's own size."""
    i_sat, r, v = 10.0**exponent, 1e3, 12.0
    argument = math.log(i_sat * r / VT_25C) + (v + i_sat * r) / VT_25C
    exact = VT_25C / r * float(np.real(wrightomega(argument))) - i_sat
    assert_within(_diode_loop(v, r, i_sat, 1.0, 25.0)[0], exact, 1e-9, K9)


@pytest.mark.parametrize(
    ("vth", "rth", "re", "beta", "ic", "vbe"),
    [
        (5.0, 1e5 / 3, 3e3, 100.0, 1.291184e-3, 0.657319),
        (1.803279, 1803.28, 1e3, 200.0, 1.133422e-3, 0.653971),
        (2.0, 3545.45, 1.5e3, 140.0, 0.880522e-3, 0.647484),
        (4.8, 8.8e3, 1e3, 100.0, 3.747998e-3, 0.684698),
        (12.0, 240e3, 0.0, 50.0, 2.359831e-3, 0.672812),
    ],
    ids=["K13", "K14", "K15", "K16", "K17"],
)
def test_transistor_behind_a_divider(vth: float, rth: float, re: float, beta: float, ic: float, vbe: float) -> None:
    """IS 1e-14, collector held in the active region; IB (Rth + (beta + 1) RE) + VBE = Vth solved by W."""
    b = Bench(25.0)
    b.v("VTH", "th", "0", vth)
    b.v("VCC", "vcc", "0", 15.0)
    b.r("RTH", "th", "b", rth)
    if re:
        b.r("RE", "e", "0", re)
    b.q("Q1", "vcc", "b", "e" if re else "0", bf=beta)
    point = bias(b.circuit())
    assert_within(float(point.bipolar["ic_a"][0, 0]), ic, 1e-5, K13)
    assert_within(float(point.bipolar["vbe_v"][0, 0]), vbe, 1e-5, K13)
    req = rth + (beta + 1.0) * re
    # W of an exponential too large for a double, through its logarithm. The formula leaves out the -1 of the
    # diode equation and the reverse current, 1e-11 of IC.
    ib = VT_25C / req * float(np.real(wrightomega(math.log(1e-14 * req / (beta * VT_25C)) + vth / VT_25C)))
    assert_within(float(point.bipolar["ib_a"][0, 0]), ib, 1e-8, K13)


def test_small_signal_of_one_milliampere() -> None:
    """38.922 mS, 25.693 ohm, 2569.3 ohm: five digits."""
    b = Bench(25.0)
    b.v("VC", "c", "0", 5.0)
    b.i("IE", "e", "0", 1.01e-3)
    b.q("Q1", "c", "0", "e", bf=100.0)
    point = bias(b.circuit())
    assert_within(float(point.bipolar["ic_a"][0, 0]), 1e-3, 1e-9)
    y = small_signal(point, np.array([1e3])).device_y["bipolar"][0, 0, 0]
    assert_within(float(y[0, 1].real), 38.922e-3, 2e-5, K18)
    assert_within(float(1 / y[1, 1].real), 2569.3, 2e-5, K18)
    assert_within(thermal_voltage_v(298.15) / 1e-3, 25.693, 2e-5, K18)


def test_differential_pair_follows_the_hyperbolic_tangent() -> None:
    """IC difference over the tail = tanh(vd/2VT) at 25 degC: .1922 .4621 .8235 .9600 (closed form; recomputed)."""
    given = [10e-3, VT_25C, 60e-3, 100e-3]
    b = Bench(25.0)
    b.v("VP", "vp", "0", 10.0)
    b.v("VD", "b1", "0", given)
    b.i("IT", "e", "0", 1e-3)
    b.q("Q1", "vp", "b1", "e", bf=1e9)
    b.q("Q2", "vp", "0", "e", bf=1e9)
    ic = bias(b.circuit()).bipolar["ic_a"]
    np.testing.assert_allclose((ic[:, 0] - ic[:, 1]) / 1e-3, [0.1922, 0.4621, 0.8235, 0.9600], atol=5e-5)
