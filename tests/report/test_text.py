"""The text forms at fixed width against golden files, and what holds for every report.

After a wanted change: `python -m tests.report.test_text` writes the golden files anew; read the difference.
"""

from __future__ import annotations

import re
from collections.abc import Callable
from dataclasses import replace
from pathlib import Path
from typing import get_type_hints

import pytest

from checker.record import Bound, Checked, Measured, NetFigures, Report, in_order
from checker.report.layout import cells
from checker.report.specs import render_specs
from checker.report.text import render
from checker.report.why import render_why
from checker.trouble import InputTrouble
from tests.record.invented import report, workings

GOLDEN = Path(__file__).with_name("golden")
ANSI = re.compile("\x1b\\[[0-9;]*m")

FORMS: dict[str, Callable[[], str]] = {
    "text_100": lambda: render(report(), width=100, colour=False),
    "text_80": lambda: render(report(), width=80, colour=False),
    "text_colour": lambda: render(report(), width=100, colour=True),
    "specs_100": lambda: render_specs(report(), width=100, colour=False),
    "why_stage": lambda: render_why(report(), "Q1", workings(), width=100, colour=False),
    "why_rule": lambda: render_why(report(), "input-mismatch", workings(), width=100, colour=False),
}


@pytest.mark.parametrize("name", FORMS)
def test_golden(name: str) -> None:
    assert FORMS[name]() == (GOLDEN / f"{name}.txt").read_text(encoding="utf-8")


@pytest.mark.parametrize("width", [60, 80, 100, 250])
def test_no_line_is_wider_than_asked(width: int) -> None:
    for text in (
        render(report(), width=width, colour=False),
        render_specs(report(), width=width, colour=False),
        render_why(report(), "Q1", workings(), width=width, colour=False),
    ):
        for line in text.splitlines():
            assert cells(line) <= width, line
            assert line == line.rstrip()


def test_first_line_says_how_much_was_checked() -> None:
    first = render(report(), width=100, colour=False).splitlines()[0]
    assert first == "3 of 4 stages checked: 1 to fix, 1 to review, 1 to note, 1 accepted, 2 not judged"
    quiet = replace(report(), findings=(), accepted=(), unchecked=(), checked=Checked(stages=4, of=4))
    assert render(quiet, width=100, colour=False).startswith("4 of 4 stages checked: nothing found\n")


def test_worst_findings_stand_first_whatever_their_order() -> None:
    turned = replace(report(), findings=report().findings[::-1], stages=report().stages[::-1])
    text = render(turned, width=100, colour=False)
    assert text == render(report(), width=100, colour=False)
    places = [text.index(word) for word in ("MUST FIX", "REVIEW", "NOTE", "Stages at rest")]
    assert places == sorted(places)


def test_colour_only_paints() -> None:
    painted, plain = (render(report(), width=100, colour=on) for on in (True, False))
    assert painted != plain and ANSI.sub("", painted) == plain
    assert "\x1b" not in plain


def test_incomplete_is_said_at_the_top() -> None:
    broken = replace(report(), incomplete=True, faults=("rule x: division by zero",))
    top = render(broken, width=100, colour=False).splitlines()[1:4]
    assert top[0].startswith("INCOMPLETE") and "division by zero" in top[1]


def test_remedy_shows_before_and_after_and_what_it_was_tried_in() -> None:
    text = render(report(), width=100, colour=False)
    assert "change    R3 27 Ω → 43 Ω" in text
    assert "port ANT worst return loss 11.6 dB → 22.4 dB" in text
    assert "tried in  nominal, cold, hot, gain low, gain high" in text


HOSTILE = "\x1b]0;owned\x07\u202eevil\u2066\r\n\x9b31m\u200b[bold]{0}%s<b>"


def hostile(value: object) -> object:
    """The same record with a hostile tail on every free text in it; words of the vocabulary are ours."""
    if isinstance(value, tuple):
        return tuple(hostile(item) for item in value)
    if isinstance(value, dict):
        return {f"{key}{HOSTILE}": hostile(item) for key, item in value.items()}
    if hasattr(value, "__dataclass_fields__"):
        hints = get_type_hints(type(value))
        free = (name for name, hint in hints.items() if "Literal" not in str(hint) and name in dir(value))
        changed = {name: hostile(getattr(value, name)) for name in free if not name.startswith("_")}
        return replace(value, **changed)  # type: ignore[type-var]
    return value + HOSTILE if isinstance(value, str) else value


