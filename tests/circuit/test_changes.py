from __future__ import annotations

from typing import Any

import numpy as np
import pytest
from numpy.testing import assert_allclose

from checker.circuit.changes import nominal, state_scenarios, with_changes
from checker.circuit.drives import DRIVEN_OHM, OPEN_OHM
from checker.circuit.types import Change, Circuit, Scenario
from checker.intent.types import Intent, PortIntent, RailIntent, StateIntent
from checker.trouble import InputTrouble, Internal
from tests.circuit.make import SAID, assumed, bipolar, kicad, kicad_part, model, resistor, spice, spice_part, volts


def board() -> Circuit:
    return spice(
        volts("V1", "v 0", 12.0), spice_part("R1", "v c", 1e3),
        spice_part("R2", "c b", 1e5), spice_part("C1", "c 0", 1e-9),
        bipolar("Q1", "c b 0", "N"), models=[model("N", "npn", bf=80.0)],
    )  # fmt: skip


def change(part: str, prop: Any, value: float) -> Change:
    return Change(part=part, property=prop, value=value)


def test_rows_hold_the_changed_values_and_nothing_else_moves() -> None:
    base = board()
    scenarios = [
        nominal(),
        Scenario(name="r", kind="corner", changes=(change("R1", "factor", 1.05), change("C1", "c_f", 2e-9))),
        Scenario(name="bf", kind="corner", changes=(change("Q1", "bf", 40.0),), temperature_k=330.0),
        Scenario(name="half", kind="corner", changes=(change("Q1", "factor", 0.5), change("V1", "v_v", 0.0))),
    ]
    circuit = with_changes(base, scenarios)
    assert circuit.size == 4
    assert_allclose(circuit.resistors.value, [[1e3, 1e5], [1.05e3, 1e5], [1e3, 1e5], [1e3, 1e5]], rtol=1e-15)
    assert circuit.capacitors.value[:, 0].tolist() == [1e-9, 2e-9, 1e-9, 1e-9]
    assert circuit.bipolars.params["bf"][:, 0].tolist() == [80.0, 80.0, 40.0, 40.0]
    assert circuit.bipolars.params["is"].shape == (4, 1)
    assert circuit.voltages.value[:, 0].tolist() == [12.0, 12.0, 12.0, 0.0]
    assert circuit.temperature_k.tolist() == [300.15, 300.15, 330.0, 300.15]
    assert circuit.nets == base.nets and circuit.resistors.nodes is base.resistors.nodes
    assert base.resistors.value.tolist() == [[1e3, 1e5]]


def test_arrays_cannot_be_written() -> None:
    circuit = with_changes(board(), [nominal(), Scenario(name="r", changes=(change("R1", "r_ohm", 2.0),))])
    for array in (
        circuit.resistors.value,
        circuit.capacitors.value,
        circuit.bipolars.params["bf"],
        circuit.temperature_k,
    ):
        with pytest.raises(ValueError, match="read-only"):
            array[...] = 0.0


def test_changes_start_from_the_nominal_row_again() -> None:
    once = with_changes(board(), [nominal(), Scenario(name="r", changes=(change("R1", "factor", 2.0),))])
    twice = with_changes(once, [nominal(), Scenario(name="r", changes=(change("R2", "factor", 2.0),))])
    assert twice.resistors.value.tolist() == [[1e3, 1e5], [1e3, 2e5]]


@pytest.mark.parametrize(
    "bad",
    [
        change("R9", "r_ohm", 1.0),
        change("R1", "c_f", 1e-9),
        change("Q1", "r_ohm", 1.0),
        change("R1", "bf", 100.0),
        change("R1", "r_ohm", 0.0),
        change("R1", "factor", -1.0),
        change("R1", "factor", np.inf),
        change("Q1", "bf", np.nan),
    ],
)
def test_impossible_changes_are_our_own_fault(bad: Change) -> None:
    with pytest.raises(Internal, match="with_changes"):
        with_changes(board(), [nominal(), Scenario(name="bad", changes=(bad,))])


@pytest.mark.parametrize(
    "scenarios",
    [
        [],
        [Scenario(name="x", changes=(change("R1", "r_ohm", 1.0),))],
        [Scenario(name="hot", temperature_k=400.0)],
    ],
)
def test_the_first_scenario_must_be_nominal(scenarios: list[Scenario]) -> None:
    with pytest.raises(Internal, match="scenario 0"):
        with_changes(board(), scenarios)


# --- states -------------------------------------------------------------------------------------------------


