"""Published tables: IEC 60063 (preferred numbers), IEC 60062 (marking codes), EIA capacitor code.

Values are as remembered from the standards, hence the mark "from memory" beside each.
"""

from __future__ import annotations

import pytest

from checker.quantity.codes import LOPSIDED_LETTERS, PICOFARAD_LETTERS, TOLERANCE_LETTERS
from checker.quantity.parse import parse_engineering
from checker.quantity.series import mantissas, nearest

E24 = [
    1.0,
    1.1,
    1.2,
    1.3,
    1.5,
    1.6,
    1.8,
    2.0,
    2.2,
    2.4,
    2.7,
    3.0,
    3.3,
    3.6,
    3.9,
    4.3,
    4.7,
    5.1,
    5.6,
    6.2,
    6.8,
    7.5,
]
E24 += [8.2, 9.1]
"""IEC 60063, series E24, from memory."""


def test_e24_and_the_series_within_it() -> None:
    assert list(mantissas("E24")) == E24
    assert list(mantissas("E12")) == E24[::2]
    assert list(mantissas("E6")) == E24[::4]
    assert list(mantissas("E3")) == E24[::8]


def test_e24_departs_from_the_powers_at_eight_places() -> None:
    # IEC 60063, from memory: 2.7 3.0 3.3 3.6 3.9 4.3 4.7 8.2.
    departures = [
        value for step, value in enumerate(mantissas("E24")) if round(10 ** (step / 24), 1) != value
    ]
    assert departures == [2.7, 3.0, 3.3, 3.6, 3.9, 4.3, 4.7, 8.2]


@pytest.mark.parametrize("count", [48, 96, 192])
def test_fine_series_follow_the_powers_but_for_one_value(count: int) -> None:
    # IEC 60063, from memory: 9.20 in E192, where the power rounds to 9.19.
    values = mantissas(f"E{count}")
    departures = [value for step, value in enumerate(values) if round(10 ** (step / count), 2) != value]
    assert len(values) == count
    assert departures == ([9.20] if count == 192 else [])


def test_e96_by_sample() -> None:
    # IEC 60063, from memory: the fourth decade of E96 around 4.7 is 4.53 4.64 4.75 4.87 4.99.
    assert [value for value in mantissas("E96") if 4.5 < value < 5.0] == [4.53, 4.64, 4.75, 4.87, 4.99]


def test_nearest_values() -> None:
    # Derived from the tables: 21.57 k lies 2.0 % under 22 k (E24) and 0.3 % over 21.5 k (E96).
    assert nearest(21.57e3, "E24") == 22e3
    assert nearest(21.57e3, "E96") == 21.5e3


@pytest.mark.parametrize(
    ("code", "unit", "si"),
    [
        ("R47", "ohm", 0.47),
        ("4R7", "ohm", 4.7),
        ("470R", "ohm", 470.0),
        ("4K7", "ohm", 4700.0),
        ("47K", "ohm", 47e3),
        ("47K3", "ohm", 47.3e3),
        ("470K", "ohm", 470e3),
        ("4M7", "ohm", 4.7e6),
        ("4L7", "ohm", 4.7e-3),
        ("p33", "F", 0.33e-12),
        ("3p3", "F", 3.3e-12),
        ("33p", "F", 33e-12),
        ("33n", "F", 33e-9),
        ("330n", "F", 330e-9),
        ("4u7", "F", 4.7e-6),
        ("4µ7", "F", 4.7e-6),
    ],
)
def test_letter_for_point_codes(code: str, unit: str, si: float) -> None:
    # IEC 60062, clause on letter and digit code, from memory. Exact but for binary rounding.
    assert parse_engineering(code, unit).si == pytest.approx(si, rel=1e-15)


def test_tolerance_letters() -> None:
    # IEC 60062, from memory (E, L, P, W with less certainty).
    percent = {"E": 0.005, "L": 0.01, "P": 0.02, "W": 0.05, "B": 0.1, "C": 0.25, "D": 0.5, "F": 1.0, "G": 2.0}
    percent |= {"H": 3.0, "J": 5.0, "K": 10.0, "M": 20.0, "N": 30.0}
    assert {letter: 100 * value for letter, value in TOLERANCE_LETTERS.items()} == pytest.approx(
        percent, rel=1e-12
    )
    assert LOPSIDED_LETTERS == {"Q": (-0.1, 0.3), "T": (-0.1, 0.5), "S": (-0.2, 0.5), "Z": (-0.2, 0.8)}


@pytest.mark.parametrize(
    ("letter", "percent"), [("J", 5.0), ("F", 1.0), ("G", 2.0), ("K", 10.0), ("M", 20.0)]
)
def test_tolerance_letters_behind_a_resistance(letter: str, percent: float) -> None:
    # IEC 60062, from memory.
    reading = parse_engineering(f"4K7{letter}", "ohm")
    assert (reading.si, reading.tolerance) == (4700.0, percent / 100)


@pytest.mark.parametrize(("letter", "picofarad"), [("B", 0.1), ("C", 0.25), ("D", 0.5), ("G", 2.0)])
def test_absolute_tolerance_under_ten_picofarad(letter: str, picofarad: float) -> None:
    # IEC 60062, from memory: below 10 pF the letter is in picofarad.
    assert PICOFARAD_LETTERS[letter] == pytest.approx(picofarad * 1e-12, rel=1e-12)
    assert parse_engineering(f"4p7{letter}", "F").tolerance == pytest.approx(picofarad / 4.7, rel=1e-12)
    assert parse_engineering(f"47p{letter}", "F").tolerance == TOLERANCE_LETTERS[letter]


@pytest.mark.parametrize(
    ("code", "farad"), [("104", 100e-9), ("223", 22e-9), ("474", 470e-9), ("101", 100e-12)]
)
def test_three_digit_capacitor_code(code: str, farad: float) -> None:
    # EIA three-digit code, from memory: two digits and the count of zeros, in picofarad.
    assert parse_engineering(code, "F").si == pytest.approx(farad, rel=1e-15)
