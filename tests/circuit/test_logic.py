"""Outputs of logic and of controllers: low or open at rest, both levels as states."""

from __future__ import annotations

import pytest

from checker.circuit.changes import state_scenarios, with_changes
from checker.circuit.drives import DRIVEN_OHM, OPEN_OHM
from checker.circuit.families import is_controller, is_two_level
from checker.circuit.types import Circuit, Scenario
from checker.intent.types import Intent, StateIntent
from checker.netlist.types import Part
from checker.solve.operating import operating_point
from tests.circuit.make import SAID, assumed, kicad, kicad_part, resistor, value_of


def chip(value: str, kind: str, *, supply: str = "+5V", symbol: str = "x:y") -> Part:
    pins = {"1": "drive|Q|" + kind, "7": "GND|GND|power_in", "14": f"{supply}|VCC|power_in"}
    return kicad_part("U1", symbol, value, pins)


def switch(part: Part, intent: Intent | None = None) -> Circuit:
    """A low-side switch on the +5V rail, driven through a resistor."""
    transistor = kicad_part("Q1", "Device:Q_NPN_BCE", "BC547", {"1": "base|B", "2": "out|C", "3": "GND|E"})
    return kicad(
        part, resistor("R1", "drive", "base", "4k7"), resistor("R2", "+5V", "out", "1k"), transistor, intent=intent
    )


def currents(circuit: Circuit) -> dict[str, float]:
    """Collector current of Q1 [A] by scenario."""
    scenarios = (Scenario(name="nominal"), *state_scenarios(circuit, Intent()))
    point = operating_point(with_changes(circuit, scenarios))
    return {one.name: float(point.bipolar["ic_a"][row, 0]) for row, one in enumerate(scenarios)}


@pytest.mark.parametrize("value", ["74HC595", "SN74LVC1G00DCKR", "CD4011BE", "NE555", "PCA9634", "LM393", "TC4420"])
def test_two_level_parts(value: str) -> None:
    assert is_two_level(kicad_part("U1", "x:y", value, {}))


@pytest.mark.parametrize(
    "value", ["ATMEGA328-A", "STM32F401RCTx", "ESP32-WROOM-32", "Arduino_Nano", "RP2040", "PIC16F877A"]
)
def test_controllers(value: str) -> None:
    assert is_controller(kicad_part("U1", "x:y", value, {}))


@pytest.mark.parametrize("value", ["TL072", "LM386", "LM317", "NE5532", "7805", "LM7812", "SA612", "74"])
def test_analogue_parts_are_neither(value: str) -> None:
    part = kicad_part("U1", "x:y", value, {})
    assert not is_two_level(part) and not is_controller(part)


def test_an_output_is_low_at_rest_and_high_in_a_state() -> None:
    circuit = switch(chip("74HC04", "output"))
    assert circuit.unknowns == ()
    assert value_of(circuit, "drive:U1.1.r") == DRIVEN_OHM
    assert [state.name for state in circuit.states] == ["logic low", "logic high"]
    amps = currents(circuit)
    assert abs(amps["nominal"]) < 1e-9 and abs(amps["logic low"]) < 1e-9
    assert amps["logic high"] == pytest.approx(5e-3, rel=0.05)  # 5 V over 1 k less the saturated transistor
    assert assumed(circuit, "U1", "taken as low")


def test_a_port_pin_is_open_at_rest() -> None:
    circuit = switch(chip("ATmega328P", "bidirectional"))
    assert value_of(circuit, "drive:U1.1.r") == OPEN_OHM
    assert currents(circuit)["logic high"] == pytest.approx(5e-3, rel=0.05)
    assert assumed(circuit, "U1", "as after reset")


def test_an_open_collector_is_low_or_open() -> None:
    circuit = switch(chip("LM393", "output"))
    assert [(change.part, change.value) for change in circuit.states[1].changes] == [("drive:U1.1.r", OPEN_OHM)]
    assert abs(currents(circuit)["logic high"]) < 1e-9


def test_what_the_intent_says_of_a_pin_stands_alone() -> None:
    state = StateIntent(name="on", origin=SAID, pins={"U1.1": 3.0})
    circuit = switch(chip("74HC04", "output"), Intent(states=(state,)))
    assert circuit.states == ()


def test_without_a_known_supply_the_output_stays_unknown() -> None:
    circuit = switch(chip("74HC04", "output", supply="VLOGIC"))
    assert circuit.states == () and [unknown.ref for unknown in circuit.unknowns] == ["U1"]


def test_one_net_has_one_driver() -> None:
    other = kicad_part("U2", "x:y", "ATmega328P", {"5": "drive|PB0|bidirectional", "1": "+5V|VCC|power_in"})
    circuit = switch(chip("74HC04", "output"))
    both = kicad(
        other,
        chip("74HC04", "output"),
        resistor("R1", "drive", "base"),
        resistor("R2", "base", "GND"),
        resistor("R3", "+5V", "base"),
    )
    assert [name for name in circuit.voltages.names if name.startswith("drive:")] == ["drive:U1.1"]
    assert [name for name in both.voltages.names if name.startswith("drive:")] == ["drive:U1.1"]
    assert both.unknowns == ()
