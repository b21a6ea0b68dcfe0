"""Which amplifier is behind which pins, and what is left alone."""

from __future__ import annotations

import pytest

from checker.circuit.opamps import kind_of, units_of
from checker.circuit.types import Circuit
from checker.netlist.types import Part
from tests.circuit.make import assumed, kicad, kicad_part, resistor

TL072 = {
    "1": "o1|~|output", "2": "m1|-|input", "3": "p1|+|input", "4": "-12V|V-|power_in",
    "5": "p2|+|input", "6": "m2|-|input", "7": "o2|~|output", "8": "+12V|V+|power_in",
}  # fmt: skip


def dual(value: str = "TL072", **pins: str) -> Part:
    return kicad_part("U1", "Amplifier_Operational:TL072", value, {**TL072, **{k[1:]: v for k, v in pins.items()}})


def around(*parts: Part) -> Circuit:
    loads = [resistor(f"R{net}", net, "GND") for net in ("o1", "m1", "p1", "o2", "m2", "p2")]
    return kicad(*parts, *loads)


def nets(circuit: Circuit, name: str) -> tuple[str, ...]:
    table = circuit.devices["opamp"]
    return tuple(circuit.nets[node] for node in table.nodes[table.names.index(name)])


def test_a_dual_is_two_amplifiers() -> None:
    circuit = around(dual())
    assert nets(circuit, "U1.A") == ("p1", "m1", "o1", "+12V", "-12V")
    assert nets(circuit, "U1.B") == ("p2", "m2", "o2", "+12V", "-12V")
    assert circuit.unknowns == ()
    assert assumed(circuit, "U1", "3 MHz")


@pytest.mark.parametrize(
    ("value", "gbw", "low"),
    [("TL074", 3e6, 1.5), ("LM358", 1e6, 0.02), ("NE5532", 1e7, 1.5), ("LM741CN", 1e6, 1.5), ("MCP6002", 1e6, 0.05)],
)
def test_types(value: str, gbw: float, low: float) -> None:
    """Typical figures of data sheets, from memory."""
    kind = kind_of(kicad_part("U1", "my:amp", value, {}))
    assert kind is not None and (kind.gbw_hz, kind.low_v) == (gbw, low)


@pytest.mark.parametrize(
    "value", ["LM386", "LM393", "LM311", "LM13700", "CA3080", "LTC1693-1", "MC34063", "TLV61046A", "LM317", "TDA2030"]
)
def test_other_parts_are_none(value: str) -> None:
    assert kind_of(kicad_part("U1", "my:part", value, {})) is None


def test_pins_that_contradict_the_layout_leave_it_alone() -> None:
    swapped = dual(_2="m1|+|input", _3="p1|-|input")
    assert units_of(swapped, spice=False) == ()
    unnamed = kicad_part("U1", "my:part", "TL072", {number: text.split("|")[0] for number, text in TL072.items()})
    assert units_of(unnamed, spice=False) == ()


def test_by_names_in_an_outline_with_five_leads() -> None:
    pins = {"1": "o|~|output", "2": "GND|V-|power_in", "3": "p|+|input", "4": "m|-|input", "5": "+5V|V+|power_in"}
    (unit,) = units_of(kicad_part("U1", "my:part", "LMV321", pins), spice=False)
    assert unit.nets == {"out": "o", "bottom": "GND", "plus": "p", "minus": "m", "top": "+5V"}


def test_without_supply_pins_it_is_fed_like_the_others() -> None:
    lone = {
        number: text.replace("1|", "3|").replace("2|", "4|") for number, text in TL072.items() if number not in "48"
    }
    other = kicad_part("U2", "Amplifier_Operational:TL072", "TL072", lone)
    circuit = kicad(dual(), other, *(resistor(f"R{net}", net, "GND") for net in ("o1", "o3", "m3", "p3", "p1", "m1")))
    assert nets(circuit, "U2.A") == ("p3", "m3", "o3", "+12V", "-12V")
    assert assumed(circuit, "U2", "fed like the other amplifiers")


def test_an_amplifier_that_nothing_feeds_is_named() -> None:
    circuit = around(dual(_8="VLATER|V+|power_in"))
    assert {unknown.datum for unknown in circuit.unknowns} == {"the supply of U1 on VLATER"}
