"""Parameters, expressions and subcircuits of SPICE-style text."""

from __future__ import annotations

import math
from pathlib import Path
from typing import Any

import pytest
from hypothesis import given
from hypothesis import strategies as st

from checker.netlist.limits import ReadLimits
from checker.netlist.spice_expression import TooMuch, evaluate
from checker.trouble import InputTrouble, NotAQuantity
from tests.netlist.conftest import Read


def value(text: str, **names: float) -> float:
    def lookup(name: str, _level: int) -> float:
        if name not in names:
            raise NotAQuantity(name)
        return names[name]

    return evaluate(text, lookup, steps=10_000, depth=64)


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        ("1+2*3", 7.0),
        ("(1+2)*3", 9.0),
        ("2**3**2", 512.0),
        ("-2^2", -4.0),
        ("2^-1", 0.5),
        ("10-4-3", 3.0),
        ("100/10/5", 2.0),
        ("7%4", 3.0),
        ("2k*3", 6e3),
        ("1.5Meg/1k", 1500.0),
        ("4k7+300", 5e3),
        ("a*2", 6.0),
        ("A*b", 12.0),
        ("1>2?5:6", 6.0),
        ("a>=3 && b<5 ? 1 : 0", 1.0),
        ("!a", 0.0),
        ("sqrt(16)+abs(-2)", 6.0),
        ("max(1,2)+min(3,4)", 5.0),
        ("limit(7, 0, 5)", 5.0),
        ("if(a>2, 10, 20)", 10.0),
        ("pwr(-2,2)", 4.0),
        ("pwrs(-2,2)", -4.0),
        ("sgn(-3)*u(2)", -1.0),
        ("int(-2.7)", -2.0),
        ("ln(exp(2))", 2.0),
        ("log10(1000)", 3.0),
        ("4*atan(1)", math.pi),
        ("pi", math.pi),
        ("1 e3", None),
        ("1+", None),
        ("(1", None),
        ("1)", None),
        ("", None),
        ("nowhere", None),
        ("sin(1,2)", None),
        ("system(1)", None),
        ("__import__(1)", None),
        ("1/0", None),
        ("sqrt(-1)", None),
        ("(-2)^0.5", None),
        ("10^400", None),
        ("exp(1e6)", None),
        ("1e308*10", None),
        ("1;2", None),
        ("a.b", None),
        ("1 2", None),
    ],
)
def test_expressions(text: str, expected: float | None) -> None:
    if expected is None:
        with pytest.raises(NotAQuantity):
            value(text, a=3.0, b=4.0)
    else:
        assert value(text, a=3.0, b=4.0) == pytest.approx(expected, rel=1e-15)


@given(st.recursive(st.integers(0, 99).map(str), lambda inner: st.tuples(inner, st.sampled_from("+-*"), inner)))
def test_arithmetic_against_python(tree: object) -> None:
    def text(node: Any) -> str:
        return node if isinstance(node, str) else f"({text(node[0])}{node[1]}{text(node[2])})"

    def exact(node: Any) -> int:
        if isinstance(node, str):
            return int(node)
        left, sign, right = node
        return {"+": int.__add__, "-": int.__sub__, "*": int.__mul__}[sign](exact(left), exact(right))

    try:
        found = value(text(tree))
    except TooMuch:
        # Deeper than the bound on brackets, which another test holds.
        assert text(tree).count("(") > 60
        return
    assert found == pytest.approx(exact(tree), rel=1e-12)


@pytest.mark.parametrize(("text", "limit"), [("1+" * 9_999 + "1", "steps"), ("(" * 70 + "1" + ")" * 70, "depth")])
def test_expressions_are_bounded(text: str, limit: str) -> None:
    with pytest.raises(TooMuch) as caught:
        value(text)
    assert caught.value.limit == limit


def test_parameters_in_any_order_and_spelling(read: Read) -> None:
    netlist = read(
        "* p\n.param Rtot=1k\n.param Ibias = 1m Vcc=30\n.param Rcurrent = (2*Vcc/Ibias) - Rtot\n"
        ".param r 0.5\n.PARAM Ra={r*Rpot} Rb='(1-r)*Rpot' Rpot=10k\n"
        "R1 a 0 {RCURRENT}\nR2 a 0 Ra\nR3 a 0 {Rb}\nV1 a 0 {Vcc}\n.end\n"
    )
    assert [part.number for part in netlist.parts] == [59e3, 5e3, 5e3, 30.0]


