"""Titles, encodings, includes, libraries: what surrounds the elements."""

from __future__ import annotations

from pathlib import Path

import pytest

from checker.netlist.limits import ReadLimits
from checker.netlist.read import read_netlist
from checker.trouble import InputTrouble
from tests.netlist.conftest import Read

DECK = "V1 in 0 5\nR1 in out 1k\nR2 out 0 1k\n.end\n"


@pytest.mark.parametrize(
    ("first", "title"),
    [
        ("* My board", "My board"),
        ("BJT Amplifier", "BJT Amplifier"),
        ("Lab Simulation", "Lab Simulation"),
        ("Lab2 Simulation - 1A", "Lab2 Simulation - 1A"),
        ("colpitt's oscillator", "colpitt's oscillator"),
        ("Relay driver at 5", "Relay driver at 5"),
        ("", ""),
    ],
)
def test_titles(read: Read, first: str, title: str) -> None:
    netlist = read(f"{first}\n{DECK}")
    assert netlist.title == title
    assert [part.ref for part in netlist.parts] == ["V1", "R1", "R2"]
    assert netlist.parts[0].origin.line == 2
    assert netlist.remarks == ()


def test_a_first_line_that_is_an_element_is_one(read: Read) -> None:
    netlist = read(DECK)
    assert [part.ref for part in netlist.parts] == ["V1", "R1", "R2"]
    assert netlist.parts[0].origin.line == 1
    assert "first line" in netlist.remarks[0].text


def test_a_first_dot_line_is_a_card(read: Read) -> None:
    netlist = read(f".title Amp\n{DECK}")
    assert netlist.title == "Amp"
    assert netlist.parts[0].origin.line == 2


@pytest.mark.parametrize("encoding", ["utf-8", "utf-8-sig", "latin-1", "utf-16", "utf-16-le", "utf-16-be"])
@pytest.mark.parametrize("ending", ["\n", "\r\n", "\r"])
def test_encodings_and_line_ends(read: Read, encoding: str, ending: str) -> None:
    text = "* Verstärker\nC1 a 0 4.7µ\nX§U1 a 0 DRV\n.end\n".replace("\n", ending)
    netlist = read(text.encode(encoding))
    assert netlist.title == "Verstärker"
    assert netlist.parts[0].number == pytest.approx(4.7e-6, rel=1e-15)
    assert netlist.parts[1].ref == "U1"
    assert [part.origin.line for part in netlist.parts] == [2, 3]


@pytest.mark.parametrize(
    "content",
    [
        b"",
        b"  \n\n",
        b"* t\nR1 a 0 1\0k\n",
        b"\xff\xfeR\x00\x31",
        b"\x89PNG\r\n\x1a\n" + bytes(range(1, 32)) * 20,
        b"<?xml version='1.0'?>\n<board/>\n",
        b"It was a dark and stormy night.\nThe rain fell in torrents.\n",
        b"(kicad_sch (version 20230121) (generator schematic editor))",
        b"( { schematic editor Netlist Version 1.1 created  1/1/2012 } )",
        b"* only a comment\n",
    ],
)
def test_what_is_no_netlist(read: Read, content: bytes) -> None:
    with pytest.raises(InputTrouble) as caught:
        read(content)
    assert str(caught.value).startswith("board.net:")


def test_the_line_of_a_nul(read: Read) -> None:
    with pytest.raises(InputTrouble) as caught:
        read(b"* t\nR1 a 0 1k\nR2 a \0 1k\n")
    assert caught.value.line == 3


def test_no_such_file_and_a_folder(tmp_path: Path) -> None:
    with pytest.raises(InputTrouble, match="no such file"):
        read_netlist(tmp_path / "none.net")
    with pytest.raises(InputTrouble, match="no such file"):
        read_netlist(tmp_path)


def test_path_and_hash(read: Read) -> None:
    Path("sub").mkdir()
    netlist = read("* t\nR1 a 0 1\n", name="sub/../sub/./board.net")
    assert netlist.path == "sub/../sub/board.net"
    assert netlist.parts[0].origin.file == netlist.path
    assert netlist.format == "spice"


def test_included_models_have_their_own_origin(read: Read) -> None:
    Path("models").mkdir()
    Path("models/bjt.lib").write_text("* lib\n.model BC547 npn(bf=300)\n.include more.lib\n")
    Path("models/more.lib").write_text(".model DD d\n")
    netlist = read('* t\nQ1 a b 0 BC547\n.include "models/bjt.lib"\n.inc .\\models\\more.lib\n.end\n')
    assert (netlist.models["bc547"].origin.file, netlist.models["bc547"].origin.line) == ("models/bjt.lib", 2)
    assert netlist.models["dd"].origin.file == "models/more.lib"
    assert netlist.remarks == ()


def test_an_include_folder_may_be_given(read: Read, tmp_path: Path) -> None:
    board, library = tmp_path / "board", tmp_path / "library"
    board.mkdir()
    library.mkdir()
    (library / "a.lib").write_text(".model BC547 npn(bf=300)\n")
    (board / "b.net").write_text("* t\nQ1 a b 0 BC547\n.include a.lib\n.include ../library/a.lib\n.end\n")
    assert read_netlist(board / "b.net", include_dirs=(library,)).models["bc547"].params == {"bf": 300.0}
    refused = read_netlist(board / "b.net")
    assert (len(refused.models), [remark.origin.line for remark in refused.remarks]) == (0, [3, 4])


