"""Return loss, mismatch loss, and the impedance a common-base stage shows to a connector."""

from __future__ import annotations

import numpy as np
import pytest

from checker.measure.match import mismatch_loss_db, return_loss_db
from checker.solve.response import small_signal
from tests.bench import Bench
from tests.published.book import VT_25C, assert_within, bias

DEFINITION = "return loss = 10 log(incident/reflected power), positive: ECSS-S-ST-00-01 glossary; recomputed"
POZAR = "Pozar, Microwave Engineering, 2nd ed. (1998), Ex 2.3; recomputed"
TABLE = "published tables of return loss against standing-wave ratio, 1 to 30 dB; seen, and recomputed"
HALF_LAST_DIGIT_DB = 5e-4
"""The expected decibels have three decimals."""


@pytest.mark.parametrize(
    ("reference", "ohm", "db"),
    [
        (50.0, 25.0, 9.542), (50.0, 100.0, 9.542), (50.0, 37.5, 16.902), (50.0, 75.0, 13.979), (50.0, 10.0, 3.522),
        (75.0, 50.0, 13.979), (75.0, 37.5, 9.542), (75.0, 26.0, 6.283), (75.0, 25.0, 6.021),
    ],
)  # fmt: skip
def test_return_loss_of_resistors(reference: float, ohm: float, db: float) -> None:
    """R15, R16."""
    got = return_loss_db(np.array([complex(ohm)]), reference)
    np.testing.assert_allclose(got, db, atol=HALF_LAST_DIGIT_DB, err_msg=DEFINITION)


@pytest.mark.parametrize(
    ("db", "ratio", "loss"),
    [
        (6.0, 3.010, 1.256), (10.0, 1.925, 0.4576), (14.0, 1.499, 0.1764),
        (20.0, 1.222, 0.0436), (26.0, 1.106, 0.0109), (30.0, 1.065, 0.0043),
    ],
)  # fmt: skip
def test_standing_wave_ratio_and_mismatch_loss(db: float, ratio: float, loss: float) -> None:
    """R17: a resistor of `ratio` times the reference. The ratio has four digits, which at 30 dB is .07 dB.

    One vendor's glossary has 20 log of the ratio for return loss; that is another quantity.
    """
    z = np.array([50.0 * ratio + 0j])
    slope_db = 20.0 / np.log(10.0) * 2.0 / (ratio**2 - 1.0) * 5e-4
    np.testing.assert_allclose(return_loss_db(z, 50.0), db, atol=slope_db, err_msg=TABLE)
    exact = 50.0 * (1 + 10 ** (-db / 20)) / (1 - 10 ** (-db / 20))
    got = mismatch_loss_db(np.array([complex(exact)]), 50.0)
    np.testing.assert_allclose(got, loss, atol=HALF_LAST_DIGIT_DB if loss > 1 else 5e-5, err_msg=TABLE)


def test_return_loss_of_a_complex_load() -> None:
    """R18: 80 - j40 ohm on 50 ohm: .3676, ratio 2.163, 8.692 dB."""
    got = return_loss_db(np.array([80.0 - 40.0j]), 50.0)
    np.testing.assert_allclose(got, 8.692, atol=HALF_LAST_DIGIT_DB, err_msg=POZAR)
    np.testing.assert_allclose(10.0 ** (-got / 20.0), 0.3676, atol=5e-5, err_msg=POZAR)


def _emitter_impedance(ie: float) -> np.ndarray:
    """Driving-point impedance at the emitter of a common-base stage at 25 degC; no RE, current gain without end."""
    b = Bench(25.0)
    b.v("VCC", "c", "0", 5.0)
    b.i("IE", "e", "0", ie)
    b.q("Q1", "c", "0", "e", bf=1e9)
    r = small_signal(bias(b.circuit()), np.array([1e6]))
    return r.impedance(r.circuit.node("e"))[0]


@pytest.mark.parametrize(("ohm", "ma"), [(50.0, 0.5139), (75.0, 0.3426)])
def test_current_that_matches_a_line(ohm: float, ma: float) -> None:
    """R19: re = VT/IE = 50 or 75 ohm at 25 degC; closed form, recomputed; four digits."""
    assert_within(float(_emitter_impedance(ma * 1e-3)[0].real), ohm, 2e-4)
    assert_within(VT_25C / ohm * 1e3, ma, 2e-4)


@pytest.mark.parametrize(
    ("ma", "on_50", "on_75"),
    [(0.25, 9.23, 16.1), (0.5, 37.3, 14.6), (1.0, 9.87, 6.20), (2.0, 4.57, 3.01), (5.0, 1.79, 1.19)],
)
def test_common_base_on_a_connector(ma: float, on_50: float, on_75: float) -> None:
    """R20: closed form, recomputed; three digits, so half a unit of the last."""
    z = _emitter_impedance(ma * 1e-3)
    for expected, reference in ((on_50, 50.0), (on_75, 75.0)):
        digit = 0.05 if expected >= 10 else 0.005
        np.testing.assert_allclose(return_loss_db(z, reference), expected, atol=1.01 * digit, err_msg=DEFINITION)


def test_series_capacitor_in_a_line() -> None:
    """L14: reactance of 15.9 and 1.59 ohm in series with 50 ohm: 16.07 and 35.96 dB; recomputed, .1 dB."""
    got = return_loss_db(np.array([50.0 - 15.9j, 50.0 - 1.59j]), 50.0)
    np.testing.assert_allclose(got, [16.07, 35.96], atol=0.1)


def test_feed_choke_across_a_line() -> None:
    """R24: 1 and 10 uH across 50 ohm at 10 MHz: 8.64 and 28.0 dB; recomputed, half the last digit."""
    z = np.array([1.0 / (1 / 50.0 + 1 / (2j * np.pi * 10e6 * h)) for h in (1e-6, 10e-6)])
    got = return_loss_db(z, 50.0)
    np.testing.assert_allclose(got[0], 8.64, atol=0.005)
    np.testing.assert_allclose(got[1], 28.0, atol=0.05)
