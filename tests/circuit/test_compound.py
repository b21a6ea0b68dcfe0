"""Transistors with built-in parts: what they hold, and that it works as the data sheet says."""

from __future__ import annotations

import pytest

from checker.circuit.types import Circuit
from checker.netlist.types import Part
from checker.solve.operating import operating_point
from tests.circuit.make import assumed, ends_of, kicad, kicad_part, resistor, value_of

BCE = {"1": "in|B", "2": "out|C", "3": "GND|E"}


def switch(part: Part, volts_in: str = "+5V", load: str = "1k") -> Circuit:
    return kicad(part, resistor("R1", volts_in, "in", "1"), resistor("R2", "+12V", "out", load))


def test_a_pre_biased_transistor_has_its_resistors() -> None:
    circuit = switch(kicad_part("Q1", "my:NPN", "PDTC114ET", BCE))
    assert circuit.bipolars.names == ("Q1",)
    assert (value_of(circuit, "Q1.r1"), ends_of(circuit, "Q1.r1")) == (10e3, ("in", "Q1.b"))
    assert (value_of(circuit, "Q1.r2"), ends_of(circuit, "Q1.r2")) == (10e3, ("Q1.b", "GND"))
    assert assumed(circuit, "Q1", "built-in base resistors")


def test_input_current_of_a_pre_biased_transistor() -> None:
    """Data sheets of 10 k/10 k types: 0.88 mA at most at 5 V; nominally (5 V - 0.7 V)/10 k = 0.43 mA (from memory)."""
    point = operating_point(switch(kicad_part("Q1", "my:NPN", "PDTC114ET", BCE)))
    v = dict(zip(point.circuit.nets, point.v_v[0], strict=False))
    assert (v["in"] - v["Q1.b"]) / 10e3 == pytest.approx(0.43e-3, rel=0.05)
    assert v["out"] < 0.3


def test_a_darlington_is_a_driver_and_an_output() -> None:
    circuit = switch(kicad_part("Q1", "my:NPN", "TIP122", BCE), load="12")
    assert circuit.bipolars.names == ("Q1.A", "Q1.B")
    assert circuit.diodes.names == ("Q1.d",)
    assert ends_of(circuit, "Q1.be1") == ("in", "Q1.n") and ends_of(circuit, "Q1.be2") == ("Q1.n", "GND")
    point = operating_point(circuit)
    v = dict(zip(point.circuit.nets, point.v_v[0], strict=False))
    # One transistor's VBE and the other's VCE(sat) together: it never falls below some 0.6 V (common practice).
    assert 0.6 < v["out"] < 1.2
    assert 1.2 < v["in"] < 5.0


def test_the_diode_of_a_pnp_darlington_points_the_other_way() -> None:
    circuit = kicad(
        kicad_part("Q1", "my:PNP", "TIP127", {"1": "in|B", "2": "out|C", "3": "+12V|E"}),
        resistor("R1", "in", "GND"),
        resistor("R2", "out", "GND"),
    )
    assert tuple(circuit.nets[node] for node in circuit.diodes.nodes[0]) == ("out", "+12V")


def test_ratings_stand_with_the_output_transistor() -> None:
    circuit = switch(kicad_part("Q1", "my:NPN", "TIP122", BCE))
    assert circuit.parts["Q1.B"].ratings.v_max_v == 100 and circuit.parts["Q1.A"].ratings.v_max_v is None


def test_a_dual_with_repeated_pin_names_follows_its_card() -> None:
    pins = {"1": "GND|E", "2": "a|B", "3": "x|C", "4": "GND|E", "5": "b|B", "6": "y|C"}
    part = kicad_part("Q1", "my:MUN5212DW1", "MUN5212DW1", pins, footprint="my:SOT363")
    circuit = kicad(part, *(resistor(f"R{net}", "+5V", net) for net in "abxy"))
    assert circuit.bipolars.names == ("Q1.A", "Q1.B")
    assert ends_of(circuit, "Q1.A.r1") == ("a", "Q1.A.b") and ends_of(circuit, "Q1.B.r1") == ("b", "Q1.B.b")
