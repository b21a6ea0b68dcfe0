from __future__ import annotations

import pytest
from numpy.testing import assert_allclose

from checker.circuit.rails import volts_of_name
from checker.circuit.regulators import regulated_volts
from checker.intent.types import Intent, RailIntent
from checker.trouble import InputTrouble
from tests.circuit.make import SAID, assumed, ends_of, kicad, kicad_part, resistor, spice, spice_part, value_of, volts
from tests.whole import set_up_from


@pytest.mark.parametrize(
    ("name", "expected"),
    [
        ("+12V", 12.0),
        ("+12v", 12.0),
        ("-12V", -12.0),
        ("/psu/-15V", -15.0),
        ("5V", 5.0),
        ("+3V3", 3.3),
        ("3V3", 3.3),
        ("+3.3V", 3.3),
        ("V33", 3.3),
        ("V33a", 3.3),
        ("P3V3", 3.3),
        ("N12V", -12.0),
        ("PLUS3V3", 3.3),
        ("MINUS5V", -5.0),
        ("2,75V", 2.75),
        ("+5V-A", 5.0),
        ("+12V_in", 12.0),
        ("+5VD", 5.0),
        ("VCC_3V3", 3.3),
        ("VDD5V", 5.0),
        ("+13.8V", 13.8),
        ("-12", -12.0),
        ("VCC", None),
        ("12V_Switch", None),
        ("+5V_EN", None),
        ("FB_12V", None),
        ("12", None),
        ("+2", None),
        ("V12", None),
        ("OUT", None),
    ],
)
def test_volts_that_a_net_name_states(name: str, expected: float | None) -> None:
    assert volts_of_name(name) == expected


def test_a_chain_of_sources_makes_rails() -> None:
    circuit = spice(volts("V1", "9V 0", 9.0), volts("V2", "top 9V", 6.0), spice_part("R1", "top 0", 1e3))
    rails = {rail.net: rail for rail in circuit.rails}
    assert_allclose([rails["9V"].volts, rails["top"].volts], [9.0, 15.0], rtol=1e-12)  # exact sums
    assert rails["top"].source == "element"
    assert circuit.voltages.names[rails["top"].element] == "V2"


def test_a_source_that_carries_signal_is_no_rail() -> None:
    circuit = spice(volts("V1", "in 0", 0.5, ac=1.0), spice_part("R1", "in 0", 1e3))
    assert circuit.rails == ()


def test_an_ammeter_passes_the_rail_on() -> None:
    circuit = spice(volts("V1", "a 0", 5.0), volts("VM", "a b", 0.0), spice_part("R1", "b 0", 1e3))
    assert {rail.net: rail.volts for rail in circuit.rails} == {"a": 5.0, "b": 5.0}
    assert {circuit.voltages.names[rail.element] for rail in circuit.rails} == {"V1"}


def test_a_net_name_makes_a_rail_with_its_own_source_and_a_remark() -> None:
    circuit = kicad(resistor("R1", "+12V", "GND"))
    (rail,) = circuit.rails
    assert (rail.net, rail.volts, rail.source) == ("+12V", 12.0, "net name")
    assert circuit.voltages.names[rail.element] == "rail:+12V"
    assert ends_of(circuit, "rail:+12V") == ("+12V", "GND")
    assert assumed(circuit, "+12V taken as 12 V from its name")


@pytest.mark.parametrize("name", ["VCC", "VDD", "VEE", "V+", "+V", "VBAT", "/amp/VCC"])
def test_a_supply_without_a_number_is_unknown_and_blocks(name: str) -> None:
    circuit = kicad(resistor("R1", name, "GND"))
    (unknown,) = circuit.unknowns
    assert unknown.datum == f"volts of {name}"
    assert unknown.supply == f'[rails] "{name.rsplit("/", 1)[-1]}" = "…"'
    assert unknown.blocks_dc and unknown.nets == (name,)


def test_a_supply_behind_a_filter_resistor_is_not_unknown() -> None:
    circuit = kicad(resistor("R1", "+12V", "VCC", "100"), resistor("R2", "VCC", "GND"))
    assert circuit.unknowns == ()


def test_the_intent_outranks_a_net_name() -> None:
    intent = Intent(rails=(RailIntent(net="+12V", volts=9.0, origin=SAID, tolerance=0.1, may_be_absent=True),))
    circuit = kicad(resistor("R1", "/a/+12V", "GND"), intent=intent)
    (rail,) = circuit.rails
    assert (rail.volts, rail.source, rail.tolerance, rail.may_be_absent) == (9.0, "intent", 0.1, True)
    assert value_of(circuit, "rail:/a/+12V") == 9.0
    assert assumed(circuit, "9 V as declared, although its name says 12 V")


