"""Sources controlled by a formula: linear ones become what they amount to, all others are refused whole."""

from __future__ import annotations

import pytest

from checker.netlist.types import Part
from tests.netlist.conftest import Read


def one(read: Read, line: str) -> Part:
    """The part of one line in an otherwise plain deck."""
    rest = "".join(f"R{number} a b{number} 1k\n" for number in range(1, 4))
    return read(f"* one part\n.param k=3\nV9 a 0 1\n{line}\n{rest}.end\n").parts[1]


@pytest.mark.parametrize(
    ("line", "letter", "gain", "nets", "controls"),
    [
        ("B1 x 0 V=2*V(a,b)", "E", 2.0, ["x", "0", "a", "b"], ()),
        ("B1 x 0 V = 2 * V(a) - V(A)/2", "E", 1.5, ["x", "0", "a", "0"], ()),
        ("B1 x 0 V={k*V(a)}", "E", 3.0, ["x", "0", "a", "0"], ()),
        ("B1 x 0 I='I(V9)*4'", "F", 4.0, ["x", "0"], ("V9",)),
        ("B1 x 0 V=I(V9)*4", "H", 4.0, ["x", "0"], ("V9",)),
        ("E1 x 0 VALUE { V(a) / 2 }", "E", 0.5, ["x", "0", "a", "0"], ()),
        ("E1 x 0 vol='v(a)'", "E", 1.0, ["x", "0", "a", "0"], ()),
        ("G1 x 0 VALUE = {V(a)*1m}", "G", 1e-3, ["x", "0", "a", "0"], ()),
        ("G1 x 0 cur={I(V9)*2}", "F", 2.0, ["x", "0"], ("V9",)),
        ("B1 x 0 V=5", "V", 5.0, ["x", "0"], ()),
        ("B1 x 0 I={k*1m}", "I", 3e-3, ["x", "0"], ()),
    ],
)
def test_linear_formulas(
    read: Read, line: str, letter: str, gain: float, nets: list[str], controls: tuple[str, ...]
) -> None:
    found = one(read, line)
    assert (found.letter, [pin.net for pin in found.pins], found.controls) == (letter, nets, controls)
    assert found.number == pytest.approx(gain, rel=1e-12)
    assert found.unknown == ""


def test_several_sources_in_parallel(read: Read) -> None:
    assert one(read, "G1 x 0 VALUE={V(a)} m=2").params == {"m": 2.0}


@pytest.mark.parametrize(
    "line",
    [
        "B1 x 0 V=2*V(a) + 1",
        "B1 x 0 V=V(a)/1k * V(b)",
        "B1 x 0 V=V(a)*V(a)",
        "B1 x 0 V=V(a)+V(b)",
        "B1 x 0 V=IF(V(a)>3,0,V(a))",
        "B1 x 0 V=LIMIT(V(a),-2000,5)",
        "B1 x 0 V=max(V(a),-50)",
        "B1 x 0 V=V(a)*time",
        "E1 x 0 VALUE={2*V(a)} 5",
        "E1 x 0 VALUE={2*V(a)} tc1=5",
        "E1 x 0 TABLE {V(a)} = (0,0) (1,1)",
        "E1 x 0 POLY(2) a 0 b 0 0 1 1",
        "B1 x 0 foo",
    ],
)
def test_what_is_not_linear_is_not_understood(read: Read, line: str) -> None:
    """A blank ends no formula, and a corner anywhere within the voltages of a board counts."""
    found = one(read, line)
    assert found.unknown
    assert [pin.net for pin in found.pins][:2] == ["x", "0"]
    assert found.number is None
