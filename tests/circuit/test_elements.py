from __future__ import annotations

import pytest
from numpy.testing import assert_allclose

from checker.circuit.changes import nominal, with_changes
from checker.intent.types import Intent, PartIntent
from checker.netlist.types import Part, Source
from checker.trouble import InputTrouble
from tests.circuit.make import (
    SAID,
    assumed,
    capacitor,
    ends_of,
    kicad,
    kicad_part,
    resistor,
    spice,
    spice_part,
    value_of,
    volts,
)


def test_values_and_polarity_of_ideal_elements() -> None:
    circuit = spice(
        spice_part("R1", "a 0", 1e3),
        spice_part("C1", "a b", 1e-9),
        spice_part("L1", "b 0", 1e-6),
        volts("V1", "0 b", 2.0),
        spice_part("I1", "a b", source=Source(dc=1e-3)),
    )
    found = [value_of(circuit, name) for name in ("R1", "C1", "L1", "V1", "I1")]
    assert found == [1e3, 1e-9, 1e-6, 2.0, 1e-3]
    assert ends_of(circuit, "V1") == ("0", "b")
    assert ends_of(circuit, "I1") == ("a", "b")
    assert circuit.size == 1 and circuit.scenarios[0].kind == "nominal"


def test_a_signal_source_rests_at_its_dc_or_the_rest_of_its_waveform() -> None:
    circuit = spice(
        volts("V1", "a 0", None, ac=1.0),
        volts("V2", "b 0", None, waveform="sin", rest=0.7),
        spice_part("R1", "a b", 1e3),
    )
    assert (value_of(circuit, "V1"), value_of(circuit, "V2")) == (0.0, 0.7)


def test_zero_ohm_is_a_wire() -> None:
    circuit = spice(spice_part("R1", "a b", 0.0), spice_part("R2", "b 0", 1e3), spice_part("R3", "a 0", 1e3))
    assert circuit.resistors.names == ("R2", "R3")
    assert ends_of(circuit, "R1") == ("a", "b") and value_of(circuit, "R1") == 0.0


def test_a_second_wire_in_parallel_is_left_out() -> None:
    parts = [resistor("R1", "a", "GND", "0R"), resistor("R2", "a", "GND", "0R"), resistor("R3", "a", "GND")]
    circuit = kicad(*parts)
    assert circuit.voltages.names == ("R1",)
    assert assumed(circuit, "R2", "held at that voltage already")


def test_both_ends_on_one_net_is_left_out() -> None:
    circuit = spice(spice_part("R1", "a a", 1e3), spice_part("R2", "a 0", 1e3))
    assert circuit.resistors.names == ("R2",)
    assert assumed(circuit, "R1: both ends on one net")


def test_written_parasitics_are_parts_of_their_own() -> None:
    circuit = spice(
        spice_part("L1", "a b", 1e-3, params={"rser": 2.0, "rpar": 1e5}),
        spice_part("C1", "b 0", 1e-6, params={"rser": 0.1}),
        spice_part("V1", "a 0", source=Source(dc=5.0), params={"rser": 1.0}),
    )
    assert ends_of(circuit, "L1") == ("L1.n", "b") and ends_of(circuit, "L1.rser") == ("a", "L1.n")
    assert ends_of(circuit, "L1.rpar") == ("a", "b")
    assert [value_of(circuit, f"{name}.rser") for name in ("L1", "C1", "V1")] == [2.0, 0.1, 1.0]


def test_parallel_count() -> None:
    circuit = spice(spice_part("R1", "a 0", 100.0, params={"m": 4.0}), spice_part("C1", "a 0", 1e-9, params={"m": 4.0}))
    assert (value_of(circuit, "R1"), value_of(circuit, "C1")) == (25.0, 4e-9)


def test_a_mega_that_became_a_milli_is_told() -> None:
    assert assumed(spice(spice_part("R1", "a 0", 1e-3, text="1M")), "R1: 1M read as milliohms")
    assert assumed(kicad(resistor("R1", "a", "GND", "3.3m")), "R1: 3.3m read as milliohms")
    assert not assumed(kicad(resistor("R1", "a", "GND", "1M"), resistor("R2", "a", "GND", "5mOhm")), "milliohms")


