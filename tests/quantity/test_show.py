"""Printing quantities, and the standard values around one."""

from __future__ import annotations

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from checker.quantity.parse import parse_with_unit
from checker.quantity.series import SERIES, mantissas, nearest, neighbours
from checker.quantity.show import show, show_value


@pytest.mark.parametrize(
    ("si", "unit", "text"),
    [
        (4700.0, "ohm", "4.70 kΩ"),
        (1.03e-3, "A", "1.03 mA"),
        (-12.0, "V", "-12.0 V"),
        (16e6, "Hz", "16.0 MHz"),
        (0.0, "V", "0 V"),
        (999.6, "ohm", "1.00 kΩ"),
        (999.4, "ohm", "999 Ω"),
        (-3.0103, "dB", "-3.01 dB"),
        (25.0, "degC", "25.0 °C"),
        (0.05, "%", "5.00 %"),
        (2.2e-6, "F", "2.20 µF"),
        (math.nan, "V", "—"),
        (math.inf, "ohm", "∞ Ω"),
        (-math.inf, "dB", "-∞ dB"),
        (3.4, "", "3.40"),
        (1234.5, "degC", "1234 °C"),
    ],
)
def test_show(si: float, unit: str, text: str) -> None:
    assert show(si, unit) == text


def test_more_digits() -> None:
    assert show(4712.345, "ohm", 5) == "4.7123 kΩ"


@pytest.mark.parametrize(
    ("si", "unit", "text"),
    [(4700.0, "ohm", "4.7 kΩ"), (100e-9, "F", "100 nF"), (49.9e3, "ohm", "49.9 kΩ"), (1e6, "ohm", "1 MΩ")],
)
def test_show_value(si: float, unit: str, text: str) -> None:
    assert show_value(si, unit) == text


@given(st.floats(1e-14, 1e14), st.sampled_from(["ohm", "V", "A"]))
def test_what_is_shown_reads_back_to_its_digits(si: float, unit: str) -> None:
    # Four digits of six are printed at least; the last may be off by half.
    assert parse_with_unit(show(si, unit, 6), unit) == pytest.approx(si, rel=5.1e-6)


@given(st.floats(1e-12, 1e9), st.sampled_from(SERIES), st.integers(0, 30), st.integers(0, 30))
def test_neighbours_are_standard_ascending_and_around(si: float, series: str, below: int, above: int) -> None:
    found = neighbours(si, series, below, above)
    assert len(found) == below + above
    assert list(found) == sorted(set(found))
    assert all(value < si for value in found[:below])
    assert all(value > si for value in found[below:])
    standard = {f"{value:.2f}" for value in mantissas(series)}
    assert all(f"{float(f'{value:e}'.partition('e')[0]):.2f}" in standard for value in found)


def test_a_standard_value_is_not_its_own_neighbour() -> None:
    assert neighbours(4700.0, "E12", 2, 2) == (3300.0, 3900.0, 5600.0, 6800.0)
    assert neighbours(100e-9, "E6", 1, 1) == (68e-9, 150e-9)


@given(st.sampled_from(SERIES), st.integers(-12, 9), st.data())
def test_a_standard_value_is_its_own_nearest(series: str, decade: int, data: st.DataObject) -> None:
    value = float(f"{data.draw(st.sampled_from(mantissas(series)))}e{decade}")
    assert nearest(value, series) == value


@pytest.mark.parametrize("si", [0.0, -1.0, math.nan, math.inf])
def test_no_neighbours(si: float) -> None:
    with pytest.raises(ValueError, match="positive"):
        neighbours(si, "E24", 1, 1)


def test_no_such_series() -> None:
    with pytest.raises(ValueError, match="E25"):
        nearest(1.0, "E25")
