"""Transformers by their turns: impedances and voltages by the ratio, direct current through the windings."""

from __future__ import annotations

import numpy as np
import pytest

from checker.circuit.transformers import turns_of
from checker.circuit.types import Circuit
from checker.netlist.types import Part
from checker.solve.operating import operating_point
from checker.solve.response import Response, small_signal
from tests.circuit.make import assumed, kicad, kicad_part, resistor

FOUR = {"1": "a|AA", "2": "GND|AB", "3": "s|SA", "4": "GND|SB"}


def response(circuit: Circuit, f_hz: float) -> Response:
    return small_signal(operating_point(circuit), np.array([f_hz]))


def into(circuit: Circuit, net: str, f_hz: float = 1e6) -> complex:
    return complex(response(circuit, f_hz).impedance(circuit.node(net))[0, 0])


@pytest.mark.parametrize(
    ("value", "turns"),
    [
        ("FT37-61 33T:3T", (33.0, 3.0)), ("16T 4T FB-43-2401", (16.0, 4.0)), ("1:4", (1.0, 4.0)),
        ("1:1.41", (1.0, 1.41)), ("1:1:1", (1.0, 1.0, 1.0)), ("T50-6", None), ("ADT1-6T", None), ("4:0", None),
        ("230V/12V", None), ("Bifilar 10t choke", (1.0, 1.0)),
    ],
)  # fmt: skip
def test_turns_as_they_are_written(value: str, turns: tuple[float, ...] | None) -> None:
    part: Part = kicad_part("T1", "Device:Transformer_1P_1S", value, FOUR)
    assert turns_of(part) == turns


@pytest.mark.parametrize(("value", "ratio"), [("2:1", 2.0), ("1:4", 0.25), ("33T:3T", 11.0)])
def test_impedance_by_the_square_of_the_ratio(value: str, ratio: float) -> None:
    """50 ohm at the secondary; the inductance is taken as large."""
    circuit = kicad(
        kicad_part("T1", "Device:Transformer_1P_1S", value, FOUR),
        resistor("R1", "s", "GND", "50"),
        resistor("R2", "a", "GND", "1G"),
    )
    # 1 H beside it at 1 MHz are 6.3 megohms.
    assert abs(into(circuit, "a")) == pytest.approx(50.0 * ratio**2, rel=1e-5)
    assert assumed(circuit, "T1", "taken as large")


def test_inductance_of_turns_on_a_known_core() -> None:
    """33 turns on FT37-61 at 55.3 nH a turn squared are 60.2 uH; the secondary is open."""
    circuit = kicad(
        kicad_part("T1", "NT7S:XMFR-STEPDOWN", "FT37-61 33T:3T", FOUR),
        resistor("R1", "s", "GND", "1G"),
        resistor("R2", "a", "GND", "1G"),
    )
    assert into(circuit, "a") == pytest.approx(2j * np.pi * 1e6 * 55.3e-9 * 33.0**2, rel=1e-4)


def test_a_tapped_secondary() -> None:
    """1:2 as a whole, each half 1: 100 ohm across the whole of four times the impedance present 25 ohm."""
    pins = {"1": "a|AA", "2": "GND|AB", "3": "p|SA", "4": "GND|SC", "5": "m|SB"}
    circuit = kicad(
        kicad_part("T1", "Device:Transformer_1P_SS", "1:2", pins),
        resistor("R1", "p", "m", "100"),
        resistor("R2", "a", "GND", "1G"),
    )
    assert into(circuit, "a") == pytest.approx(25.0, rel=1e-4)
    transfer = response(circuit, 1e6)
    p, m = (complex(transfer.transfer(circuit.node(net), circuit.node("a"))[0, 0]) for net in ("p", "m"))
    assert p == pytest.approx(-m, rel=1e-6)


def test_direct_current_flows_through_the_windings() -> None:
    circuit = kicad(
        kicad_part("T1", "Device:Transformer_1P_1S", "4:1", {"1": "+12V", "2": "c", "3": "s", "4": "GND"}),
        resistor("R1", "c", "GND", "1k"),
        resistor("R2", "s", "GND", "50"),
    )
    point = operating_point(circuit)
    assert point.v_v[0, circuit.node("c")] == pytest.approx(12.0)
    assert point.v_v[0, circuit.node("s")] == pytest.approx(0.0, abs=1e-12)
    assert not circuit.unknowns


@pytest.mark.parametrize(
    ("value", "pins"),
    [("T50-6", FOUR), ("1:4", {"1": "a", "2": "GND"}), ("1:4", {"1": "a", "2": "GND", "A": "s", "B": "GND"})],
)
def test_what_is_not_told_stays_unknown(value: str, pins: dict[str, str]) -> None:
    circuit = kicad(
        kicad_part("T1", "Device:Transformer_1P_1S", value, pins),
        resistor("R1", "s", "a", "50"),
        resistor("R2", "a", "GND", "1k"),
    )
    assert "T1" in {unknown.ref for unknown in circuit.unknowns}
    assert not circuit.inductors.names
