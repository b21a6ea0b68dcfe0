"""Values as people write them on schematics."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from checker.quantity.parse import parse_engineering
from checker.trouble import NotAQuantity

OHMS = [
    ("4k7", 4700.0),
    ("4K7", 4700.0),
    ("4R7", 4.7),
    ("0R22", 0.22),
    ("k91", 910.0),
    ("8,2k", 8200.0),
    ("1Meg", 1e6),
    ("1M", 1e6),
    ("4M7", 4.7e6),
    ("10", 10.0),
    ("10 k", 10e3),
    ("10 kohm", 10e3),
    ("10kΩ", 10e3),
    ("10k\u2126", 10e3),
    ("470R", 470.0),
    ("50 R", 50.0),
    ("5m", 5e-3),
    ("5m1", 5.1e-3),
    ("0", 0.0),
    ("0R", 0.0),
    ("1e3", 1e3),
    ("1k5 0.25W", 1500.0),
    ("100R/1W", 100.0),
    ("10k lin", 10e3),
    ("4k75", 4750.0),
    ("10k 0603", 10e3),
    ("10k 100ppm", 10e3),
]


@pytest.mark.parametrize(("text", "ohm"), OHMS)
def test_resistances(text: str, ohm: float) -> None:
    assert parse_engineering(text, "ohm").si == ohm


FARADS = [
    (".1uF", 100e-9),
    ("4µ7", 4.7e-6),
    ("4μ7", 4.7e-6),
    ("4u7", 4.7e-6),
    ("100n", 100e-9),
    ("100NF", 100e-9),
    ("p33", 0.33e-12),
    ("22 pF", 22e-12),
    ("1n5", 1.5e-9),
    ("1F", 1.0),
    ("4F7", 4.7),
    ("1e-7", 1e-7),
]


@pytest.mark.parametrize(("text", "farad"), FARADS)
def test_capacitances(text: str, farad: float) -> None:
    assert parse_engineering(text, "F").si == pytest.approx(farad, rel=1e-15)


@pytest.mark.parametrize(
    ("text", "unit", "si"),
    [
        ("4,7uH", "H", 4.7e-6),
        ("10mH", "H", 10e-3),
        ("1H", "H", 1.0),
        ("3V3", "V", 3.3),
        ("-12V", "V", -12.0),
        ("16MHz", "Hz", 16e6),
        ("32.768kHz", "Hz", 32768.0),
        ("1A5", "A", 1.5),
        ("500mA", "A", 0.5),
        ("0.25W", "W", 0.25),
    ],
)
def test_other_units(text: str, unit: str, si: float) -> None:
    assert parse_engineering(text, unit).si == pytest.approx(si, rel=1e-15)


@pytest.mark.parametrize(
    ("text", "unit", "si", "tolerance", "rating_v"),
    [
        ("18k1%", "ohm", 18e3, 0.01, None),
        ("18k10%", "ohm", 18e3, 0.10, None),
        ("10k(1%)", "ohm", 10e3, 0.01, None),
        ("100k 1%", "ohm", 100e3, 0.01, None),
        ("10k±5%", "ohm", 10e3, 0.05, None),
        ("10k +/-5%", "ohm", 10e3, 0.05, None),
        ("22k 0.5%", "ohm", 22e3, 0.005, None),
        ("1K/1%/0805", "ohm", 1e3, 0.01, None),
        ("4K7J", "ohm", 4700.0, 0.05, None),
        ("47KK", "ohm", 47e3, 0.10, None),
        ("4R7F", "ohm", 4.7, 0.01, None),
        ("100nK", "F", 100e-9, 0.10, None),
        ("22p J", "F", 22e-12, 0.05, None),
        ("10uF/25V", "F", 10e-6, None, 25.0),
        ("10uF 16v", "F", 10e-6, None, 16.0),
        ("100nF 50V X7R 10%", "F", 100e-9, 0.10, 50.0),
        ("10n 2kV", "F", 10e-9, None, 2000.0),
    ],
)
def test_tolerance_and_rating(text: str, unit: str, si: float, tolerance: float | None, rating_v: float | None) -> None:
    reading = parse_engineering(text, unit)
    assert reading.si == pytest.approx(si, rel=1e-15)
    assert reading.tolerance == tolerance
    assert reading.rating_v == rating_v
    assert reading.text == text


@pytest.mark.parametrize(
    ("text", "unit"),
    [
        ("1000g", "ohm"),
        ("5t", "ohm"),
        ("10g", "V"),
        *(
            (text, unit)
            for text in ("R", "C", "L", "TODO", "*", "NC", "DNP", "", " ", "?")
            for unit in ("ohm", "F", "H")
        ),
        ("* 0.5%", "ohm"),
        ("0*", "ohm"),
        ("10uF", "ohm"),
        ("10mF", "ohm"),
        ("10mH", "ohm"),
        ("5W", "ohm"),
        ("1/4W", "ohm"),
        ("10kHz", "ohm"),
        ("100k", "F"),
        ("10MF", "F"),
        ("100", "F"),
        ("0.1", "F"),
        ("100", "H"),
        ("4R7", "F"),
        ("2N3904", "F"),
        ("1N4148", "F"),
        ("2-10pF", "F"),
        ("5p-30p", "F"),
        ("2k..5k", "ohm"),
        ("2x10k", "ohm"),
        ("10k||4k7", "ohm"),
        ("1,500", "ohm"),
        ("0603 10k", "ohm"),
        ("10k/47k", "ohm"),
        ("4R7 or 10R", "ohm"),
        ("10u / 22uF", "F"),
        ("4k71%", "ohm"),
        ("-10k", "ohm"),
        ("1e400", "ohm"),
        ("10k" + " " * 300 + "x", "ohm"),
    ],
)
def test_refused(text: str, unit: str) -> None:
    with pytest.raises(NotAQuantity):
        parse_engineering(text, unit)


LIKELY = "0159.,eEmkKMGgTtuUnNpPfFRrLlVvAaHhz%Ω/ +-"
"""Signs that values are made of."""


@given(
    st.text(max_size=30) | st.text(LIKELY, max_size=9),
    st.sampled_from(["ohm", "F", "H", "V", "A", "Hz", "W", "S", "degC", "%"]),
)
def test_any_text_is_a_number_or_refused(text: str, unit: str) -> None:
    try:
        reading = parse_engineering(text, unit)
    except NotAQuantity:
        return
    assert abs(reading.si) < float("inf")
    assert reading.text == text


@given(st.integers(1, 999), st.integers(0, 9), st.sampled_from([("R", 0), ("k", 3), ("M", 6)]))
def test_letter_for_point_equals_point_and_prefix(whole: int, part: int, code: tuple[str, int]) -> None:
    letter, power = code
    written = parse_engineering(f"{whole}{letter}{part}", "ohm").si
    assert written == float(f"{whole}.{part}e{power}")
    assert parse_engineering(f"{whole}.{part}{letter}", "ohm").si == written
