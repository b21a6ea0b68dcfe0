"""The echo of parsed values."""

from __future__ import annotations

from checker.report.values import render_values
from tests.circuit.make import kicad, kicad_part, resistor


def test_one_line_a_part() -> None:
    circuit = kicad(
        kicad_part("R1", "Device:R", "4k7 1%", {"1": "a", "2": "GND"}, footprint="R:R_0805"),
        kicad_part("C1", "Device:C", "10uF/25V", {"1": "a", "2": "GND"}),
        kicad_part("C2", "Device:C", "100n X7R", {"1": "a", "2": "GND"}),
        kicad_part("C3", "Device:C_Polarized", "10u", {"1": "a", "2": "GND"}),
        kicad_part("C4", "Device:C", "10n", {"1": "a", "2": "GND"}, fields={"Dielectric": "NP0"}),
        kicad_part("R2", "Device:R", "TODO", {"1": "a", "2": "GND"}),
        resistor("R3", "a", "GND"),
    )
    text = render_values((circuit.parts[ref] for ref in ("C1", "C2", "C3", "C4", "R1", "R2")), width=120, colour=False)
    assert "10uF/25V = 10 µF, ±20 % assumed, 25 V (voltage by the value)" in text
    assert "4k7 1% = 4.7 kΩ, ±1 %, 125 mW and 150 V (power by the footprint, common practice, no source" in text
    assert "no value could be read" in text
    assert "X7R by the value" in text and "electrolytic by the symbol" in text and "NP0 by the field Dielectric" in text
