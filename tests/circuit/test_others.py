from __future__ import annotations

import pytest

from checker.circuit.types import Circuit, Unknown
from checker.netlist.types import Part
from tests.circuit.make import assumed, capacitor, ends_of, kicad, kicad_part, resistor, spice, spice_part


def around(*parts: Part) -> Circuit:
    """The parts, with resistors from nets a and b to ground."""
    return kicad(*parts, resistor("R1", "a", "GND"), resistor("R2", "b", "GND"))


def unknown_at(circuit: Circuit, ref: str) -> list[Unknown]:
    return [unknown for unknown in circuit.unknowns if unknown.ref == ref]


@pytest.mark.parametrize(
    ("ref", "symbol"),
    [
        ("JP1", "Jumper:SolderJumper_2_Bridged"),
        ("JP1", "Device:Jumper_NC_Small"),
        ("F1", "Device:Polyfuse"),
        ("F1", "Device:Fuse"),
        ("FB1", "Device:Ferrite_Bead"),
    ],
)
def test_closed_things_are_wires(ref: str, symbol: str) -> None:
    circuit = around(kicad_part(ref, symbol, "x", {"1": "a", "2": "b"}))
    assert ends_of(circuit, ref) == ("a", "b")
    assert assumed(circuit, ref, "taken as a wire")


@pytest.mark.parametrize("symbol", ["Jumper:SolderJumper_2_Open", "Device:Jumper_NO_Small", "Switch:SW_Push"])
def test_open_things_are_open(symbol: str) -> None:
    circuit = around(kicad_part("JP1", symbol, "x", {"1": "a", "2": "b"}))
    assert circuit.voltages.names == () and circuit.unknowns == ()
    assert assumed(circuit, "JP1", "taken as open")


@pytest.mark.parametrize("symbol", ["Connector:TestPoint", "Mechanical:MountingHole", "Mechanical:Fiducial"])
def test_mechanical_parts_are_nothing(symbol: str) -> None:
    circuit = around(kicad_part("TP1", symbol, "x", {"1": "a"}))
    assert circuit.unknowns == () and "TP1" not in circuit.parts


def test_connectors_are_open_with_one_line_for_all() -> None:
    pins = {"1": "a", "2": "b", "3": "nowhere"}
    circuit = around(
        kicad_part("J1", "Connector:Conn_01x03", "x", pins), kicad_part("P2", "conn:CONN_2", "x", {"1": "a", "2": "b"})
    )
    assert circuit.unknowns == ()
    assert [line for line in circuit.assumptions if "connectors" in line] == [
        "J1, P2: pins of connectors taken as open"
    ]


def test_pins_of_a_circuit_without_a_model() -> None:
    pins = {
        "1": "a||output",
        "2": "b||input",
        "3": "GND||power_in",
        "4": "+5V||power_in",
        "5": "c||output",
        "6": "elsewhere||output",
    }
    circuit = around(kicad_part("U1", "my:OPAMP", "XYZ", pins), capacitor("C1", "c", "a"), resistor("R3", "+5V", "GND"))
    found = {unknown.pin: unknown for unknown in unknown_at(circuit, "U1")}
    assert found.keys() == {"1", "5"}
    assert found["1"].blocks_dc and found["1"].nets == ("a",)
    assert not found["5"].blocks_dc  # only a capacitor is there
    assert assumed(circuit, "U1", "inputs taken as drawing no current")
    assert "elsewhere" not in circuit.nets


def test_an_input_of_something_that_conducts_is_no_input() -> None:
    circuit = around(kicad_part("T1", "my:TRAFO", "1:4", {"1": "a||input", "2": "b||input"}))
    assert [unknown.blocks_dc for unknown in unknown_at(circuit, "T1")] == [True, True]


def test_crystals_are_open_for_direct_current_only() -> None:
    circuit = around(kicad_part("Y1", "Device:Crystal", "10MHz", {"1": "a", "2": "b"}))
    assert [(unknown.datum, unknown.blocks_dc) for unknown in circuit.unknowns] == [
        ("a model of the crystal Y1", False)
    ]


def test_a_line_without_delay_is_named() -> None:
    circuit = spice(
        spice_part("E1", "a 0 b 0", 2.0), spice_part("T1", "b 0 c 0", params={"z0": 50.0}),
        *(spice_part(f"R{place}", f"{net} 0", 1e3) for place, net in enumerate("abc", start=1)),
    )  # fmt: skip
    assert circuit.four_poles.names == ("E1",)
    assert {unknown.ref: unknown.nets for unknown in circuit.unknowns} == {"T1": ("b", "c")}


def test_parts_not_fitted_are_left_out() -> None:
    circuit = around(kicad_part("R9", "Device:R", "0R", {"1": "a", "2": "b"}, do_not_fit=True))
    assert circuit.voltages.names == ()
    assert assumed(circuit, "R9", "not fitted")


def test_nets_of_an_unknown_always_have_a_node() -> None:
    pins = {str(place): f"n{place}||output" for place in range(1, 9)}
    circuit = around(kicad_part("U1", "my:IC", "XYZ", pins), resistor("R9", "n1", "GND"))
    assert {net for unknown in circuit.unknowns for net in unknown.nets} <= set(circuit.nets)


@pytest.mark.parametrize(("ref", "nets", "blocks"), [("R9", "a b", True), ("C9", "a b", False), ("Q9", "a b 0", True)])
def test_what_the_reader_did_not_understand_is_not_used(ref: str, nets: str, blocks: bool) -> None:
    odd = spice_part(ref, nets, 5.0, model="2N3904", unknown="the words make no sense")
    circuit = spice(odd, spice_part("R1", "a 0", 1e3), spice_part("R2", "b 0", 1e3))
    (unknown,) = circuit.unknowns
    assert (unknown.ref, unknown.supply, unknown.blocks_dc) == (ref, "the words make no sense", blocks)
    assert unknown.nets == ("a", "b")
    assert ref in circuit.parts and ref not in circuit.resistors.names + circuit.bipolars.names


def test_a_relay_asks_for_its_coil() -> None:
    circuit = around(kicad_part("K1", "my:RELAY", "HJR", {"1": "a", "2": "b", "3": "GND"}))
    assert all('[[part]] ref = "K1"' in unknown.supply for unknown in unknown_at(circuit, "K1"))


@pytest.mark.parametrize("name", ["{2*r}", "{pin.__class__}", "{", "{0}"])
def test_a_name_in_braces_is_only_a_name(name: str) -> None:
    # Once taken for a place to fill in, which ended in a traceback.
    circuit = spice(spice_part("U9", "a b 0", text=name), spice_part("R1", "a 0", 1e3), spice_part("R2", "b 0", 1e3))
    assert {unknown.datum for unknown in unknown_at(circuit, "U9")} == {
        f"what U9 ({name}) does at pin {n}" for n in "12"
    }
