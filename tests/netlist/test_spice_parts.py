"""Elements of SPICE-style text, one letter after the other."""

from __future__ import annotations

import pytest

from checker.netlist.types import Netlist, Part, Source
from tests.netlist.conftest import Read


def part(netlist: Netlist, ref: str) -> Part:
    return next(part for part in netlist.parts if part.ref == ref)


def nets(part: Part) -> list[str]:
    return [pin.net for pin in part.pins]


def one(read: Read, line: str, extra: str = "") -> Part:
    """The part of one line in an otherwise plain deck."""
    return read(f"* one part\n{line}\nRload out 0 1k\n{extra}\n.end\n").parts[0]


@pytest.mark.parametrize(
    ("line", "number", "value"),
    [
        ("R1 a b 4.7k", 4700.0, "4.7k"),
        ("R1 a b 1M", 1e-3, "1M"),
        ("R1 a b 68kOhm", 68e3, "68kOhm"),
        ("R1 a b R=2k", 2e3, "2k"),
        ("R1 a b {2*1k+500}", 2500.0, "{2*1k+500}"),
        ("R1 a b '2*1k'", 2e3, "'2*1k'"),
        ("R1 a b 10k tol=5", 10e3, "10k"),
        ("R1 a b 10k ; ten", 10e3, "10k"),
        ("R1 a b 10k $ ten", 10e3, "10k"),
        ("R1 a b 10k $ten", 10e3, "10k"),
        ("R1 a b 10k\t$10k", 10e3, "10k"),
        ("R1 a b 10k // ten", 10e3, "10k"),
        ("R1\ta\tb\t10k\t\t", 10e3, "10k"),
        ("R1 a b\n+ 10k", 10e3, "10k"),
        ("R1 a b\n* between\n\n+ 10k", 10e3, "10k"),
        ("C1 a b 10uF 16v", 10e-6, "10uF 16v"),
        ("C1 a b 10µ IC=2", 10e-6, "10µ"),
        ("L1 a b 4,7uH", 4.7e-6, "4,7uH"),
        ("L1 a b 10mH Rser=0.2", 10e-3, "10mH"),
    ],
)
def test_passives(read: Read, line: str, number: float, value: str) -> None:
    found = one(read, line)
    assert found.number == pytest.approx(number, rel=1e-15)
    assert (found.value, nets(found), found.unknown) == (value, ["a", "b"], "")


@pytest.mark.parametrize(
    ("line", "percent"),
    [
        ("R1 a b 10k 1%", 1.0),
        ("R1 a b 10k +/-5%", 5.0),
        ("R1 a b 10k 2W 5% film", 5.0),
        ("R1 a b 10k 1/4W 0805", None),
        ("R1 a b 10k tol=5 1%", 5.0),
        ("C1 a b 10u 16V", None),
        ("C1 a b 1n NP0 2kV", None),
        ("L1 a b 10u (shielded) 2A", None),
    ],
)
def test_tolerances_and_ratings_behind_a_value(read: Read, line: str, percent: float | None) -> None:
    found = one(read, line)
    assert (found.params.get("tol"), found.unknown) == (percent, "")
    assert found.number is not None


def test_pairs_become_parameters(read: Read) -> None:
    assert one(read, "C1 a b 10u V=6.3 Rser = {2*3m} mfg=Some").params == {
        "v": 6.3,
        "rser": pytest.approx(6e-3),
    }
    assert one(read, "R1 a b 1 TC=0.005,1.7e-05").params == {"tc": 0.005, "tc2": 1.7e-05}


def test_resistor_with_a_model(read: Read) -> None:
    found = one(read, "R1 a b quiet 1k", ".model quiet res (noise=0)")
    assert (found.model, found.number) == ("quiet", 1e3)
    found = one(read, "R1 a b 1k quiet", ".model quiet res (noise=0)")
    assert (found.model, found.number) == ("quiet", 1e3)


