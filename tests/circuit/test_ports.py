from __future__ import annotations

from typing import Any

import pytest

from checker.circuit.connectors import nominal, role_by_name, role_of_net
from checker.circuit.types import Circuit, Port
from checker.intent.types import Band, Intent, PortIntent
from checker.netlist.types import Part
from checker.trouble import InputTrouble
from tests.circuit.make import (
    SAID,
    assumed,
    bipolar,
    capacitor,
    ends_of,
    kicad,
    kicad_part,
    model,
    resistor,
    spice,
    spice_part,
    value_of,
    volts,
)


def port_of(circuit: Circuit, name: str) -> Port:
    return next(port for port in circuit.ports if port.name == name)


def declared(**fields: Any) -> Intent:
    given: dict[str, Any] = {"name": "p", "role": "input", "origin": SAID, "net": "in"} | fields
    return Intent(ports=(PortIntent(**given),))


def stage(*parts: Part, **more: Any) -> Circuit:
    """A stage between nets in and out: C1 into the base, C2 from the collector."""
    return spice(
        volts("VCC", "vcc 0", 12.0), spice_part("C1", "in b", 1e-6), spice_part("C2", "c out", 1e-6),
        spice_part("RC", "vcc c", 4.7e3), spice_part("RB", "vcc b", 1e6), bipolar("Q1", "c b 0", "N"),
        *parts, models=[model("N", "npn")], **more,
    )  # fmt: skip


# --- declared -----------------------------------------------------------------------------------------------


def test_a_declared_input_gets_source_and_resistance() -> None:
    band = Band(low_hz=1e6, high_hz=2e6)
    circuit = stage(intent=declared(impedance_ohm=50.0, level_v=0.01, band=band))
    port = port_of(circuit, "p")
    assert (port.net, port.role, port.reference_ohm, port.declared) == ("in", "input", 50.0, True)
    assert (port.level_v, port.band_hz, port.load) == (0.01, (1e6, 2e6), ())
    assert circuit.voltages.names[port.emf] == "port:p.emf"
    assert circuit.resistors.names[port.series] == "port:p.r"
    assert ends_of(circuit, "port:p.r") == ("port:p.emf", "in") and value_of(circuit, "port:p.r") == 50.0
    assert circuit.nets[port.node] == "in"


def test_a_declared_output_gets_a_load() -> None:
    circuit = stage(intent=declared(role="output", net="out", impedance_ohm=600.0))
    port = port_of(circuit, "p")
    assert port.load == ("port:p.r",) and (port.emf, port.series) == (-1, -1)
    assert ends_of(circuit, "port:p.r") == ("out", "0")


def test_a_declared_input_without_impedance_gets_nothing() -> None:
    port = port_of(stage(intent=declared()), "p")
    assert (port.emf, port.series, port.load) == (-1, -1, ())


def test_not_attached_finds_the_source_that_stands_there() -> None:
    source = [volts("VS", "s 0", None, ac=1.0), spice_part("RS", "s in", 50.0)]
    circuit = stage(*source, intent=declared(impedance_ohm=50.0, attach=False))
    port = port_of(circuit, "p")
    assert circuit.voltages.names[port.emf] == "VS" and circuit.resistors.names[port.series] == "RS"
    assert "port:p.r" not in circuit.resistors.names


def test_not_attached_finds_the_load_that_stands_there() -> None:
    circuit = stage(spice_part("RL", "out 0", 1e4), intent=declared(role="output", net="out", attach=False))
    assert port_of(circuit, "p").load == ("RL",)


def test_a_resistor_that_carries_bias_is_no_load() -> None:
    circuit = stage(spice_part("RX", "c 0", 1e4), intent=declared(role="output", net="c", attach=False))
    assert port_of(circuit, "p").load == ()


def test_an_ideal_source_on_the_net_is_not_doubled() -> None:
    circuit = stage(volts("VS", "in 0", None, ac=1.0), intent=declared(impedance_ohm=50.0))
    port = port_of(circuit, "p")
    assert circuit.voltages.names[port.emf] == "VS" and port.series == -1
    assert assumed(circuit, "port p", "VS drives its net already")


