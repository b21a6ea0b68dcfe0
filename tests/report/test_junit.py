"""JUnit XML: a suite a board, a case a stage and rule.

No standards body publishes a schema; `checked` holds the structure that readers of the format expect, from memory.
"""

from __future__ import annotations

import re
from dataclasses import replace
from xml.etree import ElementTree

import pytest

from checker.record import Checked, Report
from checker.report.bundle import Bundle
from checker.words import Gate
from tests.record.invented import FILE, report
from tests.report.hostile import NASTY, PATH, hostile

CHILDREN = {
    "testsuites": {"testsuite"},
    "testsuite": {"testcase"},
    "testcase": {"failure", "error", "skipped", "system-out"},
    "failure": set(),
    "error": set(),
    "skipped": set(),
    "system-out": set(),
}
NEEDED = {
    "testsuites": {"name", "tests", "failures", "errors", "skipped"},
    "testsuite": {"name", "tests", "failures", "errors", "skipped"},
    "testcase": {"name", "classname"},
    "failure": {"message", "type"},
    "error": {"message", "type"},
    "skipped": {"message"},
    "system-out": set(),
}


def checked(text: str) -> ElementTree.Element:
    """The tree, after every element, attribute and count was found to be as it must."""
    root = ElementTree.fromstring(text)  # noqa: S314 - our own output
    assert root.tag == "testsuites"
    for element in root.iter():
        assert {child.tag for child in element} <= CHILDREN[element.tag]
        assert element.attrib.keys() == NEEDED[element.tag]
    for element in [root, *root]:
        cases = list(element.iter("testcase"))
        counts = {"tests": len(cases)}
        for key, tag in (("failures", "failure"), ("errors", "error"), ("skipped", "skipped")):
            counts[key] = sum(case.find(tag) is not None for case in cases)
        assert {key: int(element.attrib[key]) for key in counts} == counts
    for suite in root:
        names = [case.attrib["name"] for case in suite]
        assert len(names) == len(set(names))
        assert all(sum(child.tag != "system-out" for child in case) <= 1 for case in suite)
    return root


def suites(*reports: Report, gate: Gate = "must-fix", without: tuple[tuple[str, str], ...] = ()) -> ElementTree.Element:
    bundle = Bundle(reports=reports, without=without, gate=gate, several=True)
    return checked(bundle.render("junit", width=80, colour=False))


def results(root: ElementTree.Element) -> dict[str, str]:
    """Case name to what became of it."""
    return {
        case.attrib["name"]: next((child.tag for child in case if child.tag != "system-out"), "passed")
        for case in root.iter("testcase")
    }


JUDGED = replace(report(), judged={"input-mismatch": ("Q1",), "soft-divider": ("Q1", "Q2")})


def test_a_case_for_each_stage_and_rule() -> None:
    root = suites(JUDGED)
    assert [suite.attrib["name"] for suite in root] == [FILE]
    assert results(root) == {
        "board: stages checked": "passed",
        "Q1: input-mismatch": "failure",
        "Q1: stiff-divider": "passed",  # a review, under the gate
        "Q1: noise-figure": "skipped",
        "Q1: soft-divider": "passed",
        "Q2: soft-divider": "passed",
        "Q2: conflicting-names": "passed",
        "Q2: swing-small": "skipped",  # accepted
        "Q10: every rule": "skipped",
    }


@pytest.mark.parametrize(("gate", "failures"), [("never", 0), ("must-fix", 1), ("review", 2), ("note", 3)])
def test_what_fails_is_what_the_gate_counts(gate: Gate, failures: int) -> None:
    assert suites(JUDGED, gate=gate).attrib["failures"] == str(failures)


def test_reasons_are_told() -> None:
    root = suites(JUDGED)
    skipped = {case.attrib["name"]: case.find("skipped") for case in root.iter("testcase")}
    accepted = skipped["Q2: swing-small"]
    assert accepted is not None
    assert accepted.attrib["message"] == "accepted by RF lead until 2027-06-30: the level never passes 1 Vpp here"
    failure = root.find(".//failure")
    assert failure is not None and failure.attrib["type"] == "must-fix" and "R3 27 Ω → 43 Ω" in (failure.text or "")


def test_a_board_without_a_report_and_one_not_checked_are_errors_and_failures() -> None:
    root = suites(
        replace(report(), findings=(), checked=Checked(stages=0, of=3)), without=(("bad.net", "bad.net:3: no"),)
    )
    assert results(root)["board: stages checked"] == "failure"
    assert results(root)["netlist: read"] == "error"


def test_two_boards_are_two_suites_and_no_time_is_told() -> None:
    text = Bundle(reports=(report(), report()), several=True).render("junit", width=80, colour=False)
    assert len(checked(text)) == 2 and not re.search(r"\btime(stamp)?=", text)


def test_hostile_names_stay_text() -> None:
    root = suites(hostile(), without=((PATH, NASTY),))
    assert root.attrib["errors"] == "2"  # incomplete, and the board without a report
    whole = ElementTree.tostring(root, encoding="unicode")
    assert "<script" not in whole and "\x1b" not in whole
    assert any("<script>" in (child.text or "") for child in root.iter())  # as text it is all there