def test_pairs_that_enter_no_equation_are_told() -> None:
    circuit = spice(spice_part("R1", "a 0", 1e3, params={"tc1": 1e-3, "m": 2.0}), spice_part("R2", "a 0", 1e3))
    assert assumed(circuit, "R1: written and not used: tc1")
    assert not assumed(circuit, "R2: written")


def test_currents_in_parallel_add() -> None:
    circuit = spice(spice_part("I1", "a 0", source=Source(dc=1e-3), params={"m": 3.0}), spice_part("R1", "a 0", 1e3))
    assert value_of(circuit, "I1") == pytest.approx(3e-3)


def test_a_tolerance_in_spice_text_is_in_percent() -> None:
    circuit = spice(
        spice_part("R1", "a 0", 1e3, params={"tol": 5.0}), spice_part("R2", "a 0", 1e3, params={"tol": 0.1})
    )
    told = [circuit.parts[ref].value for ref in ("R1", "R2")]
    assert [value and value.tolerance for value in told] == [0.05, 0.001]


@pytest.mark.parametrize(("nets", "held"), [("V- 0", 15.0), ("0 V-", -15.0)])
def test_a_source_with_resistance_feeds_its_net_whichever_way_it_is_drawn(nets: str, held: float) -> None:
    """A net named as a supply that hangs on a known voltage by a small resistor needs no declared volts."""
    source = spice_part("V1", nets, source=Source(dc=15.0), params={"rser": 8.0})
    circuit = spice(source, spice_part("R1", "V- 0", 1e3))
    assert circuit.unknowns == ()
    assert [(rail.net, rail.volts) for rail in circuit.rails] == [("V1.n", held)]
    assert set(ends_of(circuit, "V1.rser")) == {"V-", "V1.n"}


def test_coupled_inductors_also_in_threes_and_inside_a_subcircuit() -> None:
    coils = [spice_part(f"X1.L{place}", f"n{place} 0", 1e-6, letter="L") for place in (1, 2, 3)]
    circuit = spice(*coils, spice_part("X1.K1", "", 0.9, letter="K", controls=("L1", "X1.L2", "L3")))
    assert circuit.couplings.pair.tolist() == [[0, 1], [0, 2], [1, 2]]
    assert circuit.couplings.k.tolist() == [[0.9, 0.9, 0.9]]


@pytest.mark.parametrize(("names", "factor"), [(("L1", "L9"), 0.9), (("L1",), 0.9), (("L1", "L2"), 1.5)])
def test_a_coupling_that_cannot_be_is_told(names: tuple[str, ...], factor: float) -> None:
    coils = [spice_part("L1", "a 0", 1e-6), spice_part("L2", "b 0", 1e-6)]
    circuit = spice(*coils, spice_part("K1", "", factor, controls=names))
    assert circuit.couplings.names == ()
    assert [(unknown.ref, unknown.blocks_dc) for unknown in circuit.unknowns] == [("K1", False)]


# --- values -------------------------------------------------------------------------------------------------


def test_schematic_values_with_tolerances_from_text_intent_and_assumption() -> None:
    intent = Intent(parts=(PartIntent(ref="R2", origin=SAID, tolerance=0.001),))
    circuit = kicad(
        resistor("R1", "a", "GND", "4k7 1%"), resistor("R2", "a", "GND", "10k"), resistor("R3", "a", "GND", "1M"),
        capacitor("C1", "a", "GND", "4n7"), intent=intent,
    )  # fmt: skip
    assert_allclose(
        [value_of(circuit, name) for name in ("R1", "R2", "R3", "C1")], [4700, 1e4, 1e6, 4.7e-9], rtol=1e-12
    )
    values = [circuit.parts[name].value for name in ("R1", "R2", "R3", "C1")]
    assert [value.tolerance for value in values if value] == [0.01, 0.001, 0.05, 0.20]
    assert assumed(circuit, "resistors without a written tolerance: ±5 %")