def test_a_source_behind_its_resistor_is_not_doubled_either() -> None:
    source = [volts("VS", "s 0", None, ac=1.0), spice_part("RS", "s in", 50.0)]
    circuit = stage(*source, intent=declared(impedance_ohm=50.0))
    assert circuit.resistors.names[port_of(circuit, "p").series] == "RS"
    assert assumed(circuit, "port p", "VS drives its net already")


def test_a_bias_supply_behind_a_resistor_is_no_signal_source() -> None:
    intent = declared(attach=False)
    circuit = stage(volts("VB", "bias 0", 5.0), spice_part("RBB", "bias in", 1e4), intent=intent)
    assert port_of(circuit, "p").emf == -1


def test_a_port_by_part_and_pin() -> None:
    jack = spice_part("XJ1", "in 0", model="CONN_COAX_50", text="CONN_COAX_50", letter="X")
    circuit = stage(jack, intent=declared(net="", part="XJ1", pin="1", impedance_ohm=50.0))
    port = port_of(circuit, "p")
    assert (port.net, port.coaxial, port.part) == ("in", True, "XJ1")


def test_a_port_on_a_lossless_line_is_coaxial() -> None:
    line = spice_part("T1", "in 0 far 0", params={"z0": 50.0})
    assert port_of(stage(line, spice_part("R9", "far 0", 50.0), intent=declared()), "p").coaxial


@pytest.mark.parametrize(
    "where", [{"net": "inn"}, {"net": "", "part": "C7", "pin": "1"}, {"net": "", "part": "C1", "pin": "9"}]
)
def test_a_port_that_is_nowhere_stops_with_its_line(where: dict[str, str]) -> None:
    with pytest.raises(InputTrouble, match=r"toml:7: port 'p': "):
        stage(intent=declared(**where))


def test_a_net_by_its_last_segment_must_be_unique() -> None:
    parts = [resistor("R1", "/a/IN", "GND"), resistor("R2", "/b/IN", "GND"), resistor("R3", "/b/X", "GND")]
    with pytest.raises(InputTrouble, match="several nets are called 'IN': /a/IN, /b/IN"):
        kicad(*parts, intent=declared(net="IN"))
    assert kicad(*parts, intent=declared(net="X")).ports[0].net == "/b/X"


# --- suggested ----------------------------------------------------------------------------------------------


def test_a_signal_source_is_an_input_behind_its_lone_resistor() -> None:
    circuit = stage(volts("VS", "s 0", None, ac=1.0), spice_part("RS", "s in", 600.0))
    port = port_of(circuit, "VS")
    assert (port.net, port.role, port.reference_ohm, port.declared) == ("in", "input", None, False)
    assert circuit.resistors.names[port.series] == "RS"
    assert assumed(circuit, "VS carries signal; taken as an input port at in")


def test_a_signal_source_with_more_on_its_net_is_its_own_plane() -> None:
    parts = [volts("VS", "s 0", 0.7, waveform="sin"), spice_part("RS", "s in", 600.0), spice_part("R2", "s 0", 50.0)]
    port = port_of(stage(*parts), "VS")
    assert (port.net, port.series) == ("s", -1)


def test_a_signal_current_drives_its_net() -> None:
    from checker.netlist.types import Source

    circuit = stage(spice_part("IS", "0 in", source=Source(dc=None, ac=1e-3)))
    port = port_of(circuit, "IS")
    assert (port.net, port.emf, port.role) == ("in", -1, "input")


def test_a_blocked_resistor_is_the_load_of_an_output() -> None:
    circuit = stage(spice_part("RL", "out 0", 1e4))
    port = port_of(circuit, "out")
    assert (port.role, port.load) == ("output", ("RL",))
    assert assumed(circuit, "RL behind a capacitor taken as the load of an output port at out")


def test_a_bypass_or_emitter_resistor_is_no_load() -> None:
    circuit = spice(
        volts("VCC", "vcc 0", 12.0), spice_part("RE", "e 0", 1e3), spice_part("CE", "e 0", 1e-6),
        spice_part("RB", "vcc b", 1e6), bipolar("Q1", "vcc b e", "N"), models=[model("N", "npn")],
    )  # fmt: skip
    assert circuit.ports == ()


def test_names_serve_where_nothing_else_does() -> None:
    circuit = stage()
    assert {(port.name, port.role) for port in circuit.ports} == {("in", "input"), ("out", "output")}
    assert assumed(circuit, "in taken as an input port from its name")


