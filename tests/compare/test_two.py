"""Comparing reports: renumbered boards, wiring, models, conditions, tolerances, and findings that come and go."""

from __future__ import annotations

import time
from dataclasses import replace
from pathlib import Path

import pytest

from checker.compare.figures import differ
from checker.compare.findings import sort_findings
from checker.compare.match import match_parts
from checker.compare.owners import owners
from checker.compare.two import compare_reports
from checker.record import Accepted, Complex, Finding, Part, Rail, Report, Unchecked
from tests.compare.boards import SAMPLES, lay, renumbered, report_of, sample, text_of
from tests.record.invented import report

BOARDS = sorted(path.name for path in SAMPLES.iterdir() if path.is_dir())


def intent_of(name: str) -> str:
    return (SAMPLES / name / f"{name}.intent.toml").read_text("utf-8")


@pytest.mark.parametrize("name", BOARDS)
@pytest.mark.parametrize("seed", [1, 2, 5])
def test_a_renumbered_board_is_the_same_board(name: str, seed: int, tmp_path: Path) -> None:
    text, intent, refs = renumbered(text_of(name), intent_of(name), seed)
    found = compare_reports(sample(name), report_of(lay(tmp_path, text, intent)))
    assert not (found.edits or found.changed or found.conditions or found.new_findings or found.cured)
    assert {old: new for old, new in refs.items() if old != new} == found.renumbered


@pytest.mark.parametrize("name", BOARDS)
def test_both_formats_are_the_same_board(name: str) -> None:
    """Net names, pins and references are the same; what a part is called in its format is not."""
    found = compare_reports(sample(name), report_of(SAMPLES / name / f"{name}.net"))
    assert not (found.changed or found.conditions or found.new_findings or found.cured or found.renumbered)


def row(count: int, seed: int) -> Report:
    """A board of equal stages in parallel, each of five parts, renumbered by `seed`; no figures."""
    parts: dict[str, Part] = {}
    for number in range(count):
        own = (number * 7 + seed) % count if seed else number
        nets = {"B": f"b{number}", "C": f"c{number}", "E": f"e{number}"}
        parts[f"Q{own}"] = Part(kind="bipolar", model="X", pins=nets, data="q")
        for place, ends in enumerate((("vcc", "B"), ("B", "0"), ("vcc", "C"), ("E", "0"))):
            pins = {str(pin): nets.get(end, end) for pin, end in enumerate(ends, 1)}
            value = 100.0 * (place + 1) + number
            parts[f"R{own}{place}"] = Part(kind="resistor", value=value, unit="ohm", pins=pins, data=str(value))
    return replace(report(), parts=parts, ground="0", rails=(Rail(net="vcc", volts=5.0, source="intent"),), ports=())


def test_equal_stages_are_told_apart_by_their_values() -> None:
    old, new = row(8, 0), row(8, 3)
    pairs = match_parts(old, new)
    assert len(pairs) == 40
    assert all(old.parts[before].value == new.parts[after].value for before, after in pairs.items())
    for number in range(8):  # the parts of a stage stay together
        own = pairs[f"Q{number}"].removeprefix("Q")
        assert {pairs[f"R{number}{place}"] for place in range(4)} == {f"R{own}{place}" for place in range(4)}


def test_a_thousand_parts_take_seconds() -> None:
    start = time.process_time()
    assert len(match_parts(row(200, 0), row(200, 0))) == 1000
    assert len(match_parts(row(40, 0), row(40, 3))) == 200
    assert time.process_time() - start < 20.0


def test_wiring_is_traced_to_the_pin(tmp_path: Path) -> None:
    text = text_of("coax_cascade").replace("C4 EB2 0 100n", "C4 E2 0 100n")
    found = compare_reports(sample("coax_cascade"), report_of(lay(tmp_path, text, intent_of("coax_cascade"))))
    [edit] = found.edits
    assert (edit.what, edit.part, edit.before, edit.after, edit.stages) == (
        "wiring",
        "C4",
        "1 on EB2",
        "1 on E2",
        ("Q2",),
    )
    assert {change.id for change in found.changed if change.how == "edited" and change.kind == "stage"} == {"Q2"}


def test_a_swapped_resistor_is_no_edit(tmp_path: Path) -> None:
    text = text_of("coax_cascade").replace("R7 E2 EB2 47", "R7 EB2 E2 47").replace("R1 E1 0 9.1k", "R1 E1 0 9100")
    found = compare_reports(sample("coax_cascade"), report_of(lay(tmp_path, text, intent_of("coax_cascade"))))
    assert not found.edits and not found.changed


def test_a_written_model_is_an_edit_of_its_devices(tmp_path: Path) -> None:
    model = ".model own npn (is=1e-15 bf={0} vaf=80 cje=2p cjc=0.8p tf=0.1n)\n.end"
    texts = [
        text_of("coax_cascade").replace("E2 MMBTH10", "E2 own").replace(".end", model.format(bf)) for bf in (80, 200)
    ]
    old, new = (report_of(lay(tmp_path / str(i), text, intent_of("coax_cascade"))) for i, text in enumerate(texts))
    found = compare_reports(old, new)
    assert [(edit.what, edit.part, edit.stages) for edit in found.edits] == [("data", "Q2", ("Q2",))]


