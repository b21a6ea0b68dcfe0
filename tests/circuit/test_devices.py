from __future__ import annotations

import math
from typing import Any

import pytest

from checker.cards.find import find_card
from checker.circuit.types import Circuit
from checker.intent.types import Intent, PartIntent
from checker.netlist.types import Part
from checker.trouble import InputTrouble
from tests.circuit.make import SAID, assumed, bipolar, kicad, kicad_part, model, resistor, spice, spice_part, volts

BCE = {"1": "b|B", "2": "c|C", "3": "e|E"}
SOT23, TO92 = "Package_TO_SOT_SMD:SOT-23", "Package_TO_SOT_THT:TO-92_Inline"


def nets_of(circuit: Circuit, name: str) -> tuple[str, ...]:
    table = circuit.bipolars if name in circuit.bipolars.names else circuit.diodes
    return tuple(circuit.nets[node] for node in table.nodes[table.names.index(name)])


def params_of(circuit: Circuit, name: str) -> dict[str, float]:
    table = circuit.bipolars if name in circuit.bipolars.names else circuit.diodes
    place = table.names.index(name)
    return {key: float(value[0, place]) for key, value in table.params.items()}


def schematic(*parts: Part, **more: Any) -> Circuit:
    """The parts, each net held to ground by a resistor."""
    nets = sorted({pin.net for part in parts for pin in part.pins} - {"GND"})
    return kicad(*parts, *(resistor(f"R{place}", net, "GND") for place, net in enumerate(nets, start=1)), **more)


# --- SPICE text ---------------------------------------------------------------------------------------------


def test_spice_order_is_collector_base_emitter_and_a_lone_substrate_is_ground() -> None:
    circuit = spice(
        bipolar("Q1", "c b e NC_01", "N"), spice_part("R1", "c 0", 1e3), models=[model("N", "npn", bf=120.0)]
    )
    assert nets_of(circuit, "Q1") == ("c", "b", "e", "0")
    assert circuit.bipolars.polarity[0] == 1.0
    assert params_of(circuit, "Q1")["bf"] == 120.0
    assert dict(circuit.parts["Q1"].terminals) == {"C": "c", "B": "b", "E": "e"}


def test_a_substrate_that_leads_somewhere_is_kept() -> None:
    circuit = spice(bipolar("Q1", "c b e sub", "P"), volts("V1", "sub 0", -5.0), models=[model("P", "pnp")])
    assert nets_of(circuit, "Q1")[3] == "sub"
    assert circuit.bipolars.polarity[0] == -1.0


def test_the_written_model_outranks_the_card_but_not_its_ratings() -> None:
    card = find_card("2N3904")
    assert card is not None
    written = [model("2N3904", "npn", bf=416.0)]
    circuit = spice(bipolar("Q1", "c b e", "2N3904", area=2.0), models=written)
    fact = circuit.parts["Q1"]
    assert params_of(circuit, "Q1")["bf"] == 416.0
    assert params_of(circuit, "Q1")["is"] == 2e-16  # default of .model, times area
    assert fact.model_source == ".model 2N3904"
    assert fact.ratings == card.ratings
    assert (fact.gain_min, fact.gain_max) == (card.gain_min, card.gain_max)


def test_without_a_model_the_card_is_used_and_told() -> None:
    circuit = spice(bipolar("Q1", "c b e", "Q2N3904"))
    card = find_card("2N3904")
    assert card is not None and circuit.parts["Q1"].card == card
    assert params_of(circuit, "Q1")["bf"] == card.model["bf"]
    assert assumed(circuit, "Q1", "no .model Q2N3904; the card 2N3904 is used")


def test_an_unknown_model_with_a_polarity_gets_the_generic_card() -> None:
    circuit = spice(bipolar("Q1", "c b e", "MYPNP"))
    fact = circuit.parts["Q1"]
    assert circuit.bipolars.polarity[0] == -1.0
    assert fact.card is not None and fact.card.assumed
    assert assumed(circuit, "Q1", "no card for 'MYPNP'; generic PNP figures used")