def test_a_coaxial_connector_is_a_terminated_port() -> None:
    jack = kicad_part("J1", "Connector:Conn_Coaxial", "ANT", {"1": "n1|In", "2": "GND|Ext"}, footprint="X:SMA_Edge")
    circuit = kicad(jack, capacitor("C1", "n1", "b"), resistor("R1", "b", "GND"))
    port = port_of(circuit, "J1")
    assert (port.net, port.role, port.reference_ohm, port.coaxial, port.part) == ("n1", "input", 50.0, True, "J1")
    assert value_of(circuit, "port:J1.r") == 50.0 and port.emf >= 0
    assert assumed(circuit, "J1 on n1: 50 ohm", "IEC 61169-15")


def test_a_connector_of_unknown_direction_is_source_and_load_in_one() -> None:
    jack = kicad_part("J1", "Connector:Conn_Coaxial", "BNC", {"1": "n1|In", "2": "GND|Ext"})
    circuit = kicad(jack, capacitor("C1", "n1", "b"), resistor("R1", "b", "GND"))
    port = port_of(circuit, "J1")
    assert port.role is None and port.emf >= 0 and port.load == ("port:J1.r",)
    assert assumed(circuit, "J1", "50 ohm", "also exists in 75 ohm", "direction still to be found")


def test_a_connector_with_its_source_or_load_drawn_is_not_doubled() -> None:
    jacks = [
        spice_part("XJ1", "in 0", model="CONN_COAX_50", letter="X"),
        spice_part("XJ2", "out 0", model="CONN_BNC_75", letter="X"),
    ]
    drawn = [volts("VS", "s 0", None, ac=1.0), spice_part("RS", "s in", 50.0), spice_part("RL", "out 0", 75.0)]
    circuit = stage(*jacks, *drawn)
    first, second = port_of(circuit, "XJ1"), port_of(circuit, "XJ2")
    assert circuit.voltages.names[first.emf] == "VS" and first.reference_ohm == 50.0 and first.coaxial
    assert second.load == ("RL",) and second.reference_ohm == 75.0 and second.role == "output"
    assert not any(name.startswith("port:") for name in circuit.resistors.names)


def test_a_plain_connector_behind_a_capacitor_is_a_port_of_either_direction() -> None:
    jack = kicad_part("J1", "Connector:AudioJack2", "jack", {"1": "n1", "2": "GND"})
    circuit = kicad(jack, capacitor("C1", "n1", "b"), resistor("R1", "b", "GND"))
    port = port_of(circuit, "J1")
    assert (port.role, port.reference_ohm, port.emf) == (None, None, -1)
    assert assumed(circuit, "J1 on n1 taken as an input or output port")


# --- connectors ---------------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("value", "footprint", "ohm"),
    [
        ("SMA", "", 50.0),
        ("Conn_Coaxial", "Connector_Coaxial:BNC_Amphenol_B6252HB", 50.0),
        ("BNC 75 ohm", "", 75.0),
        ("CONN_COAX_50", "", 50.0),
        ("F_connector", "", 75.0),
        ("MCX", "", 50.0),
        ("N-type", "", 50.0),
        ("IEC 61169-2", "", 75.0),
        ("RCA", "", None),
        ("Conn_Coaxial", "", None),
    ],
)
def test_nominal_impedance_of_connector_families(value: str, footprint: str, ohm: float | None) -> None:
    """IEC 61169 sectional specifications, from memory."""
    part = kicad_part("J1", "Connector:Conn_Coaxial", value, {"1": "a"}, footprint=footprint)
    assert nominal(part).ohm == ohm


@pytest.mark.parametrize(
    ("names", "role"),
    [
        (("ANT",), "input"),
        (("/rx/RF_IN",), "input"),
        (("Net-(C1-Pad1)", "IF OUT"), "output"),
        (("VOUT",), "output"),
        (("Net-(U4-IN)",), None),
        (("IN_OUT",), None),
        (("MAINS",), None),
    ],
)
def test_direction_from_names(names: tuple[str, ...], role: str | None) -> None:
    assert role_by_name(*names) == role


@pytest.mark.parametrize(
    ("net", "role"), [("OUT", "output"), ("signal_out", "output"), ("TX", None), ("BTN_OUT", None)]
)
def test_direction_from_the_whole_name_of_a_net(net: str, role: str | None) -> None:
    assert role_of_net(net) == role