def test_the_intent_file_moves_figures_too(tmp_path: Path) -> None:
    intent = intent_of("coax_cascade").replace('high = "30 MHz"', 'high = "60 MHz"').replace("= 14", "= 10")
    found = compare_reports(sample("coax_cascade"), report_of(lay(tmp_path, text_of("coax_cascade"), intent)))
    assert {each.what for each in found.conditions} == {"band", "limit return_loss_db of input-mismatch"}
    assert not found.edits and {change.how for change in found.changed} == {"conditions"}


def test_what_belongs_to_which_stage() -> None:
    of = owners(sample("coax_cascade"))
    assert {ref: stages for ref, stages in of.items() if ref[0] != "J"} == {
        **dict.fromkeys(("C1", "R1", "Q1", "R2", "R3", "C2", "R4"), ("Q1",)),
        **dict.fromkeys(("C3", "R5", "R6", "Q2", "R7", "R8", "C4", "R9", "C5"), ("Q2",)),
        **dict.fromkeys(("R10", "C6"), ("Q1", "Q2")),
    }
    direct = owners(sample("audio_follower"))
    assert direct["R4"] == ("Q1",)  # its net is Q2's base too, but Q1 drives it
    assert direct["R7"] == direct["C3"] == ("Q2",) and direct["R8"] == ("Q1", "Q2")


@pytest.mark.parametrize(
    ("quantity", "before", "after", "moved"),
    [
        ("ic_a", 1e-3, 1.009e-3, False),
        ("ic_a", 1e-3, 1.011e-3, True),
        ("ic_a", 1e-12, 3e-12, False),
        ("voltage_gain_db", 20.0, 20.08, False),
        ("voltage_gain_db", 20.0, 20.09, True),
        ("droop_low_db", 0.01, 0.02, False),
        ("tj_c", 30.0, 30.9, False),
        ("tj_c", 30.0, 31.1, True),
        ("vbe_v", 0.0, 0.0009, False),
        ("low_corner_hz", None, 10.0, True),
        ("low_corner_hz", None, None, False),
        ("region", "active", "saturated", True),
        ("voltage_gain", Complex(re=10.0, im=0.0), Complex(re=-10.0, im=0.0), True),
        ("input_impedance_ohm", Complex(re=50.0, im=0.0), Complex(re=50.0, im=0.4), False),
        ("input_impedance_ohm", Complex(re=50.0, im=0.0), Complex(re=50.0, im=0.6), True),
    ],
)
def test_tolerance(quantity: str, before: object, after: object, moved: bool) -> None:
    assert differ(quantity, before, after, 0.01) is moved  # type: ignore[arg-type]


def finding(rule: str, subject: str, mark: str, severity: str = "review") -> Finding:
    return replace(report().findings[2], rule=rule, subject=(subject,), fingerprint=mark, severity=severity)  # type: ignore[arg-type]


def board(*findings: Finding, accepted: tuple[Finding, ...] = (), unchecked: tuple[Unchecked, ...] = ()) -> Report:
    signed = tuple(Accepted(finding=each, reason="r", by="b") for each in accepted)
    return replace(report(), findings=findings, accepted=signed, unchecked=unchecked)


def told(old: Report, new: Report) -> tuple[list[str], ...]:
    return tuple([each.fingerprint for each in group] for group in sort_findings(old, new, {}))


def test_findings_come_and_go() -> None:
    a, b = finding("x", "Q1", "1"), finding("y", "Q2", "2")
    assert told(board(a), board(a, b)) == (["2"], ["1"], [], [])
    assert told(board(a, b), board(b)) == ([], ["2"], ["1"], [])
    assert told(board(), board()) == ([], [], [], [])


def test_one_that_got_worse_is_new_and_one_that_got_milder_is_not() -> None:
    mild, hard = finding("x", "Q1", "1", "review"), finding("x", "Q1", "1", "must-fix")
    assert told(board(mild), board(hard)) == (["1"], [], [], [])
    assert told(board(hard), board(mild)) == ([], ["1"], [], [])


def test_a_place_known_again_needs_no_equal_fingerprint() -> None:
    assert told(board(finding("x", "Q1", "1")), board(finding("x", "Q1", "9"))) == ([], ["9"], [], [])


def test_of_two_equals_the_cured_one_is_named() -> None:
    """Their fingerprints carry a number in the order of references: with the first gone the second takes its mark."""
    old = board(finding("x", "Q1", "a"), finding("x", "Q2", "a-2"))
    assert [each.subject for each in sort_findings(old, board(finding("x", "Q2", "a")), {}).cured] == [("Q1",)]


def test_accepted_ones() -> None:
    a = finding("x", "Q1", "1")
    assert told(board(a), board(accepted=(a,))) == ([], [], [], [])
    assert told(board(accepted=(a,)), board(a)) == (["1"], [], [], [])


def test_what_cannot_be_judged_any_more_is_not_cured() -> None:
    gap = Unchecked(subject="Q1", rule="x", datum="a model", supply="one")
    assert told(board(finding("x", "Q1", "1")), board(unchecked=(gap,))) == ([], [], [], ["1"])
    assert told(board(finding("x", "Q1", "1")), board(unchecked=(replace(gap, rule=""),))) == ([], [], [], ["1"])
    assert told(board(finding("x", "Q1", "1")), board(unchecked=(replace(gap, rule="y"),))) == ([], [], ["1"], [])