def test_an_unknown_model_without_polarity_is_not_guessed() -> None:
    circuit = spice(bipolar("Q1", "c b e", "XYZ99"), spice_part("R1", "c 0", 1e3))
    (unknown,) = circuit.unknowns
    assert circuit.bipolars.names == ()
    assert (unknown.ref, unknown.datum, unknown.blocks_dc) == ("Q1", "model of Q1", True)
    assert unknown.nets == ("c",)  # b and e have no element and so no node
    assert circuit.parts["Q1"].kind == "bipolar"


@pytest.mark.parametrize(("name", "polarity"), [("2SA9999", -1.0), ("Q2SC9999", 1.0)])
def test_japanese_part_numbers_tell_the_polarity(name: str, polarity: float) -> None:
    """2SA PNP, 2SC NPN: JIS C 7012, from memory."""
    assert spice(bipolar("Q1", "c b e", name)).bipolars.polarity[0] == polarity


def test_a_model_of_another_level_is_not_solved() -> None:
    circuit = spice(bipolar("Q1", "c b 0", "V"), models=[model("V", "npn", level=4.0)])
    assert [unknown.datum for unknown in circuit.unknowns] == ["a Gummel-Poon model of Q1"]


def test_a_transistor_on_rails_alone_is_still_listed() -> None:
    circuit = spice(spice_part("J1", "a 0 0", model="J"), volts("V1", "a 0", 5.0))
    assert [(unknown.ref, unknown.nets, unknown.blocks_dc) for unknown in circuit.unknowns] == [("J1", (), False)]


def test_parameters_in_vain_are_told() -> None:
    circuit = spice(bipolar("Q1", "c b e", "N"), models=[model("N", "npn", tre1=0.001)])
    assert assumed(circuit, ".model N: not used: tre1")


def test_effects_that_are_left_out_are_named() -> None:
    given = {"rco": 10.0, "vo": 5.0, "gamma": 1e-9, "qco": 0.0, "ptf": 30.0}
    circuit = spice(bipolar("Q1", "c b e", "N"), models=[model("N", "npn", **given)])
    assert assumed(circuit, ".model N: quasi-saturation is left out: gamma, rco, vo not used")
    assert assumed(circuit, ".model N: excess phase is left out: ptf not used")


def test_effects_that_a_model_switches_off_are_no_remark() -> None:
    circuit = spice(bipolar("Q1", "c b e", "N"), models=[model("N", "npn", rco=0.0, qco=0.0, ptf=0.0)])
    assert not assumed(circuit, "left out")
    assert not assumed(circuit, "not used")


def test_gain_limits_of_a_plain_model_are_assumed() -> None:
    circuit = spice(bipolar("Q1", "c b e", "N"), models=[model("N", "npn", bf=200.0)])
    assert (circuit.parts["Q1"].gain_min, circuit.parts["Q1"].gain_max) == (100.0, 400.0)
    assert assumed(circuit, "Q1", "limits of current gain")


# --- schematic ----------------------------------------------------------------------------------------------


def test_pin_functions_come_first() -> None:
    part = kicad_part("Q1", "Transistor_BJT:BC547", "BC547B", {"1": "c|C", "2": "b|B", "3": "e|E"}, footprint=TO92)
    circuit = schematic(part)
    assert nets_of(circuit, "Q1") == ("c", "b", "e", "GND")
    assert not assumed(circuit, "the symbol's pins are used")


def test_words_for_terminals_and_numbers_behind_them() -> None:
    words = schematic(kicad_part("Q1", "my:BC547", "BC547", {"1": "e|Emitter", "2": "b|Base", "3": "c|Collector"}))
    numbered = schematic(kicad_part("Q1", "my:BC547", "BC547", {"1": "b|B_1", "2": "c|C_2", "3": "e|E_3"}))
    assert nets_of(words, "Q1") == nets_of(numbered, "Q1") == ("c", "b", "e", "GND")


def test_pads_that_contradict_the_package_are_told() -> None:
    """BC547 in TO-92 has collector, base, emitter on pads 1, 2, 3 (common practice, no source)."""
    part = kicad_part("Q1", "Device:Q_NPN_EBC", "BC547", {"1": "e|E", "2": "b|B", "3": "c|C"}, footprint=TO92)
    circuit = schematic(part)
    assert nets_of(circuit, "Q1")[:3] == ("c", "b", "e")
    assert assumed(circuit, "Q1", "the part in this package has 1=C, 2=B, 3=E")


