"""Adjustable regulators against the formulas of their data sheets (figures from memory)."""

from __future__ import annotations

import pytest

from checker.circuit.types import Circuit
from tests.circuit.make import assumed, kicad, kicad_part, resistor

LINEAR = {"1": "adj|ADJ", "2": "out|VO", "3": "+12V|VI"}


def rail(circuit: Circuit, net: str) -> float:
    (found,) = [each.volts for each in circuit.rails if each.net == net]
    return found


def around(value: str, pins: dict[str, str], *more: tuple[str, str, str, str]) -> Circuit:
    parts = [resistor(name, a, b, ohm) for name, a, b, ohm in more]
    load = resistor("RL", "out", "GND", "1k")
    return kicad(kicad_part("U1", "Regulator:X", value, pins), *parts, load, resistor("R9", "+12V", "GND", "1k"))


@pytest.mark.parametrize(
    ("value", "upper", "lower", "volts"),
    [
        ("LM317T", "240", "720", 1.25 * 4.0 + 50e-6 * 720.0),
        ("LM317LZ", "1k", "3k3", 1.25 * 4.3 + 50e-6 * 3300.0),
        ("LM350", "120", "1k2", 1.25 * 11.0 + 50e-6 * 1200.0),
        ("LM1117-ADJ", "120", "200", 1.25 * (1.0 + 200.0 / 120.0) + 60e-6 * 200.0),
        ("LM337", "120", "360", -(1.25 * 4.0 + 65e-6 * 360.0)),
    ],
)
def test_floating_regulators(value: str, upper: str, lower: str, volts: float) -> None:
    """VREF (1 + R2/R1) + IADJ R2, R1 from OUT to ADJ."""
    circuit = around(value, LINEAR, ("R1", "out", "adj", upper), ("R2", "adj", "GND", lower))
    assert rail(circuit, "out") == pytest.approx(volts, rel=1e-9)
    assert assumed(circuit, "out taken as", value)
    assert not circuit.unknowns


@pytest.mark.parametrize(
    ("value", "volts"), [("MIC29302WU", 1.24 * 4.0), ("LP2951", 1.235 * 4.0), ("LM2596S-ADJ", 1.23 * 4.0)]
)
def test_regulators_with_a_feedback_pin(value: str, volts: float) -> None:
    """VREF (1 + R1/R2) at the far end of the upper resistor, be a coil between it and the part or not."""
    pins = {"1": "+12V|IN", "2": "sw|OUT", "3": "fb|FB", "4": "GND|GND"}
    circuit = around(value, pins, ("R1", "out", "fb", "30k"), ("R2", "fb", "GND", "10k"))
    assert rail(circuit, "out") == pytest.approx(volts, rel=1e-9)


@pytest.mark.parametrize(
    ("resistors", "pin", "volts"),
    [
        ((("R1", "out", "ref", "10k"), ("R2", "ref", "GND", "10k")), "ref", 4.99),
        ((), "out", 2.495),
    ],
)
def test_shunt_reference(resistors: tuple[tuple[str, str, str, str], ...], pin: str, volts: float) -> None:
    pins = {"1": f"{pin}|REF", "2": "GND|A", "3": "out|K"}
    circuit = around("TL431", pins, ("R3", "+12V", "out", "1k"), *resistors)
    assert rail(circuit, "out") == pytest.approx(volts, rel=1e-9)


@pytest.mark.parametrize(
    ("value", "resistors"),
    [
        ("LM317T", (("R1", "out", "adj", "240"), ("R2", "adj", "x", "720"), ("R4", "x", "GND", "10k"))),
        ("LM317T", (("R1", "out", "adj", "240"),)),
        ("XC9999", (("R1", "out", "adj", "240"), ("R2", "adj", "GND", "720"))),
        ("LM1117-3.3", (("R1", "out", "adj", "240"), ("R2", "adj", "GND", "720"))),
    ],
)
def test_no_rail_is_made_up(value: str, resistors: tuple[tuple[str, str, str, str], ...]) -> None:
    """A chain instead of one resistor, a missing one, a type that is not known, a fixed one wired up."""
    circuit = around(value, LINEAR, *resistors)
    assert "out" not in {each.net for each in circuit.rails}