def logic(states: list[StateIntent], **more: Any) -> tuple[Circuit, Intent]:
    """U1 drives a through its pin 7, on 3.3 V; J1 leads to b; a 5 V rail beside."""
    intent = Intent(states=tuple(states), **more)
    circuit = kicad(
        kicad_part("U1", "my:LOGIC", "x", {"7": "a|Y|output", "8": "+3V3||power_in"}),
        kicad_part("J1", "Connector:Conn_01x02", "x", {"1": "b", "2": "GND"}),
        resistor("R1", "a", "GND"), resistor("R2", "b", "GND"), resistor("R3", "+5V", "+3V3"),
        intent=intent,
    )  # fmt: skip
    return circuit, intent


def state(name: str, **fields: Any) -> StateIntent:
    return StateIntent(name=name, origin=SAID, **fields)


def row(circuit: Circuit, scenario: int, label: str) -> tuple[float, float]:
    """(volts, ohm) of a driven pin."""
    volts_ = circuit.voltages.value[scenario, circuit.voltages.names.index(f"drive:{label}")]
    return float(volts_), float(circuit.resistors.value[scenario, circuit.resistors.names.index(f"drive:{label}.r")])


def test_states_drive_pins_that_are_open_at_rest() -> None:
    circuit, intent = logic(
        [
            state("on", pins={"U1.7": "high", "J1.1": 2.4}),
            state("off", pins={"U1.7": "low"}),
            state("float", pins={"U1.7": "open"}),
        ]
    )
    made = state_scenarios(circuit, intent)
    assert [(scenario.name, scenario.kind) for scenario in made] == [
        ("on", "state"),
        ("off", "state"),
        ("float", "state"),
    ]
    stacked = with_changes(circuit, [nominal(), *made])
    rows = [row(stacked, place, "U1.7") for place in range(4)]
    assert rows == [(0.0, OPEN_OHM), (3.3, DRIVEN_OHM), (0.0, DRIVEN_OHM), (0.0, OPEN_OHM)]
    assert [row(stacked, place, "J1.1") for place in range(4)] == [(0.0, OPEN_OHM), (2.4, DRIVEN_OHM)] + [
        (0.0, OPEN_OHM)
    ] * 2
    assert assumed(circuit, "U1.7 high is taken as 3.3 V")
    assert assumed(circuit, "U1.7 is open except where a state drives it")


def test_a_driven_pin_no_longer_blocks() -> None:
    blocked, _ = logic([])
    assert [(unknown.ref, unknown.pin) for unknown in blocked.unknowns] == [("U1", "7")]
    assert logic([state("on", pins={"U1.Y": "high"})])[0].unknowns == ()


def test_an_absent_rail_is_0_v() -> None:
    circuit, intent = logic([state("usb", absent=("+5V",))], rails=(RailIntent(net="+5V", volts=5.0, origin=SAID),))
    stacked = with_changes(circuit, [nominal(), *state_scenarios(circuit, intent)])
    assert stacked.voltages.value[:, stacked.voltages.names.index("rail:+5V")].tolist() == [5.0, 0.0]
    assert assumed(circuit, "an absent rail is taken as 0 V")


def test_a_pin_on_an_attached_port_is_driven_through_it() -> None:
    port = PortIntent(name="p", role="input", origin=SAID, net="b", impedance_ohm=600.0)
    circuit, intent = logic([state("dc", pins={"J1.1": 1.0}), state("cut", pins={"J1.1": "open"})], ports=(port,))
    assert "drive:J1.1" not in circuit.voltages.names
    stacked = with_changes(circuit, [nominal(), *state_scenarios(circuit, intent)])
    assert stacked.voltages.value[:, stacked.voltages.names.index("port:p.emf")].tolist() == [0.0, 1.0, 0.0]
    assert stacked.resistors.value[:, stacked.resistors.names.index("port:p.r")].tolist() == [600.0, 600.0, OPEN_OHM]


def test_a_pin_on_a_rail_is_left_alone_and_told() -> None:
    circuit, intent = logic([state("x", pins={"U1.8": "low"})])
    assert state_scenarios(circuit, intent)[0].changes == ()
    assert assumed(circuit, "U1.8 is held at 3.3 V")


@pytest.mark.parametrize("fields", [{"pins": {"U9.1": "high"}}, {"pins": {"U1.9": "high"}}, {"absent": ("+6V",)}])
def test_states_about_nothing_stop_with_their_line(fields: dict[str, Any]) -> None:
    with pytest.raises(InputTrouble, match=r"toml:7: state 'x': "):
        logic([state("x", **fields)])


def test_a_high_without_a_rail_stops() -> None:
    intent = Intent(states=(state("x", pins={"J1.1": "high"}),))
    with pytest.raises(InputTrouble, match="no positive rail"):
        kicad(kicad_part("J1", "Connector:Conn_01x02", "x", {"1": "b"}), resistor("R1", "b", "GND"), intent=intent)
