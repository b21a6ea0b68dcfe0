"""How single figures and lines are laid out."""

from __future__ import annotations

import unicodedata

import pytest
from hypothesis import given
from hypothesis import strategies as st

from checker.record import Complex
from checker.record.units import as_written
from checker.report import layout
from checker.report.clean import cell, clean, name
from checker.report.layout import Page, cells, pad, table, wrap
from checker.report.quantities import complex_number, figure, number, polar, unit_of, words
from checker.report.quantities import given as chosen


def spaced(text: str) -> str:
    return text.replace("\u00a0", " ")


@pytest.mark.parametrize(
    ("value", "unit", "text"),
    [
        (None, "V", "—"),
        (0.0049, "A", "4.90 mA"),
        (-0.283, "dB", "-0.28 dB"),
        (27.92, "dB", "27.9 dB"),
        (-130.04, "dBm", "-130.0 dBm"),
        (5.2, "Vpp", "5.20 Vpp"),
        (0.0052, "Vpp", "5.20 mVpp"),
        (12.8, "%", "12.8 %"),
        (24.9, "", "24.9"),
        (7.746e6, "Hz", "7.75 MHz"),
    ],
)
def test_number(value: float | None, unit: str, text: str) -> None:
    assert spaced(number(value, unit)) == text


@pytest.mark.parametrize(
    ("value", "unit", "text"),
    [
        (4700.0, "ohm", "4.7 kΩ"),
        (1e-7, "F", "100 nF"),
        (27.0, "ohm", "27 Ω"),
        (14.0, "dB", "14 dB"),
        (25.0, "degC", "25 °C"),
        (100.0, "%", "100 %"),
        (0.0, "V", "0 V"),
        (20e6, "Hz", "20 MHz"),
        (1e30, "", "1.000e+30"),
    ],
)
def test_given_number_has_no_more_digits_than_it_needs(value: float, unit: str, text: str) -> None:
    assert spaced(chosen(value, unit)) == text


@pytest.mark.parametrize(
    ("value", "text"),
    [
        (33.4 + 1.9j, "33.4+j1.9 Ω"),
        (812 - 143j, "812-j143 Ω"),
        (6810 - 2950j, "6.81-j2.95 kΩ"),
        (0j, "0 Ω"),
        (-1e-3 + 0j, "-1.00+j0.00 mΩ"),
        (1e-9 + 50j, "0.0+j50.0 Ω"),
        (-1e-9 - 50j, "0.0-j50.0 Ω"),
        (1e20 + 1e3j, "100000000+j0 TΩ"),
    ],
)
def test_complex_number(value: complex, text: str) -> None:
    assert spaced(complex_number(Complex.of(value), "ohm")) == text


def test_polar() -> None:
    assert spaced(polar(Complex(re=24.1, im=-6.2))) == "24.9 ∠ -14°"
    assert spaced(polar(Complex(re=2.0, im=-1e-6))) == "2.00 ∠ 0°"
    assert spaced(polar(Complex(re=-2.0, im=0.0))) == "2.00 ∠ 180°"


@pytest.mark.parametrize(
    ("key", "label", "unit"),
    [
        ("input_impedance_ohm", "input impedance", "ohm"),
        ("voltage_gain", "voltage gain", ""),
        ("ic_a", "IC", "A"),
        ("shift_percent", "shift", "%"),
        ("c", "c", "degC"),
        ("swing_vpp", "swing", "Vpp"),
    ],
)
def test_keys_read_as_words(key: str, label: str, unit: str) -> None:
    assert (words(key), unit_of(key)) == (label, unit)


def test_figure_takes_the_unit_from_the_key() -> None:
    assert spaced(figure(4.9e-3, "ic_a")) == "4.90 mA"
    assert spaced(figure(Complex(re=3.0, im=4.0), "input_impedance_ohm")) == "3.00+j4.00 Ω"


def test_percent_leaves_the_house_as_percent() -> None:
    assert as_written(0.25, "%") == 25.0 and as_written(0.25, "V") == 0.25


@given(st.text())
def test_clean_is_always_printable(text: str) -> None:
    assert clean(text).isprintable()
    assert len(cell(text)) <= 24 * 10 and name(text)


def test_clean_spells_out_and_cuts() -> None:
    assert clean("a\u202eb\x1b") == "a<U+202E>b<U+001B>"
    assert clean("Ω µ é 网") == "Ω µ é 网"
    assert clean("x" * 30, 10) == "x" * 9 + "…"
    assert name("") == '""'


@given(st.text("ab cΩ网é ", max_size=60), st.integers(2, 20))
def test_wrap_keeps_the_words_and_the_width(text: str, columns: int) -> None:
    lines = wrap(text, columns)
    assert lines and all(cells(line) <= columns for line in lines)
    assert "".join(lines).replace(" ", "") == text.replace(" ", "")


def test_cells_of_wide_and_combining_characters() -> None:
    assert cells("网a\u0301") == 3
    assert pad("网", 4) == "网  " and pad("网", 4, right=True) == "  网"


def test_the_reports_own_characters_take_one_column() -> None:
    assert all(unicodedata.east_asian_width(c) not in "WF" and not unicodedata.combining(c) for c in layout._OURS)


def test_table_goes_on_below_itself_where_it_is_too_wide() -> None:
    page = Page(width=24, colour=False)
    lines = table(("id", "one", "two"), [("Q1", "1" * 8, "2" * 9)], "lrr", page)
    assert lines == ["  id       one", "  Q1  11111111", "  id        two", "  Q1  222222222"]


def test_last_column_wraps_under_itself() -> None:
    lines = table(("id", "why"), [("Q1", "one two three four five")], "ll", Page(width=24, colour=False))
    assert lines == ["  id  why", "  Q1  one two three four", "      five"]
