"""Field-effect transistors from both formats: kind, pins, parameters, and what is said where something is missing."""

from __future__ import annotations

import numpy as np
import pytest

from checker.circuit.types import Circuit
from checker.constants import OXIDE_F_PER_M
from checker.netlist.types import Model, Part
from tests.circuit.make import assumed, kicad, kicad_part, model, resistor, spice, spice_part, volts

SOT23 = "Package_TO_SOT_SMD:SOT-23"
JFET = model("JX", "njf", vto=-2.5, beta=2e-3, lambda_=0.0)


def nets_of(circuit: Circuit, name: str) -> tuple[str, ...]:
    """Nets of a device in the order of its table."""
    kind, j = circuit.find_device(name)
    return tuple(circuit.nets[node] for node in circuit.devices[kind].nodes[j])


def param(circuit: Circuit, name: str, key: str) -> float:
    """One parameter of a device."""
    kind, j = circuit.find_device(name)
    return float(circuit.devices[kind].params[key][0, j])


def polarity(circuit: Circuit, name: str) -> float:
    """+1 for N channel."""
    kind, j = circuit.find_device(name)
    return float(circuit.devices[kind].polarity[j])


# --- SPICE text ---------------------------------------------------------------------------------------------
def test_a_junction_fet_is_drain_gate_source() -> None:
    circuit = spice(spice_part("J1", "d g s", model="JX", params={"area": 2.0}), models=[JFET])
    assert circuit.find_device("J1") == ("jfet", 0)
    assert nets_of(circuit, "J1") == ("d", "g", "s")
    assert (param(circuit, "J1", "vto"), param(circuit, "J1", "beta")) == (-2.5, 4e-3)
    assert circuit.parts["J1"].kind == "fet"
    assert circuit.parts["J1"].terminals == {"D": "d", "G": "g", "S": "s"}


def test_a_mosfet_has_a_body_its_own_source_where_none_is_written() -> None:
    models = [model("MX", "nmos", vto=1.5, kp=1e-4)]
    four = spice(spice_part("M1", "d g s b", model="MX", params={"w": 2e-5, "l": 4e-6}), models=models)
    assert nets_of(four, "M1") == ("d", "g", "s", "b")
    assert (param(four, "M1", "w"), param(four, "M1", "l")) == (2e-5, 4e-6)
    three = spice(spice_part("M1", "d g s", model="MX"), models=models)
    assert nets_of(three, "M1") == ("d", "g", "s", "s")


@pytest.mark.parametrize(("kind", "vto", "sign", "inner"), [("nmos", 2.0, 1.0, 2.0), ("pmos", -2.0, -1.0, 2.0),
                                                            ("pmos", 1.0, -1.0, -1.0)])  # fmt: skip
def test_thresholds_are_counted_for_enhancement(kind: str, vto: float, sign: float, inner: float) -> None:
    circuit = spice(spice_part("M1", "d g s", model="MX"), models=[model("MX", kind, vto=vto)])
    assert polarity(circuit, "M1") == param(circuit, "M1", "channel") == sign
    assert param(circuit, "M1", "vto") == inner


def test_kp_gamma_phi_and_oxide_follow_from_the_process() -> None:
    """KP = u0 COX, GAMMA = sqrt(2 eps q N)/COX, PHI = 2 VT ln(N/ni): worked out here from the constants' values."""
    given = {"vto": 0.8, "tox": 5e-8, "u0": 600.0, "nsub": 1e15, "ld": 5e-7}
    circuit = spice(
        spice_part("M1", "d g s", model="MX", params={"w": 1e-5, "l": 5e-6}), models=[model("MX", "nmos", **given)]
    )
    cox = OXIDE_F_PER_M / 5e-8
    assert param(circuit, "M1", "kp") == pytest.approx(600e-4 * cox, rel=1e-12)
    assert param(circuit, "M1", "l") == pytest.approx(4e-6)
    assert param(circuit, "M1", "cox") == pytest.approx(cox * 1e-5 * 4e-6, rel=1e-12)
    assert param(circuit, "M1", "phi") == pytest.approx(0.5763, rel=1e-3)
    assert param(circuit, "M1", "gamma") == pytest.approx(0.2640, rel=2e-3)
    assert not assumed(circuit, "not used")