def test_parameters_that_do_not_compute_are_named(read: Read) -> None:
    netlist = read("* p\n.param a={b} b={a} c={nowhere}\nR1 x 0 {a}\nR2 x 0 {c}\n.end\n")
    assert [part.number for part in netlist.parts] == [None, None]
    assert all(part.unknown for part in netlist.parts)
    assert {remark.text.split()[2] for remark in netlist.remarks} == {"a", "b", "c"}


def test_a_parameter_chain_longer_than_the_depth_is_no_trouble_in_order(read: Read) -> None:
    chain = ".param p0=1\n" + "".join(f".param p{index}={{p{index - 1}+1}}\n" for index in range(1, 300))
    assert read(f"* p\n{chain}R1 a 0 {{p299}}\n.end\n").parts[0].number == 300.0


def test_a_parameter_chain_backwards_is_bounded(read: Read) -> None:
    chain = "".join(f".param p{index}={{p{index + 1}+1}}\n" for index in range(300)) + ".param p300=1\n"
    with pytest.raises(InputTrouble, match=r"^board\.net:2: .*limit of 64;.*--most-depth"):
        read(f"* p\n{chain}R1 a 0 {{p0}}\n.end\n")


AMP = """* subcircuits
.param gain=3
.subckt amp in out vcc PARAMS: rc=1k
Q1 out in e npn1
RC vcc out {rc*gain}
RE e 0 100
.model npn1 npn(bf=100)
.ends amp
XU1 a b VCC amp
X2 b c vcc AMP rc=2k
R1 c 0 1k
.end
"""


def test_expansion(read: Read) -> None:
    netlist = read(AMP)
    assert [part.ref for part in netlist.parts] == [
        "U1.Q1",
        "U1.RC",
        "U1.RE",
        "X2.Q1",
        "X2.RC",
        "X2.RE",
        "R1",
    ]
    assert [pin.net for pin in netlist.parts[0].pins] == ["b", "a", "U1.e"]
    assert [pin.net for pin in netlist.parts[3].pins] == ["c", "b", "X2.e"]
    assert [part.number for part in netlist.parts if part.ref.endswith("RC")] == [3e3, 6e3]
    assert (netlist.parts[0].model, set(netlist.models)) == ("npn1", {"npn1"})
    assert netlist.parts[3].origin.line == 4
    assert netlist.parts[3].origin.note == "X2, line 10"
    assert "VCC" in netlist.nets
    assert "vcc" not in netlist.nets


def test_models_of_one_name_are_kept_apart(read: Read) -> None:
    netlist = read(
        "* m\n.subckt a x\nQ1 x x 0 n\n.model n npn(bf=1)\n.ends\n"
        ".subckt b x\nQ1 x x 0 n\n.model n npn(bf=2)\n.ends\n"
        ".subckt c x bf=5\nQ1 x x 0 n\n.model n npn(bf={bf})\n.ends\n"
        "X1 1 a\nX2 1 b\nX3 1 c\nX4 1 c bf=6\nX5 1 a\nQ9 1 1 0 n\n.end\n"
    )
    gains = {part.ref: netlist.models.get(part.model.lower()) for part in netlist.parts}
    assert {ref: model.params["bf"] for ref, model in gains.items() if model and ref != "Q9"} == {
        "X1.Q1": 1.0,
        "X2.Q1": 2.0,
        "X3.Q1": 5.0,
        "X4.Q1": 6.0,
        "X5.Q1": 1.0,
    }


def test_nested_definitions_and_instances(read: Read) -> None:
    netlist = read(
        "* n\n.subckt outer p\n.subckt inner q r=1k\nR1 q g {r*k}\nR2 q glob {r}\n.ends\n.param k=2\n"
        "X1 p inner r={3*k}\n.ends\n.global glob\nX9 net outer\n.end\n"
    )
    assert [(part.ref, part.number) for part in netlist.parts] == [("X9.X1.R1", 12.0), ("X9.X1.R2", 6.0)]
    assert [pin.net for part in netlist.parts for pin in part.pins] == ["net", "X9.X1.g", "net", "glob"]


def test_parallel_instances_multiply(read: Read) -> None:
    netlist = read("* m\n.subckt a x\nQ1 x x 0 n m=2\nX1 x b m=3\n.ends\n.subckt b x\nR1 x 0 1\n.ends\nX1 1 a m=5\n")
    assert {part.ref: part.params["m"] for part in netlist.parts} == {"X1.Q1": 10.0, "X1.X1.R1": 15.0}


