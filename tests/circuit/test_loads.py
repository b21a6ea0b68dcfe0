"""Loads that state their ohms are resistors; without ohms they stay unknown, by name."""

from __future__ import annotations

import pytest

from tests.circuit.make import kicad, kicad_part, resistor, value_of


@pytest.mark.parametrize(
    ("ref", "symbol", "value", "ohm"),
    [
        ("LS1", "Device:Speaker", "8R", 8.0), ("LS1", "Device:Speaker", "Visaton 50 ohm", 50.0),
        ("BZ1", "Device:Buzzer", "42R", 42.0), ("M1", "Motor:Motor_DC", "12 ohm", 12.0),
        ("MK1", "Device:Microphone", "600R", 600.0), ("LA1", "Device:Lamp", "24R", 24.0),
        ("TH1", "Device:Thermistor_NTC", "10k", 10e3),
    ],
)  # fmt: skip
def test_stated_ohms(ref: str, symbol: str, value: str, ohm: float) -> None:
    circuit = kicad(kicad_part(ref, symbol, value, {"1": "a", "2": "GND"}), resistor("R1", "a", "GND", "1k"))
    assert value_of(circuit, f"{ref}.r") == pytest.approx(ohm)
    assert not circuit.unknowns


@pytest.mark.parametrize(
    ("ref", "symbol"), [("LS1", "Device:Speaker"), ("M1", "Motor:Motor_DC"), ("MK1", "Device:Microphone")]
)
def test_without_ohms_they_are_named(ref: str, symbol: str) -> None:
    circuit = kicad(kicad_part(ref, symbol, "", {"1": "a", "2": "GND"}), resistor("R1", "a", "GND", "1k"))
    assert {unknown.ref for unknown in circuit.unknowns} == {ref}