@pytest.mark.parametrize(
    ("line", "source"),
    [
        ("V1 a 0 5", Source(dc=5.0)),
        ("V1 a 0 DC 5V", Source(dc=5.0)),
        ("V1 a 0 dc=15", Source(dc=15.0)),
        ("V1 a 0 DC=15 AC=1", Source(dc=15.0, ac=1.0)),
        ("V1 a 0 AC 1 45", Source(ac=1.0, ac_deg=45.0)),
        ("V1 a 0 AC", Source(ac=1.0)),
        ("V1 a 0 5 AC 0.5", Source(dc=5.0, ac=0.5)),
        ("V1 a 0 SIN(1 2 3k)", Source(waveform="sin", shape=(1.0, 2.0, 3e3), rest=1.0)),
        ("V1 a 0 sine (0V 10mV 60Hz)", Source(waveform="sin", shape=(0.0, 0.01, 60.0), rest=0.0)),
        ("V1 a 0 sin 0 1 1k", Source(waveform="sin", shape=(0.0, 1.0, 1e3), rest=0.0)),
        ("V1 a 0 sin(0 1 1k", Source(waveform="sin", shape=(0.0, 1.0, 1e3), rest=0.0)),
        ("V1 a 0\n+SIN 0 1 1k 0 0 0", Source(waveform="sin", shape=(0.0, 1.0, 1e3, 0.0, 0.0, 0.0), rest=0.0)),
        ("V1 a 0 PULSE(-0.5, 5, 1m)", Source(waveform="pulse", shape=(-0.5, 5.0, 1e-3), rest=-0.5)),
        ("V1 a 0 PWL(0 3 1m 5)", Source(waveform="pwl", shape=(0.0, 3.0, 1e-3, 5.0), rest=3.0)),
        ("V1 a 0 EXP(1 4 0 1u)", Source(waveform="exp", shape=(1.0, 4.0, 0.0, 1e-6), rest=1.0)),
        ("V1 a 0 ac sin(0 1u 1k)", Source(ac=1.0, waveform="sin", shape=(0.0, 1e-6, 1e3), rest=0.0)),
        ("V1 a 0 SINE(0 .1 1k) AC 2", Source(ac=2.0, waveform="sin", shape=(0.0, 0.1, 1e3), rest=0.0)),
        ("V1 a 0 ac=1 sin 0 600n 10k", Source(ac=1.0, waveform="sin", shape=(0.0, 600e-9, 10e3), rest=0.0)),
        ("V1 a 0 DC 2 SIN(1 1 1k)", Source(dc=2.0, waveform="sin", shape=(1.0, 1.0, 1e3), rest=1.0)),
        ("I1 a 0 5A", Source(dc=5.0)),
        ("I1 a 0 DC 1mA", Source(dc=1e-3)),
        ("V1 a 0", Source()),
    ],
)
def test_sources(read: Read, line: str, source: Source) -> None:
    found = one(read, line)
    assert (found.source, found.number, found.unknown) == (source, source.dc, "")


def test_a_source_keeps_its_series_resistance(read: Read) -> None:
    found = one(read, "V1 a 0 15V Rser=8")
    assert (found.number, found.params) == (15.0, {"rser": 8.0})


@pytest.mark.parametrize(
    ("line", "nodes", "model", "area"),
    [
        ("Q1 c b e BC547", ["c", "b", "e"], "BC547", None),
        ("Q1 c b e s BC547", ["c", "b", "e", "s"], "BC547", None),
        ("Q1 c b e [s] BC547", ["c", "b", "e", "s"], "BC547", None),
        ("Q1 c b e s t BC547", ["c", "b", "e", "s", "t"], "BC547", None),
        ("Q1 1 2 3 mod 6.67", ["1", "2", "3"], "mod", 6.67),
        ("Q1 1 2 3 mod area=2 off", ["1", "2", "3"], "mod", 2.0),
        ("Q1 N1 N2 N3 0 NPN", ["N1", "N2", "N3", "0"], "NPN", None),
        ("D1 a k 1N4148", ["a", "k"], "1N4148", None),
        ("D1 a k fast 3", ["a", "k"], "fast", 3.0),
        ("D1 $N_0001 $G_DGND fast $quick", ["$N_0001", "$G_DGND"], "fast", None),
        ("Q1 c N$1 e mod $mine", ["c", "N$1", "e"], "mod", None),
        ("J1 d g s J310", ["d", "g", "s"], "J310", None),
        ("M1 d g s b nch l=1u w=2u", ["d", "g", "s", "b"], "nch", None),
        ("M1 d g s IRF", ["d", "g", "s"], "IRF", None),
    ],
)
def test_devices(read: Read, line: str, nodes: list[str], model: str, area: float | None) -> None:
    found = one(read, line)
    assert (nets(found), found.model, found.params.get("area"), found.unknown) == (nodes, model, area, "")


