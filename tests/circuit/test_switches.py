"""Switches and relays at rest, their other position as a state; loads that state their resistance."""

from __future__ import annotations

import numpy as np
import pytest

from checker.circuit.changes import state_scenarios, with_changes
from checker.circuit.loads import stated_ohm
from checker.circuit.switches import CLOSED_OHM, OPEN_OHM
from checker.circuit.types import Circuit, Scenario
from checker.intent.types import Intent
from checker.netlist.types import Part
from checker.solve.operating import operating_point
from tests.circuit.make import assumed, ends_of, kicad, kicad_part, resistor, value_of

SPDT = {"1": "+5V|A|passive", "2": "mid|B|passive", "3": "GND|C|passive"}


def volts_at(circuit: Circuit, net: str) -> dict[str, float]:
    """Voltage [V] of a net by scenario."""
    scenarios = (Scenario(name="nominal"), *state_scenarios(circuit, Intent()))
    point = operating_point(with_changes(circuit, scenarios))
    column = point.v_v[:, circuit.node(net)]
    return {one.name: float(v) for one, v in zip(scenarios, column, strict=True)}


def test_a_change_over_switch_rests_at_pin_1() -> None:
    circuit = kicad(kicad_part("SW1", "Switch:SW_SPDT", "x", SPDT), resistor("R1", "mid", "GND"))
    volts = volts_at(circuit, "mid")
    assert volts["nominal"] == pytest.approx(5.0, rel=1e-3)
    assert volts["SW1 switched over"] == pytest.approx(0.0, abs=1e-3)
    assert circuit.unknowns == () and assumed(circuit, "SW1", "position of pin 1")


def test_an_open_switch_is_open_and_its_closing_a_state() -> None:
    part = kicad_part("SW1", "Switch:SW_SPST", "x", {"1": "mid|A|passive", "2": "GND|B|passive"})
    volts = volts_at(kicad(part, resistor("R1", "+5V", "mid")), "mid")
    assert volts["nominal"] == pytest.approx(5.0)
    assert volts["SW1 switched over"] == pytest.approx(5.0 * CLOSED_OHM / 1e3, rel=1e-3)


def test_a_switch_in_a_supply_is_closed() -> None:
    part = kicad_part("SW1", "Switch:SW_SPST", "x", {"1": "+9V|A|passive", "2": "fed|B|passive"})
    circuit = kicad(part, resistor("R1", "fed", "GND"), resistor("R2", "+9V", "GND"))
    assert ends_of(circuit, "SW1") == ("+9V", "fed") and circuit.states == ()


def test_a_keyboard_is_no_list_of_states() -> None:
    keys = [
        kicad_part(f"SW{n}", "Switch:SW_SPST", "x", {"1": f"k{n}|A|passive", "2": "GND|B|passive"}) for n in range(9)
    ]
    circuit = kicad(*keys, *(resistor(f"R{n}", "+5V", f"k{n}") for n in range(9)))
    assert circuit.states == () and circuit.unknowns == ()


def relay(pins: dict[str, str], symbol: str = "Relay:G5V-2", value: str = "G5V-2") -> Part:
    return kicad_part("K1", symbol, value, pins)


def test_a_relay_by_its_type() -> None:
    """G5V-2: coil 1 and 16; contact set 4, 6 (rest), 8 (from memory of its data sheet)."""
    circuit = kicad(
        relay({"1": "+12V", "16": "low", "4": "com", "6": "nc", "8": "no"}),
        resistor("R1", "low", "GND"),
        resistor("R2", "com", "GND"),
        resistor("R3", "+12V", "nc"),
        resistor("R4", "+12V", "no"),
    )
    assert value_of(circuit, "K1.coil") == pytest.approx(12.0**2 / 0.4)  # 0.4 W at 12 V, the assumption it states
    assert (value_of(circuit, "K1.0.rest"), value_of(circuit, "K1.0.work")) == (CLOSED_OHM, OPEN_OHM)
    assert ends_of(circuit, "K1.0.rest") == ("com", "nc")
    assert [state.name for state in circuit.states] == ["K1 pulled in"]


def test_pin_names_of_the_standard() -> None:
    """EN 50005: A1 and A2 the coil; 11 common, 12 break, 14 make."""
    pins = {"a": "+5V|A1", "b": "low|A2", "c": "com|11", "d": "nc|12", "e": "no|14"}
    loads = [resistor(f"R{net}", net, "GND") for net in ("low", "com", "nc", "no")]
    circuit = kicad(relay(pins, "my:relay", "FINDER"), *loads)
    assert ends_of(circuit, "K1.0.rest") == ("com", "nc") and ends_of(circuit, "K1.0.work") == ("com", "no")


def test_coils_by_their_diodes_and_contacts_unknown() -> None:
    pins = {"1": "low", "2": "+12V", "3": "c1", "4": "c2", "5": "c3"}
    diode = kicad_part("D1", "Device:D", "1N4148", {"1": "+12V|K", "2": "low|A"})
    loads = [resistor(f"R{net}", net, "GND") for net in ("low", "c1", "c2", "c3")]
    circuit = kicad(relay(pins, "my:relay", "any"), diode, *loads)
    assert ends_of(circuit, "K1.coil") in (("+12V", "low"), ("low", "+12V"))
    assert {unknown.pin for unknown in circuit.unknowns} == {"3", "4", "5"}


@pytest.mark.parametrize(
    ("text", "ohm"),
    [
        ("8R", 8.0),
        ("32 ohm", 32.0),
        ("CMT-8504 (magnetic transducer 8.5mm, 15R coil, 4kHz)", 15.0),
        ("10k NTC", 10e3),
        ("0R01 1% 2W", 0.01),
        ("NTC", None),
        ("B3950", None),
        ("5V", None),
    ],
)
def test_stated_ohms(text: str, ohm: float | None) -> None:
    assert stated_ohm(text) == (None if ohm is None else pytest.approx(ohm))


def test_a_buzzer_with_its_coil_stated() -> None:
    circuit = kicad(
        kicad_part("BZ1", "Device:Buzzer", "15R coil", {"1": "+5V|+", "2": "low|-"}), resistor("R1", "low", "GND")
    )
    assert value_of(circuit, "BZ1.r") == 15.0
    assert np.isfinite(operating_point(circuit).v_v[0, circuit.node("low")])
