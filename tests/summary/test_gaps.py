"""What is not understood is named with its line and the stages that it bears on, in both formats and every form."""

from __future__ import annotations

from pathlib import Path

import pytest

from checker.pipeline import check_board
from checker.record import Report, Unchecked
from checker.report.forms import FORMS, form
from checker.summary.gaps import FORM
from tests.whole import MODELS, outcome_from

DECK = """V1 VCC 0 12
R1 VCC B 100k
R2 B 0 15k
RE E 0 1k
RC VCC C 4.7k
Q1 C B E QN
R3 VCC B2 100k
RE2 E2 0 1k
Q2 VCC B2 E2 QN
"""
Q1, Q2 = ("Q1",), ("Q2",)


def gap(report: Report, subject: str, datum: str = "") -> Unchecked:
    (found,) = [each for each in report.unchecked if each.subject == subject and datum in each.datum]
    return found


@pytest.mark.parametrize(
    ("line", "subject", "touches"),
    [
        ("9X B 0 foo", "line 11", Q1),
        ("9x e2 0 foo", "line 11", Q2),
        (".frob C 3", "line 11", Q1),
        (".frob 17", "line 11", ()),
        ("9X VCC 0 foo", "line 11", Q2),
        ("B1 C 0 V=tanh(v(b))", "B1", Q1),
        ("R9 E2 0 4.7äk", "R9", Q2),
        ("R9 X Y 4.7äk", "R9", ()),
        ("R9", "line 11", ()),
    ],
)
def test_lines_of_a_deck(line: str, subject: str, touches: tuple[str, ...]) -> None:
    """The title is line 1, so the line behind nine others is line 11. Q2's collector is on VCC itself."""
    found = gap(outcome_from(DECK + line).report, subject)
    assert found.location is not None
    assert (found.location.line, found.touches) == (11, touches)
    assert found.rule == ""


@pytest.mark.parametrize(
    ("lines", "line", "touches"),
    [
        (".model QX NPN(BF=oops IS=1f)\nQ3 VCC B2 E3 QX\nRE3 E3 0 1k", 11, ("Q2", "Q3")),
        (".model QX NPN(BF=50 7)\nQ3 VCC B2 E3 QX\nRE3 E3 0 1k", 11, ("Q2", "Q3")),
        (".model QX NPN(BF=oops)", 11, ()),
        (".temp warm", 11, ("Q1", "Q2")),
        (".subckt s p\nR1 p 0 1k\nR2 p\n.ends\nX1 C s\nX2 E2 s", 13, ("Q1", "Q2")),
        (".subckt s p w=1\nR1 p 0 {1k*w}\n.ends\nX1 E2 s w=wide", 14, ("Q2",)),
    ],
)
def test_what_a_line_bears_on_beyond_its_words(lines: str, line: int, touches: tuple[str, ...]) -> None:
    """A model bears on the transistors that use it, a temperature on all, a line of a subcircuit on its instances."""
    report = outcome_from(DECK + lines).report
    (found,) = [each for each in report.unchecked if each.location and each.location.line == line]
    assert found.touches == touches


def test_what_a_block_without_an_end_or_a_beginning_bears_on() -> None:
    """A control block swallows what follows, perhaps parts; a continuation of nothing names nets like any line."""
    text = f"* board\n+ E2 0 1k\n{MODELS}{DECK}.control\nrun\n"
    report = outcome_from(text, title=False).report
    start, end = 2, len(text.splitlines()) - 1
    assert {each.location.line: each.touches for each in report.unchecked if each.location} == {
        start: ("Q2",),
        end: ("Q1", "Q2"),
    }


def test_a_part_bears_on_the_stage_that_only_its_gate_is_on() -> None:
    """M1 has no model; its gate draws nothing, yet what Q1 drives there is not known."""
    found = gap(outcome_from(DECK + "M1 D C 0 0 nowhere\nRD VCC D 1k").report, "M1", "model")
    assert found.touches == ("M1", "Q1")