@pytest.mark.parametrize("ref", ["J1", "M1"])
def test_parallel_devices_carry_their_number_of_times_the_current(ref: str) -> None:
    models = [model("X", "njf" if ref == "J1" else "nmos", vto=-2.0, rd=10.0)]
    one = spice(spice_part(ref, "d g s", model="X"), models=models)
    three = spice(spice_part(ref, "d g s", model="X", params={"m": 3.0}), models=models)
    key = "beta" if ref == "J1" else "w"
    assert param(three, ref, key) == pytest.approx(3.0 * param(one, ref, key))
    assert param(three, ref, "rd") == pytest.approx(10.0 / 3.0)


def test_a_part_number_stands_for_its_card() -> None:
    circuit = spice(spice_part("J1", "d g s", model="J310", text="J310"), resistor_to_ground("d"))
    assert param(circuit, "J1", "vto") == -3.3
    assert not circuit.unknowns
    assert assumed(circuit, "J1", "the card J310 is used")
    assert circuit.parts["J1"].ratings.v_max_v == 25


def resistor_to_ground(net: str) -> Part:
    return spice_part("R1", f"{net} 0", 1e3)


@pytest.mark.parametrize(
    ("part", "models", "datum"),
    [
        (spice_part("M1", "d g s b", model="MX"), [model("MX", "nmos", level=8.0)], "a level-1 model of M1"),
        (spice_part("J1", "d g s", model="NOTHING"), [], "model of J1"),
        (spice_part("J1", "d g s", model="QX"), [model("QX", "npn")], "a field-effect model of J1"),
    ],
)
def test_what_cannot_be_solved_is_named_and_its_gate_is_free(part: Part, models: list[Model], datum: str) -> None:
    parts = [spice_part(f"R{place}", f"{net} 0", 1e3) for place, net in enumerate("dgs", start=1)]
    circuit = spice(part, *parts, models=models)
    (unknown,) = circuit.unknowns
    assert (unknown.ref, unknown.datum, unknown.blocks_dc) == (part.ref, datum, True)
    assert "d" in unknown.nets and "s" in unknown.nets and "g" not in unknown.nets


def test_parameters_in_vain_are_told() -> None:
    circuit = spice(spice_part("M1", "d g s", model="MX"), models=[model("MX", "nmos", vto=1.0, delta=0.4, tox=1e-7)])
    assert assumed(circuit, ".model MX: not used: delta")


AREAS = {"w": 1e-5, "l": 1e-6, "ad": 2e-11, "as": 3e-11, "pd": 1.2e-5, "ps": 1.6e-5, "nrd": 2.0}


def test_junctions_follow_from_areas_and_perimeters() -> None:
    """JS and CJ times the area, CJSW times the perimeter, RSH times the squares (one where they are not given)."""
    given = {"vto": 0.8, "js": 1e-3, "cj": 4e-4, "cjsw": 3e-10, "mjsw": 0.3, "rsh": 25.0}
    circuit = spice(spice_part("M1", "d g s 0", model="MX", params=AREAS), models=[model("MX", "nmos", **given)])
    wanted = {"isd": 2e-14, "iss": 3e-14, "cbd": 8e-15, "cbs": 12e-15, "cbdsw": 3.6e-15, "cbssw": 4.8e-15,
              "mjsw": 0.3, "rd": 50.0, "rs": 25.0}  # fmt: skip
    for key, value in wanted.items():
        assert param(circuit, "M1", key) == pytest.approx(value, rel=1e-12), key
    assert not assumed(circuit, "not used")


