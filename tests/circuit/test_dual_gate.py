"""Dual-gate MOSFETs: two transistors in series that together have the published figures of the part."""

from __future__ import annotations

from collections.abc import Mapping

import pytest

from checker.circuit.types import Circuit
from checker.solve.operating import operating_point, self_heated
from tests.circuit.make import assumed, kicad, kicad_part, resistor

NAMED = {"1": "GND|S", "2": "drain|D", "3": "g2|G2", "4": "g1|G1"}
PUBLISHED = {
    # IDSS at VG1S = 0 and VG2S = 4 V, forward transconductance at 10 mA; data sheets, from memory
    "BF998": (2e-3, 18e-3, 24e-3),
    "BF961": (4e-3, 20e-3, 15e-3),
    "40673": (5e-3, 35e-3, 12e-3),
}


def stage(value: str, *, gate_1: str = "GND", gate_2: str = "+4V", pins: Mapping[str, str] = NAMED) -> Circuit:
    """The part with its drain at 8 V by one ohm, its gates by ten megohms."""
    return kicad(
        kicad_part("Q1", "my:MOSFET_2G", value, pins, description="dual-gate MOSFET, N channel", footprint="x:SOT-143"),
        resistor("R1", "+8V", "drain", "1"),
        resistor("R2", gate_1, "g1", "10Meg"),
        resistor("R3", gate_2, "g2", "10Meg"),
    )


def drain_current(circuit: Circuit) -> float:
    v = dict(zip(circuit.nets, operating_point(circuit).v_v[0], strict=False))
    return float(8.0 - v["drain"])


def test_it_is_two_transistors_in_series() -> None:
    circuit = stage("BF998")
    assert circuit.devices["mosfet"].names == ("Q1.A", "Q1.B")
    nets = [tuple(circuit.nets[node] for node in row) for row in circuit.devices["mosfet"].nodes]
    assert nets == [("Q1.n", "g1", "GND", "GND"), ("drain", "g2", "Q1.n", "GND")]
    assert assumed(circuit, "Q1", "taken as two transistors")
    assert circuit.parts["Q1.A"].ratings == circuit.parts["Q1.B"].ratings
    assert circuit.devices["mosfet"].one_chip == ((0, 1),)


def test_the_order_of_pins_does_not_matter_where_they_are_named() -> None:
    turned = {"1": "g1|G1", "2": "g2|Gate2", "3": "GND|Source", "4": "drain|D"}
    assert (
        stage("BF998", pins=turned).devices["mosfet"].nodes.tolist() == stage("BF998").devices["mosfet"].nodes.tolist()
    )


def test_without_names_the_pads_of_the_card_count() -> None:
    bare = {pad: text.partition("|")[0] for pad, text in NAMED.items()}
    assert stage("BF998", pins=bare).devices["mosfet"].nodes.tolist() == stage("BF998").devices["mosfet"].nodes.tolist()


@pytest.mark.parametrize("value", PUBLISHED)
def test_zero_bias_drain_current_is_as_published(value: str) -> None:
    low, high, _ = PUBLISHED[value]
    assert low < drain_current(stage(value)) < high


@pytest.mark.parametrize("value", PUBLISHED)
def test_transconductance_at_ten_milliamperes_is_as_published(value: str) -> None:
    """Slope of the drain current over gate 1, found from whole solves at gate voltages around 10 mA."""
    gates = [f"{'-' if step < 0 else '+'}{abs(step) / 100:.2f}V" for step in range(-60, 62, 2)]
    amps = [drain_current(stage(value, gate_1=gate)) for gate in gates]
    above = next(k for k, amp in enumerate(amps) if amp > 10e-3)
    assert 0 < above < len(amps) - 1
    slope = (amps[above] - amps[above - 1]) / 0.02
    assert slope == pytest.approx(PUBLISHED[value][2], rel=0.15)


def test_gate_2_at_the_source_turns_it_down() -> None:
    assert drain_current(stage("BF998", gate_2="GND")) < 0.5 * drain_current(stage("BF998"))


@pytest.mark.parametrize("value", ["UNHEARD-OF", "2N7000"])
def test_a_number_without_two_gates_is_named(value: str) -> None:
    circuit = stage(value)
    assert "mosfet" not in circuit.devices
    assert [unknown.datum for unknown in circuit.unknowns] == ["a model of the dual-gate MOSFET Q1"]


def test_a_dual_with_two_drains_is_another_part() -> None:
    pins = {"1": "GND|S1", "2": "g1|G1", "3": "d2|D2", "4": "GND|S2", "5": "g2|G2", "6": "drain|D1"}
    circuit = stage("BSS138", pins=pins)
    assert circuit.devices["mosfet"].names == ("Q1.A", "Q1.B")
    assert [circuit.nets[row[0]] for row in circuit.devices["mosfet"].nodes] == ["drain", "d2"]


def test_both_halves_heat_the_one_chip() -> None:
    """TJ = TA + (PA + PB) RthJA for both; the figures by hand from the heated solution's own voltages and current."""
    hot = self_heated(operating_point(stage("BF998")))
    v = dict(zip(hot.circuit.nets, hot.v_v[0], strict=False))
    rise = (8.0 - v["drain"]) * v["drain"] * 500.0
    assert rise > 20.0
    assert (hot.device_k["mosfet"][0] - hot.circuit.temperature_k[0]).tolist() == pytest.approx([rise, rise], rel=1e-3)


def test_two_transistors_of_a_dual_are_heated_apart() -> None:
    pins = {"1": "GND|S1", "2": "g1|G1", "3": "d2|D2", "4": "GND|S2", "5": "g2|G2", "6": "drain|D1"}
    assert stage("BSS138", pins=pins).devices["mosfet"].one_chip == ()
