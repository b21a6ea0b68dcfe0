"""Workshop values: turns on cores, tapers, coded inductances."""

from __future__ import annotations

import pytest

from checker.circuit.wound import coded_henry, core_of, tapered_ohm, wound_henry
from tests.circuit.make import assumed, kicad, kicad_part, resistor, value_of


@pytest.mark.parametrize(
    ("text", "henry"),
    [
        ("T50-6 18T", 4.0e-9 * 18**2),
        ("FT37-43 10T", 420e-9 * 100),
        ("21T T37-2", 4.0e-9 * 21**2),
        ("T37-2 21 turns", 4.0e-9 * 21**2),
        ("30 Turns", None),
        ("FT37-61 33T:3T", None),  # a transformer: two windings, no single inductance
        ("BN2402-43 5T", None),
        ("T50-6", None),
    ],
)
def test_turns(text: str, henry: float | None) -> None:
    found = wound_henry(text)
    assert found is None if henry is None else found is not None and found[0] == pytest.approx(henry)


def test_ten_turns_on_a_known_core() -> None:
    """Common table of iron-powder toroids (from memory): 100 turns on T50-6 are 40 uH."""
    core = core_of("T50-6")
    assert core is not None and core[1] * 1e-9 * 100**2 == pytest.approx(40e-6)


@pytest.mark.parametrize(
    ("text", "ohm"),
    [
        ("A500K", 500e3),
        ("50kA", 50e3),
        ("B100k", 100e3),
        ("( A-584 ) 100R", 100.0),
        ("Shift 10K", 10e3),
        ("PWM", None),
        ("10k 20k", None),
    ],
)
def test_tapers(text: str, ohm: float | None) -> None:
    assert tapered_ohm(text) == (None if ohm is None else pytest.approx(ohm))


def test_coded_inductance() -> None:
    assert coded_henry("472K") == (4.7e-3, 0.1)
    assert coded_henry("472") is None and coded_henry("10uH") is None


def test_they_reach_the_circuit() -> None:
    circuit = kicad(
        kicad_part("L1", "Device:L", "T50-6 18T", {"1": "a", "2": "b"}),
        kicad_part("RV1", "Device:R_POT", "A500K", {"1": "a", "2": "b", "3": "GND"}),
        resistor("R1", "a", "GND"),
    )
    assert value_of(circuit, "L1") == pytest.approx(4.0e-9 * 324)
    assert value_of(circuit, "RV1.a") == pytest.approx(250e3)
    assert assumed(circuit, "L1", "T50-6")
