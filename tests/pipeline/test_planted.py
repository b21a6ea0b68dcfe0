"""Boards with one planted mistake, in both formats: found where it is, mended as proposed, silent when clean."""

from __future__ import annotations

import re
import shutil
from pathlib import Path

import pytest

from checker.record import Finding, Report
from tests.boards.test_planted import BOARDS, PLANTED
from tests.boards.writer import kicad_export
from tests.pipeline.formats import checked

EACH = pytest.mark.parametrize("board", BOARDS, ids=lambda board: board["name"])
FORMS = pytest.mark.parametrize("form", ["cir", "net"])
NO_LEVER = {"reverse-active", "no-base-path", "beta-dependent-bias"}
"""What no other value of a part that is there can mend: the device is turned round, a resistor lacks, and a base fed by
one resistor needs a second."""
WEIGHT = {"note": 0, "review": 1, "must-fix": 2}


def report_of(folder: Path, name: str, form: str, text: str | None = None) -> Report:
    """The report of a planted board in one of the formats; `text` instead of its own netlist."""
    text = text if text is not None else (PLANTED / f"{name}.cir").read_text("utf-8")
    shutil.copy(PLANTED / f"{name}.intent.toml", folder)
    path = folder / f"{name}.{form}"
    path.write_text(text if form == "cir" else kicad_export(name, text), "utf-8")
    return checked(path).report


def above_note(report: Report) -> list[Finding]:
    """Findings that would stop someone."""
    return [finding for finding in report.findings if finding.severity != "note"]


def planted(report: Report, board: dict[str, str]) -> Finding:
    """The finding that the board was made for."""
    found = [f for f in report.findings if f.rule == board["rule"] and board["part"] in f.subject]
    assert len(found) == 1, [(f.rule, f.subject) for f in report.findings]
    return found[0]


@FORMS
@EACH
def test_the_mistake_is_found_at_its_part_and_nothing_else(board: dict[str, str], form: str, tmp_path: Path) -> None:
    report = report_of(tmp_path, board["name"], form)
    finding = planted(report, board)
    assert finding.outcome in ("violates", "may-violate")
    assert WEIGHT[finding.severity] >= WEIGHT["review"]
    others = {f.rule for f in above_note(report)} - {board["rule"]}
    assert others <= set(board["also"])
    assert not report.incomplete


@FORMS
@EACH
def test_the_clean_twin_shows_nothing_above_a_note(board: dict[str, str], form: str, tmp_path: Path) -> None:
    report = report_of(tmp_path, board["clean"], form)
    assert above_note(report) == []
    assert report.checked.stages == report.checked.of > 0


def changed(text: str, finding: Finding) -> str:
    """The netlist with the values of a remedy written in."""
    assert finding.remedy is not None
    for change in finding.remedy.changes:
        pattern = re.compile(rf"^({re.escape(change.part)}(?: \S+){{2}}) \S+", re.MULTILINE)
        text, count = pattern.subn(lambda m, to=change.to: f"{m[1]} {to!r}", text)
        assert count == 1
    return text


@EACH
def test_the_proposed_values_clear_the_finding(board: dict[str, str], tmp_path: Path) -> None:
    """Written into the netlist and checked anew, from the first line on: gone, and nothing new of its weight."""
    report = report_of(tmp_path, board["name"], "cir")
    finding = planted(report, board)
    if board["rule"] in NO_LEVER:
        assert finding.remedy is None
        return
    mended = (
        [finding] if finding.remedy is not None else [f for f in report.findings if f.fingerprint == finding.caused_by]
    )
    assert mended and mended[0].remedy is not None, "neither it nor its cause has a remedy"
    text = changed((PLANTED / f"{board['name']}.cir").read_text("utf-8"), mended[0])
    after = report_of(tmp_path, board["name"], "cir", text)
    assert [f for f in after.findings if f.rule == board["rule"]] == []
    before = {(f.rule, f.subject) for f in report.findings}
    fresh = [f for f in after.findings if (f.rule, f.subject) not in before]
    assert [f for f in fresh if WEIGHT[f.severity] >= WEIGHT[finding.severity]] == []