def test_an_element_outranks_the_intent_but_keeps_its_tolerance() -> None:
    intent = Intent(rails=(RailIntent(net="VCC", volts=15.0, origin=SAID, tolerance=0.05),))
    circuit = spice(volts("V1", "VCC 0", 12.0), spice_part("R1", "VCC 0", 1e3), intent=intent)
    (rail,) = circuit.rails
    assert (rail.volts, rail.source, rail.tolerance) == (12.0, "element", 0.05)
    assert circuit.voltages.names == ("V1",)
    assert assumed(circuit, "declared 15 V, but V1 holds it at 12 V")


def test_a_declared_rail_that_does_not_exist_stops_with_line_and_suggestion() -> None:
    intent = Intent(rails=(RailIntent(net="+21V", volts=12.0, origin=SAID),))
    with pytest.raises(InputTrouble, match=r"board\.intent\.toml:7: .*'\+21V'.*'\+12V'"):
        kicad(resistor("R1", "+12V", "GND"), intent=intent)


def test_two_names_for_one_rail_do_not_fight() -> None:
    circuit = kicad(resistor("R1", "+12V", "+12V_in", "0R"), resistor("R2", "+12V_in", "GND"))
    assert circuit.voltages.names == ("R1", "rail:+12V")


def test_a_link_to_another_rail_is_told() -> None:
    circuit = kicad(resistor("R1", "+12V", "+15V", "0R"), resistor("R2", "+15V", "GND"))
    assert assumed(circuit, "+15V is held at 12 V, although its name says 15 V")


def test_sources_that_contradict_each_other_are_told() -> None:
    circuit = spice(volts("V1", "a 0", 5.0), volts("V2", "a 0", 6.0), spice_part("R1", "a 0", 1e3))
    assert circuit.voltages.names == ("V1",)
    assert [(unknown.ref, unknown.datum) for unknown in circuit.unknowns] == [("V2", "one voltage between a and 0")]
    assert assumed(circuit, "V2", "holds 6 V between nets that other sources hold at 5 V")


def test_sources_in_parallel_that_agree_are_one() -> None:
    circuit = spice(volts("V1", "a 0", 5.0), volts("V2", "a 0", 5.0), spice_part("R1", "a 0", 1e3))
    assert circuit.voltages.names == ("V1",) and circuit.unknowns == ()


@pytest.mark.parametrize(
    ("value", "description", "expected"),
    [
        ("LM7805", "", 5.0),
        ("MC78L12", "", 12.0),
        ("LM7915", "", -15.0),
        ("AMS1117-3.3", "", 3.3),
        ("AP1117-33", "", 3.3),
        ("LP2950-5.0_TO92", "", 5.0),
        ("MCP1700-3302E", "", 3.3),
        ("TPS77001", "LDO regulator", None),
        ("LM317", "", None),
        ("LM358", "", None),
        ("XC-2.5", "", None),
    ],
)
def test_volts_that_a_regulator_states(value: str, description: str, expected: float | None) -> None:
    part = kicad_part("U1", "my:REG", value, {"1": "a"}, description=description)
    assert regulated_volts(part) == expected


def test_a_fixed_regulator_makes_a_rail_if_its_common_pin_is_on_ground() -> None:
    pins = {"1": "raw|VI|power_in", "2": "GND|GND|power_in", "3": "VCC|VO|power_out"}
    circuit = kicad(kicad_part("U1", "Regulator_Linear:L7805", "L7805", pins), resistor("R1", "VCC", "GND"))
    assert [(rail.net, rail.volts, rail.source) for rail in circuit.rails] == [("VCC", 5.0, "element")]
    assert circuit.unknowns == ()
    assert assumed(circuit, "VCC taken as 5 V, the output of U1 (L7805)")
    lifted = kicad_part("U1", "Regulator_Linear:L7805", "L7805", pins | {"2": "x|GND|power_in"})
    assert kicad(lifted, resistor("R1", "VCC", "GND")).rails == ()


@pytest.mark.parametrize(("line", "volts"), [("V2 0 -V 15 Rser=8", -15.0), ("V2 -V 0 -15 Rser=8", -15.0)])
def test_a_named_supply_behind_the_resistance_of_its_source(line: str, volts: float) -> None:
    """Its name says no volts, and need not: the source feeds it."""
    setup = set_up_from(f"{line}\nR1 -V 0 1g\nR2 -V B 1meg\nR3 B 0 1meg\nQ1 0 B E QN\nRE E -V 10k\n")
    assert not setup.circuit.unknowns
    assert setup.point.v_v[0, setup.circuit.node("-V")] == pytest.approx(volts, rel=1e-3)