@pytest.mark.parametrize(
    ("fields", "symbol"),
    [
        ({"Sim.Pins": "1=B 2=E 3=C"}, "my:T"),
        ({"Spice_Node_Sequence": "3 1 2"}, "my:T"),
        ({}, "Device:Q_NPN_BEC"),
    ],
)
def test_simulation_pins_and_symbol_names(fields: dict[str, str], symbol: str) -> None:
    part = kicad_part("Q1", symbol, "2N3904", {"1": "b", "2": "e", "3": "c"}, fields=fields)
    assert nets_of(schematic(part), "Q1")[:3] == ("c", "b", "e")


def test_the_card_knows_the_pads_of_a_footprint() -> None:
    part = kicad_part("Q1", "2N-SMD:MMBT3904", "MMBT3904", {"1": "b|~", "2": "e|~", "3": "c|~"}, footprint=SOT23)
    assert nets_of(schematic(part), "Q1")[:3] == ("c", "b", "e")


def test_without_footprint_the_only_package_of_the_card_counts_and_is_told() -> None:
    part = kicad_part("Q1", "2N-SMD:MMBT3904", "MMBT3904", {"1": "b|~", "2": "e|~", "3": "c|~"})
    circuit = schematic(part)
    assert nets_of(circuit, "Q1")[:3] == ("c", "b", "e")
    assert assumed(circuit, "Q1", "no footprint")


def test_pins_whose_symbol_is_not_in_the_export_are_no_pads_without_a_footprint() -> None:
    """A symbol of the author's own may number source, gate and drain in any order."""
    part = kicad_part("Q1", "own:MOSFET_N", "2N7002", {"1": "x", "2": "y", "3": "z"})
    assert [unknown.datum for unknown in schematic(part).unknowns] == ["pin order of Q1"]
    placed = kicad_part("Q1", "own:MOSFET_N", "2N7002", {"1": "g", "2": "s", "3": "d"}, footprint=SOT23)
    assert schematic(placed).devices["mosfet"].names == ("Q1",)


def test_an_unknown_pin_order_is_not_guessed() -> None:
    part = kicad_part("Q1", "my:NPN", "NPN", {"1": "x", "2": "y", "3": "z"})
    circuit = schematic(part)
    assert [(unknown.datum, unknown.blocks_dc) for unknown in circuit.unknowns] == [("pin order of Q1", True)]


def test_an_unconnected_terminal_that_the_export_omits_gets_its_own_net() -> None:
    circuit = schematic(kicad_part("Q1", "my:2N3904", "2N3904", {"1": "e|E", "3": "c|C"}))
    assert nets_of(circuit, "Q1")[:3] == ("c", "Q1.B", "e")


def test_the_part_number_outranks_the_symbol_and_the_conflict_is_told() -> None:
    circuit = schematic(kicad_part("Q1", "Device:Q_PNP_BCE", "2N3904", BCE))
    assert circuit.bipolars.polarity[0] == 1.0
    assert assumed(circuit, "Q1", "2N3904 is NPN, but the symbol says PNP")


def test_an_unknown_part_takes_its_polarity_from_the_symbol() -> None:
    circuit = schematic(kicad_part("Q1", "Device:Q_PNP_BCE", "XYZ99", BCE))
    assert circuit.bipolars.polarity[0] == -1.0
    assert assumed(circuit, "Q1", "no card for 'XYZ99'; generic PNP figures used")


@pytest.mark.parametrize("ref", ["T1", "VT1", "K1", "U3", "TR1", "IC2"])
def test_the_letter_of_the_reference_does_not_decide(ref: str) -> None:
    circuit = schematic(kicad_part(ref, "my:2N3904", "2N3904", BCE, footprint=SOT23))
    assert circuit.bipolars.names == (ref,)


