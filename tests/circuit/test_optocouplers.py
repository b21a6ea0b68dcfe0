"""Optocouplers and crystals as what they hold, against hand solutions."""

from __future__ import annotations

import numpy as np
import pytest

from checker.circuit.types import Circuit
from checker.solve.operating import operating_point
from checker.solve.response import small_signal
from tests.circuit.make import assumed, capacitor, kicad, kicad_part, resistor

PADS = {"1": "a", "2": "GND", "3": "GND", "4": "c"}
NAMED = {"1": "a|A", "2": "GND|K", "4": "GND|E", "3": "c|C"}


def coupled(value: str, pins: dict[str, str], load: str = "100") -> Circuit:
    """5 V through 1 kohm into the diode, the collector at 5 V through a load."""
    return kicad(
        kicad_part("U1", f"Isolator:{value}", value, pins),
        resistor("R1", "+5V", "a", "1k"),
        resistor("R2", "+5V", "c", load),
    )


@pytest.mark.parametrize(
    ("value", "pins", "ratio"),
    [
        ("PC817", PADS, 1.0),
        ("LTV-817", NAMED, 1.0),
        ("4N25", {"1": "a", "2": "GND", "4": "GND", "5": "c", "6": "b"}, 0.5),
    ],
)
def test_transfer_ratio(value: str, pins: dict[str, str], ratio: float) -> None:
    circuit = coupled(value, pins)
    point = operating_point(circuit)
    diode_a = (5.0 - point.v_v[0, circuit.node("a")]) / 1e3
    collector_a = (5.0 - point.v_v[0, circuit.node("c")]) / 100.0
    assert 1.1 < point.v_v[0, circuit.node("a")] < 1.25
    # The transistor's Early voltage of 100 V adds up to 5 % at 4 to 5 V.
    assert collector_a == pytest.approx(ratio * diode_a, rel=0.06)
    assert assumed(circuit, "U1", "transfer ratio")
    assert point.islands[0].ok[0]


def test_it_saturates() -> None:
    circuit = coupled("PC817", PADS, "10k")
    assert operating_point(circuit).v_v[0, circuit.node("c")] < 0.3


def test_no_light_no_current() -> None:
    circuit = kicad(
        kicad_part("U1", "Isolator:PC817", "PC817", PADS),
        resistor("R1", "GND", "a", "1k"),
        resistor("R2", "+5V", "c", "1k"),
    )
    assert operating_point(circuit).v_v[0, circuit.node("c")] == pytest.approx(5.0, abs=1e-6)


@pytest.mark.parametrize(
    ("value", "pins"),
    [("XYZ99", PADS), ("PC817", {str(k): f"n{k}" for k in range(1, 9)}), ("PC817", {"1": "a", "2": "GND"})],
)
def test_what_is_not_known_stays_unknown(value: str, pins: dict[str, str]) -> None:
    circuit = kicad(
        kicad_part("U1", "Isolator:X", value, pins),
        *(resistor(f"R{k}", net, "+5V", "1k") for k, net in enumerate(dict.fromkeys(pins.values())) if net != "GND"),
    )
    assert "U1" in {unknown.ref for unknown in circuit.unknowns}
    assert not circuit.devices


def test_a_crystal_with_its_series_branch() -> None:
    """10 MHz: 25 ohm, 10 mH, 25.33 fF in series, 5 pF across; at series resonance the branch is its resistance."""
    motional = 1.0 / ((2e7 * np.pi) ** 2 * 10e-3)
    fields = {"Lm": "10mH", "Cm": f"{motional * 1e15:.9f}fF", "Rm": "25", "C0": "5pF"}
    circuit = kicad(
        kicad_part("Y1", "Device:Crystal", "10MHz", {"1": "a", "2": "GND"}, fields=fields),
        resistor("R1", "a", "GND", "1Meg"),
        capacitor("C1", "a", "GND", "10p"),
    )
    assert not circuit.unknowns
    z = complex(small_signal(operating_point(circuit), np.array([1e7])).impedance(circuit.node("a"))[0, 0])
    wanted = 1.0 / (1.0 / 25.0 + 2j * np.pi * 1e7 * 15e-12 + 1e-6)
    assert z == pytest.approx(wanted, rel=1e-5)