def test_a_known_model_settles_which_word_is_the_model(read: Read) -> None:
    found = one(read, "Q1 c b e mod 2 3", ".model mod npn")
    assert (nets(found), found.unknown) == (["c", "b", "e"], "'3' is not expected behind the model")
    found = one(read, "Q1 c b e d npn1", ".model d d\n.model npn1 npn")
    assert (nets(found), found.model) == (["c", "b", "e", "d"], "npn1")


def test_controlled_sources_and_couplings(read: Read) -> None:
    netlist = read(
        "* all kinds\nE1 a 0 c d 2\nG1 a 0 (c,d) 1m\nF1 a 0 Vs 3\nH1 a 0 V_Vs 4k\nE2 a 0 POLY(1) c d 0 5\n"
        "L1 a 0 1u\nL_L2 c 0 1u\nK1 L1 L_L2 0.9\nT1 a 0 c 0 Z0=50 TD=1n\nV_Vs c d 0\n.end\n"
    )
    assert nets(part(netlist, "E1")) == ["a", "0", "c", "d"]
    assert [part(netlist, ref).number for ref in ("E1", "G1", "F1", "H1", "E2")] == [2.0, 1e-3, 3.0, 4e3, 5.0]
    assert part(netlist, "H1").controls == ("Vs",)
    assert (part(netlist, "K1").controls, part(netlist, "K1").number) == (("L1", "L2"), 0.9)
    assert part(netlist, "T1").params == {"z0": 50.0, "td": 1e-9}
    assert not any(part.unknown for part in netlist.parts)


@pytest.mark.parametrize(
    ("line", "count"),
    [
        ("B1 a 0 V=V(c)*V(c)", 2),
        ("E1 a 0 VALUE={V(c)+2}", 2),
        ("G1 3 2 VALUE { V(13, 0)*I(V11) }", 2),
        ("E1 a 0 POLY(2) c 0 d 0 0 1 1", 2),
        ("S1 a 0 c 0 switch", 4),
        ("W1 a 0 V1 switch", 2),
        ("R1 a b TODO", 2),
        ("R1 a b", 2),
        ("R1 a b {missing}", 2),
        ("R1 a b 1e400", 2),
        ("R1 a b 10 k", 2),
        ("C1 a b 10 uF", 2),
        ("R1 a b 1k 2k", 2),
        ("R1 a b 1k + 2k", 2),
        ("R1 a b {1k} {2k}", 2),
        ("R1 a b k51", 2),
        ("R1 a b r2", 2),
        ("R1 a b 1M5", 2),
        ("R1 a b 10uF", 2),
        ("C1 a b 10uH", 2),
        ("L1 a b 4.7uF", 2),
        ("L1 a b 100ohm", 2),
        ("Q1 c b e s t u npn", 3),
        ("V1 a 0 5A", 2),
        ("I1 a 0 5V", 2),
        ("Q1 c b e", 3),
        ("D1 a k", 2),
        ("V1 a 0 rubbish", 2),
        ("V1 a 0 5 6 7", 2),
        ("K1 L1 0.5", 0),
        ("U1 a b c LM741", 3),
        ("M1 d g s b mod 3 4 w=1", 4),
        ("M1 d g s b nch w=2*(wide)", 4),
    ],
)
def test_what_is_not_understood_keeps_its_reference_and_nodes(read: Read, line: str, count: int) -> None:
    found = one(read, line)
    assert found.ref == line.split()[0]
    assert len(found.pins) == count
    assert found.unknown
    assert found.origin.line == 2