def test_many_parts_that_bear_on_no_stage_are_only_named_in_the_text() -> None:
    """Up to three have entries of their own; a line that was not understood always has."""
    lost = [f"R{k} X{k} 0 4.7äk" for k in range(11, 15)]
    for count, folded in ((3, False), (4, True)):
        report = outcome_from(DECK + "\n".join(lost[:count]) + "\n.frob 17").report
        text = form("text")(report, width=200, colour=False)
        assert (f"{count} that bear on no stage" in text) == folded
        assert sum(f"for     R{k} everything" in text for k in range(11, 15)) == (0 if folded else count)
        assert all(f"what R{k} is" in text for k in range(11, 11 + count))
        assert "for     line" in text and FORM in text


def test_data_that_one_thing_would_supply_share_an_entry() -> None:
    report = outcome_from(DECK).report
    shared = [gap for gap in report.unchecked if gap.location is None]
    text = form("text")(report, width=400, colour=False)
    for supply in {gap.supply for gap in shared if gap.supply}:
        assert text.count(f"supply  {supply}\n") == 1
    assert all(gap.datum in text for gap in shared)


def export(*extra: str) -> str:
    """A follower in the other format, with further nodes on its nets."""
    base = '(net (code 1) (name "B") (node (ref Q1) (pin 1)) (node (ref R1) (pin 1)) {})'
    return f"""(export (version D)
(components
(comp (ref Q1) (value 2N3904) (libsource (lib Device) (part Q_NPN_BCE)))
(comp (ref R1) (value 100k) (libsource (lib Device) (part R)))
(comp (ref R2) (value 1k) (libsource (lib Device) (part R)))
(comp (ref R8) (value four) (libsource (lib Device) (part R))))
(nets
{base.format(" ".join(extra))}
(net (code 2) (name "+12V") (node (ref Q1) (pin 2)) (node (ref R1) (pin 2)))
(net (code 3) (name "E") (node (ref Q1) (pin 3)) (node (ref R2) (pin 1)) (node (ref R8) (pin 1)))
(net (code 4) (name "GND") (node (ref R2) (pin 2)) (node (ref R8) (pin 2)))))
"""


def test_values_and_lost_pins_of_an_export(tmp_path: Path) -> None:
    path = tmp_path / "board.net"
    path.write_text(export("(node (ref R77) (pin 1))"), "utf-8")
    report = check_board(path, None).report
    value, pin = gap(report, "R8"), gap(report, "R77")
    assert value.location is not None and value.location.line == 6
    assert pin.location is not None and pin.location.line == 8
    assert value.touches == pin.touches == Q1


def test_a_pin_on_two_nets_of_an_export(tmp_path: Path) -> None:
    path = tmp_path / "board.net"
    path.write_text(export("(node (ref R2) (pin 1))"), "utf-8")
    found = gap(check_board(path, None).report, "R2", "on 2 nets at once")
    assert found.location is not None
    assert (found.location.line, found.touches) == (5, Q1)


@pytest.mark.parametrize("name", [name for name in FORMS if name != "json"])
def test_every_form_tells_where_no_stage_is_touched(name: str) -> None:
    report = outcome_from(DECK + "R9 X Y 4.7äk").report
    assert "bears on no stage" in " ".join(form(name)(report, width=100, colour=False).split())


@pytest.mark.parametrize("name", list(FORMS))
def test_every_form_tells_line_and_stages(name: str) -> None:
    report = outcome_from(DECK + "9X B 0 foo").report
    text = form(name)(report, width=100, colour=False)
    assert "9X B 0 foo" in text
    if name in ("json", "sarif"):
        assert '"line": 11' in text or '"startLine": 11' in text
    else:
        assert "board.cir:11" in text
    assert '"Q1"' in text if name == "json" else "bears on" in text
