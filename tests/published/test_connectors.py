"""Nominal impedances by the titles of IEC 61169's sectional specifications.

Titles of parts 8, 10, 15, 16, 24, 36, 54, 69 and 70 as catalogues print them; of part 2 its 75 ohm is from memory.
Families that exist in two impedances say so, and a number in the text outranks the family.
"""

from __future__ import annotations

import pytest

from checker.circuit.connectors import nominal
from tests.circuit.make import kicad_part

PINS = {"1": "a|In", "2": "GND|Ext"}


@pytest.mark.parametrize(
    ("symbol", "ohm", "number"),
    [
        ("Connector:BNC", 50.0, "61169-8"), ("x:SMB", 50.0, "61169-10"), ("x:SMA_Vertical", 50.0, "61169-15"),
        ("x:N_TYPE", 50.0, "61169-16"), ("x:F_TYPE", 75.0, "61169-24"), ("x:MCX", 50.0, "61169-36"),
        ("x:HD-BNC", 75.0, "61169-70"), ("x:4.3-10", 50.0, "61169-54"), ("x:SMP3", 50.0, "61169-69"),
        ("x:IEC_61169-2", 75.0, "61169-2"),
    ],
)  # fmt: skip
def test_families(symbol: str, ohm: float, number: str) -> None:
    found = nominal(kicad_part("J1", symbol, "", PINS))
    assert found.ohm == ohm
    assert f"IEC {number}" in found.working


@pytest.mark.parametrize(("symbol", "other"), [("x:BNC", "75 ohm"), ("x:N_TYPE", "75 ohm"), ("x:SMB", "75 ohm")])
def test_families_of_two_impedances_say_so(symbol: str, other: str) -> None:
    assert f"also exists in {other}" in nominal(kicad_part("J1", symbol, "", PINS)).working


@pytest.mark.parametrize("value", ["BNC 75", "BNC_75ohm", "BNC-75R"])
def test_a_stated_impedance_outranks_the_family(value: str) -> None:
    assert nominal(kicad_part("J1", "x:BNC", value, PINS)).ohm == 75.0