@pytest.mark.parametrize("line", ["R1 a", "Q1", "+ lonely", "@#! a b c", "run", ".nonsense 1 2", "U1 a b"])
def test_what_is_no_part_is_a_remark_with_its_line(read: Read, line: str) -> None:
    netlist = read(f"* title\n{line}\nR2 a 0 1k\n.end\n")
    assert [part.ref for part in netlist.parts] == ["R2"]
    assert [remark.origin.line for remark in netlist.remarks] == [2]


def test_names_that_tools_put_together(read: Read) -> None:
    netlist = read(
        "* names\nQ_Q21 c b e BC547\nR_R12 a b 1k\nV_Vin a 0 1\nR_load a 0 1k\nXU2 a b OPAMP\n"
        "XJ1 ANT 0 CONN_COAX_50\n"
        "X§U1 a b DRV\nX_U5 a b DRV\nX1 a b DRV\nQ_T1 c b e BC547\n.end\n"
    )
    refs = [part.ref for part in netlist.parts]
    assert refs == ["Q21", "R12", "Vin", "R_load", "U2", "J1", "U1", "U5", "X1", "T1"]
    assert part(netlist, "J1").letter == "X"
    assert part(netlist, "J1").model == "CONN_COAX_50"
    assert [pin.number for pin in part(netlist, "J1").pins] == ["1", "2"]


@pytest.mark.parametrize("order", [0, 1])
def test_a_shortened_name_that_is_taken_stays_long(read: Read, order: int) -> None:
    lines = ["R_R1 a 0 1k", "R1 a b 1k", "XK1 a b RELAY", "X_K1 a b RELAY"]
    netlist = read("* names\n" + "\n".join(lines[:: 1 if order == 0 else -1]) + "\n.end\n")
    assert {part.ref for part in netlist.parts} == {"R_R1", "R1", "XK1", "X_K1"}


def test_a_name_used_twice_is_told_apart_and_named(read: Read) -> None:
    netlist = read("* twice\nR1 a 0 1k\nr1 b 0 2k\nR1 c 0 3k\n.end\n")
    assert [part.ref for part in netlist.parts] == ["R1", "r1#2", "R1#3"]
    assert [remark.origin.line for remark in netlist.remarks] == [3, 4]


def test_nets_are_one_whatever_their_case(read: Read) -> None:
    netlist = read("* nets\nR1 Vcc GND 1k\nR2 VCC 0 1k\nR3 ? gnd 1k\nR4 ? nc_1 1k\n.end\n")
    assert [nets(part) for part in netlist.parts] == [
        ["Vcc", "0"],
        ["Vcc", "0"],
        ["?R3.1", "0"],
        ["?R4.1", "nc_1"],
    ]
    assert netlist.ground == ("0",)
    assert netlist.nets["0"].name == "GND"


def test_net_names_with_brackets_and_braces(read: Read) -> None:
    netlist = read("* nets\nR1 Net-(Q1-Pad2) ~{RST} 1k\nR2 /a/b+ V-- 2k\n.end\n")
    assert [nets(part) for part in netlist.parts] == [["Net-(Q1-Pad2)", "~{RST}"], ["/a/b+", "V--"]]


def test_devices_are_not_guessed_where_pads_are_listed(read: Read) -> None:
    deck = "* p\nU1 a b c d OPA2134\nQ1 a b c BC850\nQ2 a b c mine\nR1 a b 1k\nD1 a b 1N4148\n.model mine npn\n"
    unknown = {part.ref: bool(part.unknown) for part in read(deck).parts}
    assert unknown == {"U1": True, "Q1": True, "Q2": False, "R1": False, "D1": True}