def test_a_q_that_is_a_field_effect_transistor_by_number() -> None:
    circuit = schematic(kicad_part("Q1", "my:TRANSISTOR", "2N7002", {"1": "g", "2": "s", "3": "d"}, footprint=SOT23))
    assert circuit.parts["Q1"].kind == "fet"


def test_a_fet_symbol_with_a_bipolar_number_is_a_bipolar() -> None:
    pins = {"1": "b|G", "2": "e|S", "3": "c|D"}
    circuit = schematic(kicad_part("Q1", "Device:Q_NMOS_GSD", "MMBT3904", pins, footprint=SOT23))
    assert nets_of(circuit, "Q1")[:3] == ("c", "b", "e")
    assert assumed(circuit, "Q1", "the part number is used, not the symbol")


def test_a_dual_is_two_devices() -> None:
    pins = {"1": "e1|E1", "2": "b1|B1", "3": "c2|C2", "4": "e2|E2", "5": "b2|B2", "6": "c1|C1"}
    circuit = schematic(kicad_part("Q1", "my:DUAL_NPN", "XX", pins, description="dual NPN transistor"))
    assert circuit.bipolars.names == ("Q1.A", "Q1.B")
    assert nets_of(circuit, "Q1.B")[:3] == ("c2", "b2", "e2")


def test_two_pins_of_one_name_are_one_terminal_where_they_are_one_net() -> None:
    """A tab beside a pin; on two nets nobody can tell which of them is the collector."""
    pins = {"1": "b|B", "2": "c|C", "3": "e|E", "4": "c|C"}
    assert nets_of(schematic(kicad_part("Q1", "my:T", "2N3904", pins)), "Q1")[:3] == ("c", "b", "e")
    circuit = schematic(kicad_part("Q1", "my:T", "2N3904", {**pins, "4": "other|C"}))
    assert [unknown.datum for unknown in circuit.unknowns] == ["pin order of Q1"]


def test_a_dual_whose_pins_bear_the_same_names_twice_goes_by_its_pads() -> None:
    pins = {"1": "e1|E", "2": "b1|B", "3": "c2|C", "4": "e2|E", "5": "b2|B", "6": "c1|C"}
    part = kicad_part("Q1", "my:T", "BC847BS", pins, footprint="Package_TO_SOT_SMD:SOT-363_SC-70-6")
    circuit = schematic(part)
    assert {name: nets_of(circuit, name)[:3] for name in circuit.bipolars.names} == {
        "Q1.A": ("c1", "b1", "e1"),
        "Q1.B": ("c2", "b2", "e2"),
    }


@pytest.mark.parametrize(
    ("value", "description", "datum"),
    [
        ("XD1", "NPN Darlington transistor", "a model of the Darlington Q1"),
        ("RN2409", "NPN", "the base resistors of Q1"),
        ("XP1", "NPN phototransistor", "the light on Q1"),
    ],
)
def test_transistors_that_one_model_does_not_describe(value: str, description: str, datum: str) -> None:
    circuit = schematic(kicad_part("Q1", "my:Q_NPN_BCE", value, BCE, description=description))
    assert circuit.bipolars.names == ()
    assert datum in [unknown.datum for unknown in circuit.unknowns]


def test_the_intent_names_a_card_and_ratings() -> None:
    intent = Intent(parts=(PartIntent(ref="Q1", origin=SAID, card="BC547B", ratings={"rth_ja_kpw": 123.0}),))
    circuit = schematic(kicad_part("Q1", "my:NPN", "house-part", BCE), intent=intent)
    fact = circuit.parts["Q1"]
    assert fact.card is not None and fact.card.name.startswith("BC547")
    assert fact.ratings.rth_ja_kpw == circuit.bipolars.rth_kpw[0] == 123.0


def test_a_card_that_does_not_exist_stops_with_its_line() -> None:
    intent = Intent(parts=(PartIntent(ref="Q1", origin=SAID, card="BX9"),))
    with pytest.raises(InputTrouble, match=r"toml:7: .*'Q1'.*'BX9'"):
        schematic(kicad_part("Q1", "my:NPN", "x", BCE), intent=intent)


