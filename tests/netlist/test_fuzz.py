"""Damaged input: whatever the bytes, a netlist or one `InputTrouble`; and both formats of a board agree."""

from __future__ import annotations

from pathlib import Path

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from checker.netlist.limits import ReadLimits
from checker.netlist.read import read_netlist
from checker.trouble import InputTrouble

SEEDS = (
    b"* amp\n.param r=1k\n.subckt amp a b x=1\nR1 a b {x*r}\nQ1 a b 0 n1 2\n.model n1 npn(bf=100 is=1f)\n.ends\n"
    b"XU1 in out amp x={2*r}\nV_V1 in 0 DC 5 AC 1 SIN(0 1 1k)\nC1 in ? 4,7u\nK1 L1 L2 0.5\nE1 a 0 POLY(1) b 0 0 2\n"
    b'.include "x.lib"\n.lib y z\n.global vcc\n.temp 30\n.control\nrun\n.endc\n+ 5\n.end\n',
    b'(export (version "E") (design (sheet (title_block (title "t")))) (components\n'
    b'(comp (ref "Q1") (value "BC\\"547")\n'
    b'(fields (field (name "DNP") "1")) (property (name "dnp")) (libsource (lib a) (part b))))\n'
    b"(libparts (libpart (lib a) (part b) (pins (pin (num 1) (name C) (type x)))))\n"
    b'(nets (net (code 1) (name "") (node (ref Q1) (pin 1))) (net (code 1) (name t) (node (ref Q2) (pin 2)))))\n',
)
PIECES = (
    b"(",
    b")",
    b'"',
    b"'",
    b"{",
    b"}",
    b"=",
    b"\n",
    b"\n+",
    b"\0",
    b"\xff",
    b"\xc2\x85",
    b"1e400",
    b"\\",
    b" ",
)
PIECES += (
    b".subckt a b\n",
    b".ends\n",
    b"X1 a b\n",
    b".param a={a}\n",
    b".endl\n",
    b"**",
    b"?",
    b"\xe2\x80\xae",
    b"'*9",
)

edits = st.lists(
    st.tuples(st.integers(0, 700), st.integers(0, 12), st.sampled_from(PIECES) | st.binary(max_size=4)),
    max_size=12,
)


@settings(max_examples=300, deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture])
@given(seed=st.sampled_from(SEEDS), edits=edits)
def test_mutations_give_a_netlist_or_one_message(
    tmp_path: Path, seed: bytes, edits: list[tuple[int, int, bytes]]
) -> None:
    data = bytearray(seed)
    for position, removed, inserted in edits:
        data[position : position + removed] = inserted
    path = tmp_path / "board.net"
    path.write_bytes(data)
    try:
        netlist = read_netlist(path, limits=ReadLimits(elements=1_000))
    except InputTrouble as trouble:
        assert str(trouble).startswith(path.as_posix() + ":")
        return
    refs = [part.ref.lower() if netlist.format == "spice" else part.ref for part in netlist.parts]
    assert len(set(refs)) == len(refs)
    assert all(pin.net in netlist.nets for part in netlist.parts for pin in part.pins)


@st.composite
def boards(draw: st.DrawFn) -> list[tuple[str, str, tuple[str, ...]]]:
    """Random parts as (reference, value, nets by pin)."""
    nets = st.sampled_from(["in", "out", "n1", "n2", "/sub/x", "+12V", "-5V"])
    count = draw(st.integers(1, 12))
    parts = []
    for index in range(1, count + 1):
        letter = draw(st.sampled_from("RCLQD"))
        pins = 3 if letter == "Q" else 2
        value = draw(st.sampled_from(["BC547", "2N3904"] if pins == 3 else ["1k", "4.7u", "100n"]))
        value = "1N4148" if letter == "D" else value
        parts.append((f"{letter}{index}", value, tuple(draw(nets) for _ in range(pins))))
    return parts


@settings(max_examples=60, deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture])
@given(board=boards())
def test_both_formats_of_a_board_give_the_same_parts(
    tmp_path: Path, board: list[tuple[str, str, tuple[str, ...]]]
) -> None:
    deck = "* board\n" + "".join(f"{ref} {' '.join(nets)} {value}\n" for ref, value, nets in board) + ".end\n"
    comps = "".join(f'(comp (ref "{ref}") (value "{value}"))\n' for ref, value, _ in board)
    names = sorted({net for _, _, nets in board for net in nets})
    nodes = {
        name: "".join(
            f'(node (ref "{ref}") (pin "{number}"))'
            for ref, _, nets in board
            for number, net in enumerate(nets, start=1)
            if net == name
        )
        for name in names
    }
    listed = "".join(f'(net (code "{code}") (name "{name}") {nodes[name]})' for code, name in enumerate(names, start=1))
    (tmp_path / "a.cir").write_text(deck)
    (tmp_path / "a.net").write_text(f'(export (version "E") (components {comps}) (nets {listed}))')
    spice, kicad = read_netlist(tmp_path / "a.cir"), read_netlist(tmp_path / "a.net")
    assert set(spice.nets) == set(kicad.nets)
    for first, second in zip(spice.parts, kicad.parts, strict=True):
        assert (first.ref, first.letter, first.value) == (second.ref, second.letter, second.value)
        assert [(pin.number, pin.net) for pin in first.pins] == [(pin.number, pin.net) for pin in second.pins]
        assert not first.unknown


@pytest.mark.parametrize("text", ["{", "'", '"', "=", "(", "a=(", "9,", "-(", "~{", "a="])
def test_long_lines_take_linear_time(tmp_path: Path, text: str) -> None:
    path = tmp_path / "long.net"
    path.write_text("* long\nR1 a 0 " + text * 50_000 + "\nR2 a 0 1\nR3 a 0 1\n")
    # A reader of quadratic time would need minutes here: that it comes to R2 and R3 is the test.
    assert [part.ref for part in read_netlist(path).parts][-2:] == ["R2", "R3"]


def test_many_lost_lines_among_many_nets_take_linear_time(tmp_path: Path) -> None:
    path = tmp_path / "lost.net"
    parts = "".join(f"R{n} a{n} 0 1\n" for n in range(40_000))
    path.write_text(f"* lost\n{parts}" + "".join(f"9X a{n} what\n" for n in range(40_000)))
    # Every lost line against every net would take a quarter of an hour: that it ends is the test.
    netlist = read_netlist(path)
    assert [remark.nets for remark in netlist.remarks[:2]] == [("a0",), ("a1",)]