def test_whole_figures_outrank_those_per_area() -> None:
    given = {"vto": 0.8, "cbd": 7e-13, "rd": 3.0, "is": 5e-15, "cj": 4e-4, "rsh": 25.0}
    circuit = spice(spice_part("M1", "d g s 0", model="MX", params=AREAS), models=[model("MX", "nmos", **given)])
    wanted = {"isd": 5e-15, "iss": 5e-15, "cbd": 7e-13, "cbs": 12e-15, "rd": 3.0, "rs": 25.0}
    for key, value in wanted.items():
        assert param(circuit, "M1", key) == pytest.approx(value, rel=1e-12), key


def test_figures_per_area_without_an_area_are_told() -> None:
    given = {"vto": 0.8, "js": 1e-3, "cj": 4e-4, "cjsw": 3e-10, "nfs": 1e11}
    circuit = spice(spice_part("M1", "d g s 0", model="MX"), models=[model("MX", "nmos", **given)])
    assert assumed(circuit, ".model MX: not used: cj, cjsw, js, nfs")
    assert param(circuit, "M1", "isd") == param(circuit, "M1", "iss") == 1e-14
    assert param(circuit, "M1", "weak") == 0.0


def test_three_in_parallel_have_three_times_the_junction() -> None:
    given = {"vto": 0.8, "js": 1e-3, "cj": 4e-4, "cjsw": 3e-10}
    part = spice_part("M1", "d g s 0", model="MX", params={**AREAS, "m": 3.0})
    circuit = spice(part, models=[model("MX", "nmos", **given)])
    for key, value in {"isd": 6e-14, "cbd": 24e-15, "cbdsw": 10.8e-15}.items():
        assert param(circuit, "M1", key) == pytest.approx(value, rel=1e-12)


def test_slope_below_threshold_follows_from_surface_states() -> None:
    """n = 1 + q NFS/COX + GAMMA/(2 sqrt PHI), NFS per square centimetre; worked out from the constants' values."""
    given = {"vto": 0.8, "tox": 2e-8, "nfs": 2e11, "gamma": 0.5, "phi": 0.64}
    circuit = spice(spice_part("M1", "d g s", model="MX"), models=[model("MX", "nmos", **given)])
    cox = OXIDE_F_PER_M / 2e-8
    assert param(circuit, "M1", "weak") == pytest.approx(1.0 + 1.602176634e-19 * 2e15 / cox + 0.5 / 1.6, rel=1e-12)
    assert not assumed(circuit, "not used")


def test_what_stands_beside_a_model_in_vain_is_told() -> None:
    parts = [
        spice_part("M1", "d g s", model="MX", params={"w": 1e-5, "temp": 80.0, "ic": 1.0}),
        spice_part("J1", "d g s", model="JX", params={"area": 2.0, "dtemp": 5.0}),
        spice_part("M2", "d g s", model="2N7002", text="2N7002", params={"w": 1e-5}),
    ]
    circuit = spice(*parts, models=[model("MX", "nmos", vto=1.0), model("JX", "njf", vto=-2.0)])
    assert assumed(circuit, "M1: not used: temp")
    assert assumed(circuit, "J1: not used: dtemp")
    assert assumed(circuit, "M2: not used: w")


def test_gate_junction_of_a_model_that_states_it() -> None:
    given = {"vto": -2.0, "beta": 1e-3, "isr": 1e-12, "nr": 2.0, "alpha": 1e-4, "vk": 80.0, "bv": 30.0, "ibv": 1e-6}
    part = spice_part("J1", "d g s", model="JX", params={"area": 2.0})
    circuit = spice(part, models=[model("JX", "njf", **given)])
    scaled = {**given, "beta": 2e-3, "isr": 2e-12, "ibv": 2e-6}
    for key, value in scaled.items():
        assert param(circuit, "J1", key) == pytest.approx(value, rel=1e-12), key
    assert not assumed(circuit, "not used")


# --- schematic ----------------------------------------------------------------------------------------------
def schematic(*parts: Part) -> Circuit:
    """A board with ground and a supply around."""
    return kicad(*parts, resistor("R98", "d", "+12V"), resistor("R97", "s", "GND"), resistor("R96", "g", "GND"))


