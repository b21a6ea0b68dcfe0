"""KiCad S-expression exports, versions D and E."""

from __future__ import annotations

import pytest

from checker.netlist.limits import ReadLimits
from checker.netlist.types import Netlist, Part
from checker.trouble import InputTrouble
from tests.netlist.conftest import Read

VERSION_E = r"""(export (version "E")
  (design
    (source "C:\\boards\\amp.kicad_sch")
    (sheet (number "1") (name "/") (tstamps "/") (title_block (title "Line amplifier") (company))))
  (components
    (comp (ref "R1")
      (value "4k7")
      (footprint "Resistor_SMD:R_0603_1608Metric")
      (fields
        (field (name "Tolerance") "1%")
        (field (name "Datasheet")))
      (libsource (lib "Device") (part "R") (description "Resistor"))
      (property (name "Sheetname") (value "Root"))
      (property (name "ki_keywords") (value "R res"))
      (property (name "Sim.Device") (value "R"))
      (sheetpath (names "/input/") (tstamps "/1/")))
    (comp (ref "Q1")
      (value "BC547 \"B\"")
      (description "NPN")
      (libsource (lib "Transistor_BJT") (part "BC547"))
      (property (name "dnp")))
    (comp (ref "U3") (value "TL072")))
  (nets
    (net (code "1") (name "+12V") (class "Default")
      (node (ref "R1") (pin "1") (pintype "passive"))
      (node (ref "U3") (pin "10") (pinfunction "V+") (pintype "power_in"))
      (node (ref "U3") (pin "2")))
    (net (code "2") (name "Net-(Q1-B)")
      (node (ref "Q1") (pin "2") (pinfunction "B") (pintype "input"))
      (node (ref "R1") (pin "2") (pintype "passive")))
    (net (code "3") (name "GND")
      (node (ref "Q1") (pin "3") (pinfunction "E"))
      (node (ref "Q1") (pin "1") (pinfunction "C")))))
"""

VERSION_D = r"""(export (version D)
  (design (source /home/me/amp.sch) (tool "schematic editor (2012-nov-02)-testing"))
  (components
    (comp (ref Q1) (value BC850)
      (libsource (lib own) (part NPN_ALIAS))
      (sheetpath (names /) (tstamps /)) (tstamp 5E123456))
    (comp (ref t) (value nil) (tstamp t))
    (comp (ref D5) (value 1N4148;2) (footprint SMD\SOD[123])
      (libsource (lib own) (part D))))
  (libparts
    (libpart (lib own) (part NPN) (aliases (alias NPN_ALIAS))
      (pins
        (pin (num 1) (name B) (type input))
        (pin (num 2) (name E) (type passive))
        (pin (num 3) (name ~) (type passive)))))
  (nets
    (net (code 1) (name GND) (node (ref Q1) (pin 2)) (node (ref t) (pin 1)))
    (net (code 2) (name "") (node (ref Q1) (pin 1)) (node (ref D5) (pin A)))
    (net (code 3) (name "") (node (ref Q1) (pin 3)))
    (net (code 4) (name D[0]) (node (ref D5) (pin K)))
    (net (code 5) (name 'quoted) (node (ref t) (pin 2)))
    (net (code 6) (name 5E123456) (node (ref t) (pin 3)))))
"""


def part(netlist: Netlist, ref: str) -> Part:
    return next(part for part in netlist.parts if part.ref == ref)


def test_version_e(read: Read) -> None:
    netlist = read(VERSION_E)
    assert (netlist.format, netlist.title, netlist.ground, netlist.temperature_c) == (
        "kicad",
        "Line amplifier",
        (),
        None,
    )
    r1 = part(netlist, "R1")
    assert (r1.letter, r1.value, r1.footprint, r1.symbol) == (
        "R",
        "4k7",
        "Resistor_SMD:R_0603_1608Metric",
        "Device:R",
    )
    assert r1.fields == {"Tolerance": "1%", "Datasheet": "", "Sim.Device": "R"}
    assert (r1.origin.line, r1.origin.sheet, r1.origin.file) == (6, "/input/", "board.net")
    assert (r1.description, r1.do_not_fit, r1.number) == ("Resistor", False, None)
    q1 = part(netlist, "Q1")
    assert (q1.value, q1.do_not_fit, q1.origin.line) == ('BC547 "B"', True, 17)
    assert [(pin.number, pin.function, pin.net) for pin in q1.pins] == [
        ("1", "C", "GND"),
        ("2", "B", "Net-(Q1-B)"),
        ("3", "E", "GND"),
    ]
    assert [pin.number for pin in part(netlist, "U3").pins] == ["2", "10"]
    assert part(netlist, "U3").pins[1].kind == "power_in"
    assert netlist.remarks == ()


