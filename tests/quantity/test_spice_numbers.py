"""Numbers of SPICE-style text, and numbers with a unit of intent files."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from checker.quantity.parse import parse_engineering, parse_spice_number, parse_with_unit
from checker.trouble import NotAQuantity

NUMBERS = [
    ("68kOhm", 68e3),
    ("10uF", 10e-6),
    ("10µF", 10e-6),
    ("4.7x", 4.7e6),
    ("1M", 1e-3),
    ("1m", 1e-3),
    ("1MEG", 1e6),
    ("3.3Meg", 3.3e6),
    ("1megohm", 1e6),
    ("2mil", 50.8e-6),
    ("4k7", 4700.0),
    ("4r7", 4.7),
    ("4,7uH", 4.7e-6),
    ("5V", 5.0),
    ("50Vdc", 50.0),
    ("60Hz", 60.0),
    ("1F", 1e-15),
    ("1T", 1e12),
    ("1000g", 1e12),
    ("2a", 2e-18),
    ("0.65E-05", 6.5e-6),
    ("1.0D-3", 1e-3),
    (".1u", 1e-7),
    ("-770.6088u", -770.6088e-6),
    ("+5", 5.0),
    ("10V/us", 10.0),
    ("0.025R", 0.025),
]


@pytest.mark.parametrize(("text", "value"), NUMBERS)
def test_suffixes(text: str, value: float) -> None:
    assert parse_spice_number(text) == pytest.approx(value, rel=1e-15)


@pytest.mark.parametrize(
    "text", ["", "abc", "inf", "nan", "-inf", "1e400", "1e999999", "2N3904", "1 k", "{x}", "k51", "r1", "1M5"]
)
def test_no_number(text: str) -> None:
    with pytest.raises(NotAQuantity):
        parse_spice_number(text)


def test_the_letter_m_differs_between_schematic_and_spice_text() -> None:
    assert parse_engineering("1M", "ohm").si == 1e6
    assert parse_spice_number("1M") == 1e-3


@given(st.floats(allow_nan=False, allow_infinity=False))
def test_floats_come_back_as_they_were(value: float) -> None:
    assert parse_spice_number(repr(value)) == value


@pytest.mark.parametrize(
    ("text", "unit", "value"),
    [
        ("3 MHz", "Hz", 3e6),
        ("-10 degC", "degC", -10.0),
        ("25 °C", "degC", 25.0),
        ("50 ohm", "ohm", 50.0),
        ("50 Ω", "ohm", 50.0),
        ("10 kohm", "ohm", 10e3),
        ("12 V", "V", 12.0),
        ("12", "V", 12.0),
        ("5 %", "%", 0.05),
        ("-30 dBm", "dBm", -30.0),
        ("1 mVpp", "Vpp", 1e-3),
        ("2 Vpk", "Vpk", 2.0),
        ("18", "dB", 18.0),
        ("1e-3 A", "A", 1e-3),
        ("4.7 µF", "F", 4.7e-6),
    ],
)
def test_with_unit(text: str, unit: str, value: float) -> None:
    assert parse_with_unit(text, unit) == value


@pytest.mark.parametrize(
    ("text", "unit"),
    [
        ("2 A", "V"),
        ("1 mVpp", "V"),
        ("2 mV", "Vpk"),
        ("1 k", "ohm"),
        ("3 mHz", "Hz"),
        ("3 kdB", "dB"),
        ("3 dB", "dBm"),
        ("ohm", "ohm"),
        ("", "V"),
        ("1e400", "V"),
        ("12 V dc", "V"),
        ("5 m%", "%"),
    ],
)
def test_with_the_wrong_unit(text: str, unit: str) -> None:
    with pytest.raises(NotAQuantity):
        parse_with_unit(text, unit)