def test_unknown_values_block_only_where_they_carry_direct_current() -> None:
    circuit = kicad(
        resistor("R1", "a", "b", "TODO"), capacitor("C1", "a", "b", "C"),
        kicad_part("L1", "Device:L", "30 turns", {"1": "b", "2": "c"}),
        resistor("R2", "a", "GND"), resistor("R3", "b", "GND"), resistor("R4", "c", "GND"),
    )  # fmt: skip
    assert {unknown.datum: unknown.blocks_dc for unknown in circuit.unknowns} == {
        "value of C1": False,
        "value of L1": False,
        "value of R1": True,
    }
    assert value_of(circuit, "L1") == 0.0  # a wire at DC


def test_the_intent_gives_a_value_that_the_netlist_lacks() -> None:
    intent = Intent(parts=(PartIntent(ref="R1", origin=SAID, resistance_ohm=330.0),))
    circuit = kicad(resistor("R1", "a", "GND", "TODO"), intent=intent)
    assert value_of(circuit, "R1") == 330.0 and circuit.unknowns == ()


def test_a_trimmer_stands_in_the_middle_of_its_range() -> None:
    circuit = kicad(capacitor("C1", "a", "GND", "2-10pF"), resistor("R1", "a", "GND"))
    assert_allclose(value_of(circuit, "C1"), 6e-12, rtol=1e-12)
    assert assumed(circuit, "C1", "middle of its range")
    ends = with_changes(circuit, (nominal(), *circuit.states)).capacitors.value[:, 0]
    assert_allclose(ends, [6e-12, 2e-12, 10e-12], rtol=1e-12)
    assert [state.kind for state in circuit.states] == ["corner", "corner"]


# --- composed parts -----------------------------------------------------------------------------------------


@pytest.mark.parametrize("pins", [{"1": "a", "2": "w", "3": "GND"}, {"1": "a", "2": "GND", "W": "w"}])
def test_a_potentiometer_stands_at_mid_travel(pins: dict[str, str]) -> None:
    circuit = kicad(kicad_part("RV1", "Device:R_Potentiometer", "10k", pins), resistor("R1", "w", "GND"))
    assert (ends_of(circuit, "RV1.a"), ends_of(circuit, "RV1.b")) == (("a", "w"), ("w", "GND"))
    assert value_of(circuit, "RV1.a") == value_of(circuit, "RV1.b") == 5e3
    assert assumed(circuit, "RV1: potentiometer taken at mid travel")


@pytest.mark.parametrize(
    ("value", "tolerance"), [("10kB", 0.05), ("50kA", 0.05), ("A500K", 0.05), ("10k 20%", 0.2), ("B100k LIN", 0.05)]
)
def test_the_letter_of_a_potentiometer_is_its_taper(value: str, tolerance: float) -> None:
    """Behind a fixed resistor's value B means 0.1 % (IEC 60062), behind a potentiometer's a linear track."""
    pins = {"1": "a", "2": "w", "3": "GND"}
    circuit = kicad(kicad_part("RV1", "Device:R_Potentiometer", value, pins), resistor("R1", "w", "GND"))
    found = circuit.parts["RV1"].value
    assert found is not None and found.tolerance == tolerance
    fixed = kicad(resistor("R1", "a", "GND", "10kB")).parts["R1"].value
    assert fixed is not None and fixed.tolerance == 0.001


def test_a_coded_coil_has_the_tolerance_of_its_letter() -> None:
    circuit = kicad(kicad_part("L1", "Device:L", "472K", {"1": "a", "2": "GND"}), resistor("R1", "a", "GND"))
    found = circuit.parts["L1"].value
    assert found is not None and (found.si, found.tolerance) == (4.7e-3, 0.1)


def test_a_rheostat_keeps_the_half_that_is_used() -> None:
    pins = {"1": "a", "2": "b", "3": "b"}
    circuit = kicad(
        kicad_part("RV1", "Device:R_POT", "10k", pins), resistor("R1", "b", "GND"), resistor("R2", "a", "GND")
    )
    assert "RV1.a" in circuit.resistors.names and "RV1.b" not in circuit.resistors.names