def test_version_d_with_every_atom_as_text(read: Read) -> None:
    netlist = read(VERSION_D)
    assert set(netlist.nets) == {"GND", "#2", "#3", "D[0]", "'quoted", "5E123456"}
    assert [netlist.nets[key].name for key in ("#2", "D[0]")] == ["", "D[0]"]
    assert [(pin.number, pin.function, pin.kind) for pin in part(netlist, "Q1").pins] == [
        ("1", "B", "input"),
        ("2", "E", "passive"),
        ("3", "~", "passive"),
    ]
    assert (part(netlist, "t").value, part(netlist, "t").letter) == ("nil", "T")
    assert (part(netlist, "D5").value, part(netlist, "D5").footprint) == ("1N4148;2", r"SMD\SOD[123]")
    assert netlist.remarks == ()


def test_reordering_changes_only_lines(read: Read) -> None:
    lines = VERSION_E.splitlines()
    swapped = "\n".join([*lines[:32], *lines[35:38], *lines[32:35], *lines[38:]])
    first, second = read(VERSION_E), read(swapped)
    assert swapped != VERSION_E
    assert [(part.ref, part.pins) for part in first.parts] == [(part.ref, part.pins) for part in second.parts]


def test_line_ends_and_marks(read: Read) -> None:
    plain = read(VERSION_E)
    for content in (
        VERSION_E.replace("\n", "\r\n").encode(),
        VERSION_E.encode("utf-8-sig"),
        VERSION_E.encode("utf-16"),
    ):
        other = read(content)
        assert (other.parts, other.nets, other.remarks) == (plain.parts, plain.nets, plain.remarks)


def board(components: str, nets: str = "") -> str:
    return f"(export (version E)\n(components {components})\n(nets {nets}))\n"


def test_repeated_net_names_are_kept_apart(read: Read) -> None:
    netlist = read(
        board(
            "(comp (ref R1))",
            "(net (code 1) (name A) (node (ref R1) (pin 1)))(net (code 2) (name A#1))(net (code 1) (name A))",
        )
    )
    assert len(netlist.nets) == 3
    assert [net.name for net in netlist.nets.values()] == ["A", "A#1", "A"]


def test_several_parts_behind_one_reference(read: Read) -> None:
    netlist = read(
        board(
            "\n(comp (ref Q1) (value A))\n(comp (ref Q1) (value B))\n(comp (ref Q1#2) (value C))",
            "(net (code 1) (name N) (node (ref Q1) (pin 1)))",
        )
    )
    assert [part.ref for part in netlist.parts] == ["Q1", "Q1#3", "Q1#2"]
    assert [bool(part.unknown) for part in netlist.parts] == [True, True, False]
    assert [remark.origin.line for remark in netlist.remarks] == [3, 4]


def test_nodes_of_parts_that_are_not_listed(read: Read) -> None:
    netlist = read(board("(comp (ref R1))", "\n(net (code 1) (name A) (node (ref R9) (pin 1)))"))
    assert [(remark.origin.line, remark.parts) for remark in netlist.remarks] == [(4, ("R9",))]
    assert netlist.parts[0].pins == ()


def test_a_pin_on_two_nets_and_a_node_twice(read: Read) -> None:
    netlist = read(
        board(
            "(comp (ref R1))",
            "(net (code 1) (name A) (node (ref R1) (pin 1)) (node (ref R1) (pin 1)))"
            "(net (code 2) (name B) (node (ref R1) (pin 1)))",
        )
    )
    assert [pin.net for pin in netlist.parts[0].pins] == ["A", "B"]
    assert "2 nets" in netlist.remarks[0].text


@pytest.mark.parametrize(
    ("comp", "left_out"),
    [
        ("(comp (ref R1) (value DNP))", True),
        ('(comp (ref R1) (value "10k DNF"))', True),
        ('(comp (ref R1) (value "10k (not fitted)"))', True),
        ('(comp (ref R1) (value 10k) (property (name "dnp")))', True),
        ("(comp (ref R1) (value 10k) (dnp 1))", True),
        ("(comp (ref R1) (value 10k) (fields (field (name DNP) yes)))", True),
        ("(comp (ref R1) (value 10k) (fields (field (name DNP) no)))", False),
        ("(comp (ref R1) (value 10k) (fields (field (name DNP))))", False),
        ("(comp (ref R1) (value 10k) (fields (field (name Populate) 0)))", True),
        ("(comp (ref R1) (value 10k) (fields (field (name Populate) 1)))", False),
        ("(comp (ref R1) (value 10k) (fields (field (name Note) DNP)))", True),
        ('(comp (ref R1) (value 10k) (fields (field (name Note) "replace by DNP variant")))', False),
        ('(comp (ref R1) (value 10k) (fields (field (name Config) "+LITE DNF FULL")))', True),
        ("(comp (ref R1) (value 10k) (fields (field (name Variant) DNP)))", True),
        ("(comp (ref R1) (value 10k) (fields (field (name Variant) full)))", False),
        ('(comp (ref R1) (value 10k) (property (name "Assembly") (value "do not place")))', True),
        ("(comp (ref R1) (value 10k) (fields (field (name Fitted) no)))", True),
        ("(comp (ref R1) (value 10k) (fields (field (name Do_Not_Populate) x)))", True),
        ("(comp (ref R1) (value 10k))", False),
        ('(comp (ref C1) (value "100 nF"))', False),
        ('(comp (ref C1) (value "100 NF"))', False),
        ('(comp (ref R1) (value 10k) (property (name "exclude_from_bom")))', False),
    ],
)
def test_parts_left_out(read: Read, comp: str, left_out: bool) -> None:
    assert read(board(comp)).parts[0].do_not_fit is left_out