def test_controls_are_those_of_the_instance(read: Read) -> None:
    netlist = read("* c\n.subckt a x\nV_Vs x 0 0\nF1 x 0 V_Vs 2\nL1 x 0 1\nL2 x 0 1\nK1 L1 L2 0.5\n.ends\nX1 1 a\n")
    assert [part.controls for part in netlist.parts if part.controls] == [("X1.Vs",), ("X1.L1", "X1.L2")]


def test_wrong_node_count_is_a_part_not_understood(read: Read) -> None:
    netlist = read("* w\n.subckt a x y\nR1 x y 1\n.ends\nX1 1 2 3 a\nR1 1 2 5\n.end\n")
    assert [(part.ref, bool(part.unknown), len(part.pins)) for part in netlist.parts] == [
        ("X1", True, 3),
        ("R1", False, 2),
    ]


def test_an_unfinished_subcircuit_is_named(read: Read) -> None:
    netlist = read("* u\nR1 a 0 1\n.subckt x a\nR2 a 0 1\n")
    assert [part.ref for part in netlist.parts] == ["R1"]
    assert netlist.remarks[0].origin.line == 3


def test_a_subcircuit_bomb_ends(read: Read) -> None:
    levels = "".join(f".subckt s{n} a\n" + f"X1 a s{n + 1}\n" * 10 + ".ends\n" for n in range(12))
    with pytest.raises(InputTrouble, match=r"limit of 20000.*--most-elements"):
        read(f"* b\n{levels}.subckt s12 a\nR1 a 0 1\n.ends\nX1 1 s0\n", limits=ReadLimits(elements=20_000))


def test_a_bomb_without_parts_ends_as_well(read: Read) -> None:
    levels = "".join(f".subckt s{n} a\nX1 a s{n + 1}\nX2 a s{n + 1}\n.ends\n" for n in range(40))
    with pytest.raises(InputTrouble, match=r"limit of 20000.*--most-elements"):
        read(f"* b\n{levels}.subckt s40 a\n.ends\nX1 1 s0\n", limits=ReadLimits(elements=20_000))


def test_a_subcircuit_that_calls_itself_ends(read: Read) -> None:
    with pytest.raises(InputTrouble, match=r"limit of 64;.*--most-depth"):
        read("* r\n.subckt a x\nX1 x a\n.ends\nX1 1 a\n")


def test_too_many_parts(read: Read) -> None:
    with pytest.raises(InputTrouble, match=r"^board\.net:12: .*limit of 10;.*--most-parts"):
        read("* p\n" + "".join(f"R{n} a 0 1\n" for n in range(20)), limits=ReadLimits(parts=10))


def test_too_many_bytes(read: Read) -> None:
    with pytest.raises(InputTrouble, match=r"limit of 100;.*--most-bytes"):
        read("* p\n" + "R1 a 0 1\n" * 20, limits=ReadLimits(bytes=100))


def test_an_expression_too_long_is_one_message(read: Read) -> None:
    with pytest.raises(InputTrouble, match=r"^board\.net:2: .*limit of 10000;.*--most-steps"):
        read("* p\nR1 a 0 {" + "1+" * 20_000 + "1}\n")


def test_a_raised_depth_is_kept_to(read: Read) -> None:
    # Every kind of nesting at once, 900 deep; the interpreter alone would stop at about a hundred.
    levels = 900
    chain = "".join(f".param p{n}={{p{n + 1}+1}}\n" for n in range(levels)) + f".param p{levels}=1\n"
    inner = (
        "".join(f".subckt s{n} a\nX1 a s{n + 1}\n.ends\n" for n in range(levels))
        + f".subckt s{levels} a\nR1 a 0 {{p0}}\n.ends\n"
    )
    for index in range(levels):
        Path(f"f{index}.lib").write_text(f".include f{index + 1}.lib\n")
    Path(f"f{levels}.lib").write_text("R2 b 0 1k\n")
    text = f"* deep\n{chain}{inner}.include f0.lib\nX1 a s0\nR3 b 0 {{{'(' * levels}7{')' * levels}}}\n.end\n"
    netlist = read(text, limits=ReadLimits(depth=1_000))
    found = {part.ref.rpartition(".")[2]: part.number for part in netlist.parts}
    assert found == {"R1": levels + 1.0, "R2": 1e3, "R3": 7.0}
    with pytest.raises(InputTrouble, match="--most-depth"):
        read(text)