@pytest.mark.parametrize(
    ("symbol", "value", "pins", "family", "order"),
    [
        ("Device:Q_NMOS_GSD", "2N7002", {"1": "g|G", "2": "s|S", "3": "d|D"}, "mosfet", ("d", "g", "s", "s")),
        ("Transistor_FET:BSS84", "BSS84", {"1": "g|G", "2": "s|S", "3": "d|D"}, "mosfet", ("d", "g", "s", "s")),
        ("Device:Q_NJFET_DGS", "2N3819", {"1": "d|D", "2": "g|G", "3": "s|S"}, "jfet", ("d", "g", "s")),
        ("my:TRANSISTOR", "2N7002", {"1": "g", "2": "s", "3": "d"}, "mosfet", ("d", "g", "s", "s")),
        ("Device:Q_PMOS_GDS", "XYZ", {"1": "g", "2": "d", "3": "s"}, "mosfet", ("d", "g", "s", "s")),
    ],
)
def test_symbols_and_pads(symbol: str, value: str, pins: dict[str, str], family: str, order: tuple[str, ...]) -> None:
    circuit = schematic(kicad_part("Q1", symbol, value, pins, footprint=SOT23))
    assert circuit.find_device("Q1") == (family, 0)
    assert nets_of(circuit, "Q1") == order
    assert not [unknown for unknown in circuit.unknowns if unknown.ref == "Q1"]


@pytest.mark.parametrize(
    ("symbol", "description", "family", "sign"),
    [
        ("Device:Q_NMOS_DGS", "", "mosfet", 1.0),
        ("Device:Q_PMOS_DGS", "", "mosfet", -1.0),
        ("Device:Q_NJFET_DGS", "", "jfet", 1.0),
        ("my:UNHEARD_OF", "P-Channel JFET", "jfet", -1.0),
        ("my:UNHEARD_OF", "20V Vds, P-Channel logic level enhancement mode MOSFET", "mosfet", -1.0),
        ("device:MOSFET_N", "", "mosfet", 1.0),
    ],
)
def test_an_unknown_type_gets_the_generic_card_of_its_kind(
    symbol: str, description: str, family: str, sign: float
) -> None:
    pins = {"1": "d|D", "2": "g|G", "3": "s|S"}
    circuit = schematic(kicad_part("Q1", symbol, "XX99", pins, description=description))
    assert circuit.find_device("Q1")[0] == family
    assert polarity(circuit, "Q1") == sign
    assert assumed(circuit, "Q1", "generic", "figures used")


def test_an_insulated_gate_bipolar_is_not_taken_for_anything_else() -> None:
    pins = {"1": "g|G", "2": "d|C", "3": "s|E"}
    circuit = schematic(kicad_part("Q1", "my:IGBT", "IRG4", pins, description="IGBT, 600 V"))
    assert [unknown.datum for unknown in circuit.unknowns if unknown.ref == "Q1"] == ["a model of the IGBT Q1"]


def test_a_gate_resistor_alone_does_not_feed_a_board() -> None:
    """A MOSFET's gate brings no supply: what hangs on its drain and source is still unsupplied."""
    pins = {"1": "d|D", "2": "g|G", "3": "s|S"}
    parts = (
        kicad_part("Q1", "Device:Q_NMOS_DGS", "2N7002", pins),
        resistor("R1", "g", "+5V"),
        resistor("R2", "d", "s"),
        resistor("R3", "s", "GND"),
    )
    circuit = kicad(*parts)
    assert any("d" in unknown.nets or "s" in unknown.nets for unknown in circuit.unknowns)


def test_the_polarity_column_is_that_of_the_kind() -> None:
    circuit = spice(
        volts("V1", "a 0", 5.0), spice_part("J1", "a b 0", model="P"), models=[model("P", "pjf", vto=3.0, beta=1e-3)]
    )
    np.testing.assert_array_equal(circuit.devices["jfet"].polarity, [-1.0])
    assert param(circuit, "J1", "vto") == -3.0