@pytest.mark.parametrize(
    ("text", "line"),
    [
        ("(export (version E)\n(components (comp (ref R1))\n", 3),
        ("(export (version E)\n(components\n)))\n", 3),
        ('(export (version E)\n(components (comp (ref "R1))\n', 2),
        ("(export (version E)\n(nets))\n", 1),
    ],
)
def test_damaged_exports(read: Read, text: str, line: int) -> None:
    with pytest.raises(InputTrouble) as caught:
        read(text)
    assert (caught.value.file, caught.value.line) == ("board.net", line)


def test_unknown_version_is_read_with_a_remark(read: Read) -> None:
    netlist = read("(export (version F) (components (comp (ref R1))))")
    assert len(netlist.parts) == 1
    assert "version F" in netlist.remarks[0].text


def test_limits(read: Read) -> None:
    with pytest.raises(InputTrouble, match=r"limit of 64.*--most-depth"):
        read("(export (components" + "(" * 100_000 + ")" * 100_000 + "))")
    with pytest.raises(InputTrouble, match=r"limit of 3.*--most-parts"):
        read(board("(comp (ref R1))" * 4), limits=ReadLimits(parts=3))


@pytest.mark.parametrize(
    ("library", "functions", "names"),
    [
        ("", ("K_1", "A_2"), ["K", "A"]),
        ("", ("IO_1", "A"), ["IO_1", "A"]),
        ("(pin (num 1) (name K) (type passive))", ("K_1", "A"), ["K", "A"]),
        ("(pin (num 1) (name IO_1) (type passive))", ("IO_1", "A_2"), ["IO_1", "A"]),
    ],
)
def test_pin_names_that_carry_their_number(
    read: Read, library: str, functions: tuple[str, str], names: list[str]
) -> None:
    nodes = "".join(
        f"(net (code {number}) (name N{number}) (node (ref D1) (pin {number}) (pinfunction {function})))"
        for number, function in enumerate(functions, start=1)
    )
    libparts = f"(libparts (libpart (lib a) (part D) (pins {library})))"
    netlist = read(
        f"(export (version E) (components (comp (ref D1) (libsource (lib a) (part D)))) {libparts} (nets {nodes}))"
    )
    assert [pin.function for pin in netlist.parts[0].pins] == names


def test_apostrophes_are_letters(read: Read) -> None:
    # Once a recursion without bound: the library nests a quoted form for each apostrophe.
    many = "'" * 5_000
    assert list(read(board("(comp (ref R1))", f"(net (code 1) (name {many}10k'))")).nets) == [f"{many}10k'"]


def test_texts_without_end_are_cut_and_told(read: Read) -> None:
    fields = f'(fields (field (name F) "{"y" * 700}"))'
    netlist = read(board(f'\n(comp (ref R1) (value "10k {"x" * 600}") {fields})\n(comp (ref R2) (value 1k))'))
    assert (len(netlist.parts[0].value), len(netlist.parts[0].fields["F"])) == (500, 500)
    assert [(remark.origin.line, remark.parts) for remark in netlist.remarks] == [(3, ("R1",))]
    assert "700 characters" in netlist.remarks[0].text


def test_lists_where_texts_should_be_do_no_harm(read: Read) -> None:
    netlist = read(
        "(export () (version) (design (sheet)) (components (comp) (comp (ref (x y))) (comp (ref R1) (value)))"
        "(nets (net) (net (node))))"
    )
    assert len(netlist.parts) == 3


@pytest.mark.parametrize("blank", ["\x85", "\xa0", "\x1c", "\u2028"])
def test_blanks_beyond_ascii_belong_to_an_atom(read: Read, blank: str) -> None:
    # Once a hang: the scan ended the atom there, the library did not take it for a blank.
    netlist = read(board(f"(comp (ref R1) (value 10k{blank}x))"))
    assert netlist.parts[0].value == f"10k{blank}x"