@pytest.mark.parametrize(
    "written",
    ["../secret.lib", "/etc/hostname", "C:\\Users\\me\\x.lib", "link.lib", "absent.lib", "~/x.lib", ".", ""],
)
def test_absent_and_forbidden_includes_are_remarks(tmp_path: Path, written: str) -> None:
    (tmp_path / "secret.lib").write_text(".model secret npn\n")
    board = tmp_path / "board"
    board.mkdir()
    (board / "link.lib").symlink_to(tmp_path / "secret.lib")
    (board / "b.net").write_text(f"* t\nQ1 a b 0 secret\n.include {written}\n.end\n")
    netlist = read_netlist(board / "b.net")
    assert netlist.models == {}
    assert [remark.origin.line for remark in netlist.remarks] == [3]
    assert [part.model for part in netlist.parts] == ["secret"]


def test_an_include_ring_is_refused(read: Read) -> None:
    Path("a.lib").write_text(".include b.lib\n")
    Path("b.lib").write_text("* x\n.include a.lib\n")
    with pytest.raises(InputTrouble, match=r"^b\.lib:2: a\.lib includes itself"):
        read("* t\nR1 a 0 1\n.include a.lib\n")
    with pytest.raises(InputTrouble, match="includes itself"):
        read("* t\nR1 a 0 1\n.include board.net\n")


def test_an_include_storm_ends(read: Read) -> None:
    for index in range(40):
        Path(f"f{index}.lib").write_text(f".include f{index + 1}.lib\n" * 2)
    Path("f40.lib").write_text("* end\n")
    with pytest.raises(InputTrouble, match=r"limit of 100000;.*--most-bytes"):
        read("* t\nR1 a 0 1\n.include f0.lib\n", limits=ReadLimits(bytes=100_000))


def test_includes_too_deep(read: Read) -> None:
    for index in range(70):
        Path(f"f{index}.lib").write_text(f".include f{index + 1}.lib\n")
    with pytest.raises(InputTrouble, match=r"limit of 64;.*--most-depth"):
        read("* t\nR1 a 0 1\n.include f0.lib\n")


def test_library_sections(read: Read) -> None:
    Path("my models").mkdir()
    Path("my models/all.lib").write_text(
        ".lib fast\n.model Q npn(bf=300)\n.endl\n.lib slow\n.model Q npn(bf=100)\n.endl slow\n.model both d\n"
    )
    whole = read("* t\nQ1 a b 0 Q\n.lib my models/all.lib\n.end\n")
    assert set(whole.models) == {"both"}
    slow = read("* t\nQ1 a b 0 Q\n.lib 'my models/all.lib' SLOW\n.end\n")
    assert slow.models["q"].params == {"bf": 100.0}
    assert set(slow.models) == {"q"}


def test_files_of_models_or_subcircuits_alone(read: Read) -> None:
    models = read("* lib\n.model a npn\n.model b pnp\n")
    assert (set(models.models), models.parts, models.remarks) == ({"a", "b"}, (), ())
    two = "".join(f".subckt {name} in out\nR1 in out 1k\n.ends\n" for name in ("amp", "pad"))
    subcircuits = read(f"* lib\n{two}")
    assert subcircuits.parts == ()
    assert "amp, pad" in subcircuits.remarks[0].text


def test_the_one_subcircuit_that_no_other_uses_is_the_board(read: Read) -> None:
    netlist = read(
        "* lib\n.subckt pad a b r=1k\nR1 a b {r}\n.ends\n"
        ".subckt Amp in 0 Vcc\nX1 in mid pad r=2k\nQ1 vcc mid 0 BC547\n.ends\n"
    )
    assert {part.ref: [pin.net for pin in part.pins] for part in netlist.parts} == {
        "Amp.X1.R1": ["in", "Amp.mid"],
        "Amp.Q1": ["Vcc", "Amp.mid", "0"],
    }
    assert [(remark.origin.line, "Amp is taken for the board" in remark.text) for remark in netlist.remarks] == [
        (5, True)
    ]
    assert netlist.ground == ("0",)


def test_alternatives_are_not_read_on_top_of_each_other(read: Read) -> None:
    netlist = read("* a\nR1 a 0 1k\n.alter\nR1 a 0 2k\n.end\n")
    assert [(part.ref, part.number) for part in netlist.parts] == [("R1", 1e3)]
    assert [remark.origin.line for remark in netlist.remarks] == [4]


def test_conditions_bear_on_everything(read: Read) -> None:
    netlist = read("* a\n.param x=1\n.if (x==1)\nR1 a 0 1k\n.else\nR1 b 0 2k\n.endif\n.protect\n")
    lost = [remark for remark in netlist.remarks if remark.lost]
    assert [remark.origin.line for remark in lost] == [3, 5, 7]
    assert all(set(remark.nets) == {"a", "b", "0"} for remark in lost)


@pytest.mark.parametrize(
    ("line", "parts"),
    [("dc V1 0 5 0.1", 0), ("DC V1 0 5", 0), ("op", 0), ("DC in out DX", 1), ("dc in 0 1N4148 area=2", 0)],
)
def test_commands_outside_a_control_block(read: Read, line: str, parts: int) -> None:
    """A line that starts with DC is a sweep where numbers follow, and a diode of that name before a model."""
    netlist = read(f"* t\n{line}\n{DECK}")
    assert len(netlist.parts) == 3 + parts
    assert len(netlist.remarks) == 1 - parts
