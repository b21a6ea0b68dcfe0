from __future__ import annotations

import pytest

from checker.circuit.grounds import find_ground
from checker.circuit.notes import Notes
from checker.intent.types import Intent, RailIntent
from tests.circuit.make import SAID, assumed, kicad, netlist, resistor, spice, spice_part


def test_spice_ground_is_net_0_and_a_net_called_gnd_is_the_same() -> None:
    circuit = spice(spice_part("R1", "a 0", 1e3), spice_part("R2", "a GND", 1e3), spice_part("R3", "a AGND", 1e3))
    assert circuit.nets == ("0", "AGND", "a")
    assert assumed(circuit, "net GND taken as the same ground as 0")


@pytest.mark.parametrize(
    "name", ["GND", "/audio/GND", "GNDA", "AGND", "DGND", "PGND", "GNDPWR", "0V", "Earth", "GND_A"]
)
def test_schematic_ground_names(name: str) -> None:
    assert kicad(resistor("R1", "a", name)).nets == (name, "a")


@pytest.mark.parametrize("name", ["GNDX9Y", "BACKGND", "CHASSIS", "10V", "GROUNDED_BASE"])
def test_other_names_are_not_ground(name: str) -> None:
    circuit = kicad(resistor("R1", "a", name), resistor("R2", "a", "GND"))
    assert name in circuit.nets[1:]


def test_several_grounds_are_one_with_a_remark_for_each_beyond_the_first() -> None:
    circuit = kicad(resistor("R1", "a", "GND"), resistor("R2", "a", "AGND"), resistor("R3", "a", "/x/GND"))
    assert circuit.nets == ("GND", "a")
    assert assumed(circuit, "AGND") and assumed(circuit, "/x/GND")
    assert not assumed(circuit, "net GND taken")


def test_com_is_ground_only_without_a_better_name() -> None:
    assert kicad(resistor("R1", "a", "/COM")).nets == ("/COM", "a")
    assert "/COM" in kicad(resistor("R1", "a", "/COM"), resistor("R2", "a", "GND")).nets[1:]


def test_vss_is_ground_only_without_a_better_name() -> None:
    assert kicad(resistor("R1", "a", "VSS")).nets == ("VSS", "a")
    both = kicad(resistor("R1", "a", "VSS"), resistor("R2", "a", "GND"))
    assert both.nets == ("GND", "VSS", "a")
    assert [unknown.datum for unknown in both.unknowns] == ["volts of VSS"]


def test_a_rail_declared_as_0_v_is_ground() -> None:
    intent = Intent(rails=(RailIntent(net="MINUS", volts=0.0, origin=SAID),))
    circuit = kicad(resistor("R1", "a", "MINUS"), intent=intent)
    assert circuit.nets[0] == "MINUS"
    assert circuit.unknowns == ()


def test_without_ground_every_net_is_blocked_and_none_is_guessed() -> None:
    circuit = kicad(resistor("R1", "a", "b"), resistor("R2", "a", "b"))
    (unknown,) = circuit.unknowns
    assert unknown.datum == "ground" and unknown.blocks_dc
    assert unknown.nets == ("a", "b")
    assert circuit.nets[0] not in ("a", "b")


def test_the_stand_in_for_a_missing_ground_is_no_net_of_the_board() -> None:
    board = netlist([resistor("R1", "0", "b")], format="kicad")
    ground = find_ground(board, Intent(), Notes())
    assert not ground.found and ground.name not in board.nets
