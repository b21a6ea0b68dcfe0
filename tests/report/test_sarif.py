"""SARIF: valid against the OASIS schema, rules with help, locations, fingerprints, baseline and suppressions."""

from __future__ import annotations

import json
from dataclasses import replace
from pathlib import Path
from typing import Any

import jsonschema  # type: ignore[import-untyped]
import pytest

from checker.judge.discover import load_rules
from checker.record import Location, Report, Since
from checker.report.bundle import Bundle
from checker.report.sarif import SCHEMA, escaped, uri
from tests.record.invented import FILE, report
from tests.report.hostile import NASTY, PATH, hostile

STANDARD = json.loads((Path(__file__).parent / "standards" / "sarif-schema-2.1.0.json").read_text("utf-8"))
RULES = load_rules().rules


def log(*reports: Report, **given: Any) -> dict[str, Any]:
    """The run's object, after the whole was found valid."""
    text = Bundle(reports=reports, rules=RULES, **given).render("sarif", width=80, colour=False)
    whole = json.loads(text)
    jsonschema.Draft4Validator(STANDARD).validate(whole)
    assert len(whole["runs"]) == 1
    run: dict[str, Any] = whole["runs"][0]
    return run


def test_the_schema_is_the_one_named_and_refuses_what_is_wrong() -> None:
    assert STANDARD["id"] == SCHEMA
    whole = json.loads(Bundle(reports=(report(),)).render("sarif", width=80, colour=False))
    whole["runs"][0]["results"][0]["level"] = "must-fix"
    with pytest.raises(jsonschema.ValidationError):
        jsonschema.Draft4Validator(STANDARD).validate(whole)


@pytest.mark.parametrize(
    "reports",
    [(), (report(),), (report(), replace(report(), findings=(), accepted=())), (hostile(),)],
    ids=["none", "one", "two", "hostile"],
)
def test_every_log_is_valid(reports: tuple[Report, ...]) -> None:
    run = log(*reports, without=((PATH, NASTY),), several=True)
    assert run["invocations"][0]["executionSuccessful"] is False
    indexes = [
        (result["ruleId"], run["tool"]["driver"]["rules"][result["ruleIndex"]]["id"]) for result in run["results"]
    ]
    assert all(named == at for named, at in indexes)


def test_all_rules_are_there_with_help_and_level() -> None:
    rules = {rule["id"]: rule for rule in log(report())["tool"]["driver"]["rules"]}
    assert {rule.id for rule in RULES} <= rules.keys()
    for rule in RULES:
        told = rules[rule.id]
        assert told["shortDescription"]["text"] and rule.source[:12] in told["help"]["text"].replace("\\", "")
        assert (
            told["defaultConfiguration"]["level"]
            == {"must-fix": "error", "review": "warning", "note": "note"}[rule.weight]
        )
        assert all(limit.name in told["help"]["text"] for limit in rule.limits)


def test_a_result_has_line_sheet_part_and_fingerprint() -> None:
    result = log(report())["results"][0]
    assert (result["ruleId"], result["level"], result["kind"]) == ("input-mismatch", "error", "fail")
    place = result["locations"][0]
    assert place["physicalLocation"] == {"artifactLocation": {"uri": FILE}, "region": {"startLine": 9}}
    assert [(each["fullyQualifiedName"], each["kind"]) for each in place["logicalLocations"]] == [
        ("/rx/", "module"),
        ("/rx/Q1", "element"),
    ]
    assert result["partialFingerprints"] == {"stageproofFinding/v1": "f1a2b3c4"}
    assert result["message"]["text"].startswith("The input of Q1 does not match the 50 Ω of port ANT.\n")
    assert "change: R3 27 Ω → 43 Ω" in result["message"]["text"]


def test_accepted_findings_are_suppressed_and_the_others_say_that_they_are_not() -> None:
    results = {result["ruleId"]: result for result in log(report())["results"]}
    assert results["swing-small"]["suppressions"] == [
        {
            "kind": "external",
            "status": "accepted",
            "justification": "the level never passes 1 Vpp here (RF lead, until 2027-06-30)",
        }
    ]
    assert [result["suppressions"] for rule, result in results.items() if rule != "swing-small"] == [[], [], []]


def test_baseline_only_against_an_earlier_report() -> None:
    assert all("baselineState" not in result for result in log(report())["results"])
    whole = report()
    gone = replace(whole.findings[1], rule="gone-rule", fingerprint="dead")
    blind = replace(whole.findings[1], rule="blind-rule", fingerprint="b11d")
    since = Since(path="old", new=("f1a2b3c4",), unchanged=("0a0b0c0d", "99aa"), cured=(gone,), unjudged=(blind,))
    results = log(replace(whole, since=since), replace(whole, accepted=()))["results"]
    states = {(result["ruleId"], result["baselineState"]) for result in results[:6]}
    assert states == {
        ("input-mismatch", "new"),
        ("stiff-divider", "unchanged"),
        ("conflicting-names", "unchanged"),
        ("swing-small", "unchanged"),
        ("gone-rule", "absent"),
        ("blind-rule", "updated"),
    }
    assert {result["baselineState"] for result in results[6:]} == {"new"}  # all or none of a run have one
    assert [(each["kind"], each["level"]) for each in results if each["ruleId"] == "blind-rule"] == [("open", "none")]


def test_what_could_not_be_judged_is_notified() -> None:
    texts = [each["message"]["text"] for each in log(report())["invocations"][0]["toolExecutionNotifications"]]
    assert any(text.startswith("Q10 was not judged by every rule: a model for U3") for text in texts)


@pytest.mark.parametrize(
    ("path", "made"),
    [
        ("a/b.net", "a/b.net"),
        ("a b/ü%.net", "a%20b/%C3%BC%25.net"),
        ("c:x.net", "c%3Ax.net"),
        ("/srv/a b.net", "file:///srv/a%20b.net"),
        ("a?b#c&d.net", "a%3Fb%23c%26d.net"),
        ("\udcff.net", "%ED%B3%BF.net"),
    ],
)
def test_uris_are_encoded(path: str, made: str) -> None:
    assert uri(path) == made


def test_a_name_is_no_link_and_no_placeholder() -> None:
    assert escaped("[bias](http://x) {0} {a} \\") == "\\[bias\\](http://x) {{0}} {a} \\\\"
    place = replace(report().findings[0], location=Location(file=PATH, line=1), message=NASTY)
    text = json.dumps(log(replace(report(), findings=(place,)))["results"][0]["message"])
    assert "\\u001b" not in text and "\\u202e" not in text and "\\u0000" not in text
    assert "\\\\[text\\\\](http" in text