def test_a_part_that_does_not_exist_stops_with_a_suggestion() -> None:
    intent = Intent(parts=(PartIntent(ref="Q11", origin=SAID),))
    with pytest.raises(InputTrouble, match=r"toml:7: .*'Q11'.*'Q1'"):
        schematic(kicad_part("Q1", "my:NPN", "x", BCE), intent=intent)


# --- diodes -------------------------------------------------------------------------------------------------


def test_spice_diode_runs_from_anode_to_cathode() -> None:
    circuit = spice(spice_part("D1", "a k", model="DX", text="DX"), models=[model("DX", "d", rs=2.0)])
    assert nets_of(circuit, "D1") == ("a", "k")
    assert params_of(circuit, "D1")["rs"] == 2.0
    assert math.isinf(params_of(circuit, "D1")["bv"])


def test_diode_pins_by_function_else_by_convention_with_a_remark() -> None:
    named = schematic(kicad_part("D1", "Device:D", "1N4148", {"1": "x|A", "2": "y|K"}))
    assert nets_of(named, "D1") == ("x", "y")
    bare = schematic(kicad_part("D1", "Device:D", "odd", {"1": "x", "2": "y"}))
    assert nets_of(bare, "D1") == ("y", "x")
    assert assumed(bare, "D1", "pin 1 taken as cathode")


def test_a_zener_takes_its_voltage_from_the_value() -> None:
    circuit = schematic(kicad_part("D1", "Device:D_Zener", "6V2", {"1": "k|K", "2": "a|A"}))
    assert params_of(circuit, "D1")["bv"] == 6.2


def test_a_suppressor_breaks_down_above_its_stand_off_voltage() -> None:
    pins = {"1": "k|K", "2": "a|A"}
    circuit = schematic(kicad_part("D1", "Device:D_TVS", "SMCJ30A-E3", pins))
    assert 33.3 <= params_of(circuit, "D1")["bv"] <= 36.9  # 1.11 and 1.23 times 30 V
    both_ways = schematic(kicad_part("D1", "Device:D_TVS", "SMCJ30CA", pins))
    assert [unknown.datum for unknown in both_ways.unknowns] == ["breakdown voltage of D1"]


def test_a_zener_without_voltage_is_unknown() -> None:
    circuit = schematic(kicad_part("D1", "Device:D_Zener", "D_Zener", {"1": "k|K", "2": "a|A"}))
    assert [unknown.datum for unknown in circuit.unknowns] == ["breakdown voltage of D1"]


def test_a_light_emitting_diode_named_by_its_job() -> None:
    circuit = schematic(kicad_part("D1", "Device:LED", "POWER", {"1": "k|K", "2": "a|A"}))
    assert circuit.diodes.names == ("D1",)
    assert assumed(circuit, "D1", "no card for 'POWER'; generic LED figures used")


@pytest.mark.parametrize(
    ("value", "first", "second"),
    [("BAV99", ("x", "z"), ("z", "y")), ("BAV70", ("x", "z"), ("y", "z")), ("BAW56", ("z", "x"), ("z", "y"))],
)
def test_two_diodes_in_one_case(value: str, first: tuple[str, str], second: tuple[str, str]) -> None:
    """Pads in SOT-23: BAV99 in series, BAV70 common cathode, BAW56 common anode on pad 3 (common practice)."""
    part = kicad_part("D1", "my:DUAL", value, {"1": "x", "2": "y", "3": "z"}, footprint=SOT23, description="diode")
    circuit = schematic(part)
    assert (nets_of(circuit, "D1.A"), nets_of(circuit, "D1.B")) == (first, second)


def test_a_dual_diode_of_unknown_kind_is_not_guessed() -> None:
    part = kicad_part("D1", "my:DUAL", "odd", {"1": "x|A", "2": "y|K", "3": "z|C"}, description="dual diode")
    assert "pin order of D1" in [unknown.datum for unknown in schematic(part).unknowns]


def test_a_wrapped_transistor_in_spice_text() -> None:
    circuit = spice(spice_part("X1", "c b 0", model="BC547", letter="X"), spice_part("R1", "c b", 1e3))
    assert nets_of(circuit, "X1")[:3] == ("c", "b", "0")
    assert assumed(circuit, "X1", "subcircuit taken as a bipolar")