def test_a_resistor_array_joins_opposite_pins() -> None:
    pins = {"1": "a", "2": "b", "7": "GND", "8": "GND"}
    circuit = kicad(kicad_part("RN1", "Device:R_Pack04", "4k7", pins))
    assert ends_of(circuit, "RN1.1") == ("a", "GND") and ends_of(circuit, "RN1.2") == ("b", "GND")


def test_a_battery_with_its_volts_is_a_rail() -> None:
    circuit = kicad(kicad_part("BT1", "Device:Battery", "9V", {"1": "a|+", "2": "GND|-"}), resistor("R1", "a", "GND"))
    assert [(rail.net, rail.volts) for rail in circuit.rails] == [("a", 9.0)]


def _relay(**pins: str) -> Part:
    return kicad_part("K1", "Relay:FINDER-32.21", "relay", pins)


def test_a_relay_coil_from_the_intent() -> None:
    intent = Intent(parts=(PartIntent(ref="K1", origin=SAID, resistance_ohm=400.0, inductance_h=0.5),))
    circuit = kicad(_relay(A1="+12V", A2="c"), resistor("R1", "c", "GND"), intent=intent)
    assert ends_of(circuit, "K1.r") == ("+12V", "K1.n") and ends_of(circuit, "K1.l") == ("K1.n", "c")
    assert (value_of(circuit, "K1.r"), value_of(circuit, "K1.l")) == (400.0, 0.5)
    assert circuit.parts["K1"].kind == "coil" and circuit.unknowns == ()


def test_a_coil_without_named_pins_is_found_by_the_diode_across_it() -> None:
    intent = Intent(parts=(PartIntent(ref="K1", origin=SAID, resistance_ohm=400.0),))
    relay = kicad_part("K1", "my:RELAY", "HJR", {"1": "x", "2": "+12V", "3": "y", "5": "c"})
    diode = kicad_part("D1", "Device:D", "1N4148", {"1": "+12V|K", "2": "c|A"})
    circuit = kicad(relay, diode, resistor("R1", "c", "GND"), resistor("R2", "x", "GND"), intent=intent)
    assert ends_of(circuit, "K1.r") == ("+12V", "c")
    assert assumed(circuit, "K1", "a diode joins")
    assert [unknown.datum for unknown in circuit.unknowns] == ["contacts of K1"]


def test_a_coil_whose_pins_cannot_be_told_stops() -> None:
    intent = Intent(parts=(PartIntent(ref="K1", origin=SAID, resistance_ohm=400.0),))
    relay = kicad_part("K1", "my:RELAY", "HJR", {"1": "x", "2": "+12V", "5": "c"})
    with pytest.raises(InputTrouble, match=r"toml:7: .*'K1'"):
        kicad(relay, resistor("R1", "c", "GND"), intent=intent)


def test_both_ends_of_a_potentiometer_are_corners() -> None:
    pins = {"1": "top", "2": "wiper", "3": "GND"}
    circuit = kicad(
        kicad_part("RV1", "Device:R_POT", "10k", pins), resistor("R1", "top", "GND"), resistor("R2", "wiper", "GND")
    )
    assert [(state.name, state.kind) for state in circuit.states] == [
        ("RV1 at 0 %", "corner"),
        ("RV1 at 100 %", "corner"),
    ]
    zero = {change.part: change.value for change in circuit.states[0].changes}
    assert zero == {"RV1.a": pytest.approx(10e3 * 2e-3), "RV1.b": pytest.approx(10e3 * 0.998)}


def test_a_trimmer_stays_where_it_is_set() -> None:
    pins = {"1": "top", "2": "wiper", "3": "GND"}
    trimmer = kicad_part("RV1", "Device:R_POT_TRIM", "10k", pins)
    assert kicad(trimmer, resistor("R1", "top", "GND"), resistor("R2", "wiper", "GND")).states == ()