def test_hostile_text_is_neutralised_everywhere() -> None:
    bad, bad_workings = hostile(report()), hostile(workings())
    assert isinstance(bad, Report) and isinstance(bad_workings, tuple)
    stage = in_order(bad).stages[1].id
    for text in (
        render(bad, width=100, colour=False),
        render_specs(bad, width=100, colour=False),
        render_why(bad, stage, bad_workings, width=100, colour=False),
    ):
        assert all(line.isprintable() for line in text.split("\n"))
        assert "<U+202E>" in text and "<U+001B>" in text and "[bold]{0}%s" in text


def test_a_huge_name_cannot_flood_the_report() -> None:
    name = "N" * 1_000_000
    finding = replace(report().findings[0], subject=(name,), message=name)
    big = replace(report(), findings=(finding,), nets={name: NetFigures(dc_v=None)})
    assert len(render(big, width=100, colour=False)) < 20_000


def test_bare_report_renders() -> None:
    bare = Report(
        tool=report().tool,
        netlist=report().netlist,
        conditions=replace(report().conditions, band_hz=None, f0_hz=None, intent=None),
        checked=Checked(stages=0, of=0),
        unavailable={"conditions/band_hz": "no port was found"},
    )
    text = render(bare, width=80, colour=False)
    assert text.splitlines() == [
        "0 of 0 stages checked: nothing found",
        "  boards/receiver.net, intent none: see assumptions",
        "  25 °C, no band (no port was found)",
    ]
    assert render_specs(bare, width=80, colour=False).startswith("No transistor stage\n")


def test_notes_and_consequences_are_brief() -> None:
    full = report().findings[0]
    consequence = replace(full, fingerprint="c", caused_by="x", rule="zz-rule")
    note = replace(full, severity="note", fingerprint="n", rule="zz-note")
    cause = replace(full, fingerprint="x", rule="aa-rule")
    text = render(replace(report(), findings=(consequence, note, cause)), width=100, colour=False)
    blocks = text.partition("Stages at rest")[0].split("\n\n")[1:4]
    assert ["why " in block for block in blocks] == [True, False, False]
    assert ["follows   from aa-rule of Q1, R3, ANT" in block for block in blocks] == [False, True, False]
    assert all("change    R3 27 Ω → 43 Ω" in block for block in blocks)
    assert "11.6 dB at 3.00 MHz (limit: at least 14 dB, limits of the intent file)" in blocks[2]


def test_the_same_reasoning_is_given_once_and_one_datum_gathers_its_subjects() -> None:
    full = report().findings[0]
    again = replace(full, subject=("Q9",), fingerprint="again")
    lacking = report().unchecked
    text = render(
        replace(report(), findings=(full, again), unchecked=(*lacking, replace(lacking[1], subject="Q2"))),
        width=100,
        colour=False,
    )
    assert text.count("MUST FIX") == 2 and text.count("  why ") == 1
    assert text.count("the source impedance") == 1 and "for     Q1 noise-figure, Q2 noise-figure" in text


def test_finding_without_figures_and_with_a_foreign_cause() -> None:
    finding = replace(
        report().findings[1],
        caused_by="gone",
        measured=Measured(quantity="duty", value=None, unit=""),
        limit=Bound(relation="equals", value=0.5, unit="", source=""),
    )
    text = render(replace(report(), findings=(finding,)), width=80, colour=False)
    assert "  found     duty —\n  limit     equals 0.5\n" in text and "follows" not in text


def test_why_refuses_an_unknown_subject_with_a_hint() -> None:
    with pytest.raises(InputTrouble, match="did you mean input-mismatch"):
        render_why(report(), "input-mismach", workings(), width=80, colour=False)
    with pytest.raises(InputTrouble, match="it knows J1, Q1, Q2, Q10"):
        render_why(report(), "zzz", workings(), width=80, colour=False)


def test_why_takes_a_part_a_fingerprint_and_an_accepted_finding() -> None:
    part = render_why(report(), "R3", workings(), width=80, colour=False)
    assert part.startswith("MUST FIX") and "No working was kept for R3." in part
    by_print = render_why(report(), "f1a2b3c4", workings(), width=80, colour=False)
    assert "MUST FIX" in by_print and "VT = 25.69 mV" in by_print
    assert "Q2 clips at" in render_why(report(), "swing-small", workings(), width=80, colour=False)


if __name__ == "__main__":
    for name, make in FORMS.items():
        (GOLDEN / f"{name}.txt").write_text(make(), encoding="utf-8")