def test_values_and_pins_of_a_file_that_lists_pads(read: Read) -> None:
    """The values are those of a schematic, left as text, and every pin of a part is kept."""
    netlist = read(
        "* p\nU1 a b c d OPA2134\nR1 a b 1M5\nR2 a b 1k 1%\nC1 a 0 4,7uF 16v\nJ1 a 0 b a b JACK\nCON1 a 0 c BARREL\n"
        "K1 a b c d RELAY\nTP1 a TEST\nLED1 a 0 RED\n"
    )
    assert [(each.ref, each.value, each.number) for each in netlist.parts[1:4]] == [
        ("R1", "1M5", None),
        ("R2", "1k 1%", None),
        ("C1", "4,7uF 16v", None),
    ]
    assert not any(each.unknown for each in netlist.parts[1:4])
    assert {each.ref: nets(each) for each in netlist.parts[4:]} == {
        "J1": ["a", "0", "b", "a", "b"],
        "CON1": ["a", "0", "c"],
        "K1": ["a", "b", "c", "d"],
        "TP1": ["a"],
        "LED1": ["a", "0"],
    }
    assert all(each.unknown and not each.controls for each in netlist.parts[4:])


def test_a_digital_element_within_a_subcircuit_is_no_sign_of_pads(read: Read) -> None:
    netlist = read(
        "* s\n.subckt macro a b\nU1 a b c d gate\n.ends\nX1 a b macro\nQ1 a b 0 BC547\nR1 a b 1k\nR2 a 0 1k\n"
    )
    assert {each.ref: bool(each.unknown) for each in netlist.parts} == {
        "X1.U1": True,
        "Q1": False,
        "R1": False,
        "R2": False,
    }


def test_models(read: Read) -> None:
    netlist = read(
        "* models\n.model BC547B NPN(Is=7f Bf=400\n+ Vaf = 80 mjc:.33 mfg=ACME Ikf={2*40m})\n"
        ".MODEL dd D\n.model big vdmos(pchan VT0=-2)\n.model j njf beta=1m beta=2m\n.end\n"
    )
    assert netlist.models["bc547b"].params == {
        "is": 7e-15,
        "bf": 400.0,
        "vaf": 80.0,
        "mjc": 0.33,
        "ikf": 0.08,
    }
    assert (netlist.models["bc547b"].name, netlist.models["bc547b"].kind) == ("BC547B", "npn")
    assert (netlist.models["dd"].kind, netlist.models["dd"].params) == ("d", {})
    assert netlist.models["big"].params == {"pchan": 1.0, "vto": -2.0}
    assert netlist.models["bc547b"].origin.line == 2
    assert netlist.remarks == ()


def test_a_model_parameter_that_is_no_number_is_named(read: Read) -> None:
    netlist = read("* m\n.model d1 d(is=1e-14 bv=infinite)\n.end\n")
    assert netlist.models["d1"].params == {"is": 1e-14}
    assert "bv" in netlist.remarks[0].text


@pytest.mark.parametrize(
    ("card", "temperature_c"),
    [(".temp 25", 25.0), (".TEMP=25.0", 25.0), (".options TEMP=40 reltol=1e-3", 40.0), (".op", None)],
)
def test_temperature(read: Read, card: str, temperature_c: float | None) -> None:
    assert read(f"* t\nR1 a 0 1\n{card}\n.end\n").temperature_c == temperature_c


def test_analyses_are_passed_over_in_silence_and_control_blocks_with_a_remark(read: Read) -> None:
    quiet = "".join(f".{word} x y\n" for word in ("tran", "ac", "dc", "probe", "print", "backanno", "meas", "option"))
    netlist = read(f"* q\nR1 a 0 1k\n{quiet}.control\nrun\nplot v(a)\nR9 a b 5\n.endc\nR2 a 0 1k\n.end\n")
    assert [part.ref for part in netlist.parts] == ["R1", "R2"]
    assert len(netlist.remarks) == 1


def test_nothing_is_read_behind_the_end(read: Read) -> None:
    netlist = read("* e\nR1 a 0 1k\n.end\nR2 a 0 1k\n")
    assert [part.ref for part in netlist.parts] == ["R1"]
    assert netlist.remarks[0].origin.line == 4
