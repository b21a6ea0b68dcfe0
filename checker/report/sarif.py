"""The report as SARIF 2.1.0 (OASIS): one run over all boards, with every rule and its help.

Messages are plain text in the sense of the standard, 3.11.5 and 3.11.6: brackets and numbered braces of a name are
escaped, or it could pass for a link or a placeholder.
"""

from __future__ import annotations

import re
from collections.abc import Iterator, Mapping, Sequence
from pathlib import PurePosixPath
from typing import Any
from urllib.parse import quote

from checker.record import Accepted, Finding, Location, Report, Unchecked, in_order
from checker.record.write import dump, plain
from checker.report.bundle import Bundle
from checker.report.catalogue import RuleShown, limit_text
from checker.report.clean import clean, name
from checker.report.sections.findings import bearing, facts
from checker.words import Severity

SCHEMA = "https://docs.oasis-open.org/sarif/sarif/v2.1.0/errata01/os/schemas/sarif-schema-2.1.0.json"
LEVELS: dict[Severity, str] = {"must-fix": "error", "review": "warning", "note": "note"}
PRINT = "stageproofFinding/v1"
"""Key of our fingerprint among those that other programs may add."""
Json = dict[str, Any]


def render(report: Report, *, width: int, colour: bool) -> str:
    """One board; the rules are those that have findings."""
    return render_bundle(Bundle(reports=(report,)), width=width, colour=colour)


def render_bundle(bundle: Bundle, *, width: int, colour: bool) -> str:  # noqa: ARG001 - one signature for all forms
    """All boards in one run; width and colour mean nothing here."""
    reports = tuple(in_order(report) for report in bundle.reports)
    rules = _rules(bundle.rules, reports)
    index = {rule["id"]: number for number, rule in enumerate(rules)}
    compared = any(report.since is not None for report in reports)
    version = {"version": clean(reports[0].tool.version)} if reports else {}
    run = {
        "tool": {"driver": {"name": "Stageproof", **version, "rules": rules}},
        "invocations": [_invocation(bundle, reports, index)],
        "artifacts": [_artifact(report) for report in _distinct(reports)],
        "results": [result for report in reports for result in _results(report, index, compared)],
    }
    return dump({"$schema": SCHEMA, "version": "2.1.0", "runs": [run]}) + "\n"


def escaped(text: str) -> str:
    """Text in which nothing is a link or a placeholder."""
    bare = re.sub(r"([\\\[\]])", r"\\\1", text)
    return re.sub(r"\{(\d+)\}", r"{{\1}}", bare)


def uri(path: str) -> str:
    """A path as a URI reference, everything but plain letters percent-encoded."""
    made = quote(path, safe="/", errors="surrogatepass")
    return f"file://{made}" if PurePosixPath(path).is_absolute() else made


def _rules(known: Sequence[RuleShown], reports: Sequence[Report]) -> list[Json]:
    made = {rule.id: _rule(rule) for rule in known}
    for report in reports:
        for finding in _all(report):
            rule = clean(finding.rule)
            made.setdefault(rule, {"id": rule, "shortDescription": _text(finding.why or "—")})
    return [made[rule] for rule in sorted(made)]


def _rule(rule: RuleShown) -> Json:
    told = [
        rule.summary,
        f"You see: {rule.bench}" if rule.bench else "",
        f"Source: {rule.source}" if rule.source else "",
    ]
    limits = [f"Limit {limit_text(limit)}" for limit in rule.limits]
    lines = [clean(line) for line in (*told, *limits) if line]
    return {
        "id": clean(rule.id),
        "shortDescription": _text(rule.summary),
        "fullDescription": _text(". ".join(filter(None, (rule.summary, rule.bench)))),
        "help": {"text": escaped("\n".join(lines))},
        "defaultConfiguration": {"level": LEVELS[_severity(rule.weight)]},
        "properties": {"tags": [clean(rule.theme)]},
    }


def _severity(weight: str) -> Severity:
    return next((severity for severity in LEVELS if severity == weight), "note")


def _text(text: str) -> Json:
    return {"text": escaped(clean(text))}


def _invocation(bundle: Bundle, reports: Sequence[Report], index: Mapping[str, int]) -> Json:
    notices = [
        *(
            {"level": "error", "message": _text(message), "locations": [_file(path)]}
            for path, message in bundle.without
        ),
        *(
            {"level": "error", "message": _text(fault), "locations": [_file(report.netlist.path)]}
            for report in reports
            for fault in report.faults
        ),
        *(_gap(gap, report, index) for report in reports for gap in report.unchecked),
    ]
    fine = not bundle.without and not any(report.incomplete for report in reports)
    return {"executionSuccessful": fine, "toolExecutionNotifications": notices}


def _gap(gap: Unchecked, report: Report, index: Mapping[str, int]) -> Json:
    """What could not be judged, with what would let it."""
    supply = f"; supply {clean(gap.supply)}" if gap.supply else ""
    rule = gap.rule or "every rule"
    text = f"{name(gap.subject)} was not judged by {clean(rule)}: {clean(gap.datum)} is missing{supply}"
    text = "; ".join(filter(None, (text, bearing(gap))))
    about = (
        {"associatedRule": {"id": clean(gap.rule), "index": index[clean(gap.rule)]}} if clean(gap.rule) in index else {}
    )
    where = gap.location or next((stage.location for stage in report.stages if stage.id == gap.subject), None)
    return {
        "level": "warning",
        "message": {"text": escaped(text)},
        "locations": [_place(where, gap.subject, report)],
        **about,
    }


def _distinct(reports: Sequence[Report]) -> list[Report]:
    """One a netlist: the standard wants no artifact twice."""
    return list({report.netlist.path: report for report in reports}.values())


def _artifact(report: Report) -> Json:
    return {
        "location": {"uri": uri(report.netlist.path)},
        "roles": ["analysisTarget"],
        "hashes": {"sha-256": clean(report.netlist.sha256)},
    }


def _all(report: Report) -> Iterator[Finding]:
    yield from report.findings
    yield from (each.finding for each in report.accepted)
    if report.since is not None:
        yield from (*report.since.cured, *report.since.unjudged)


def _results(report: Report, index: Mapping[str, int], compared: bool) -> Iterator[Json]:
    since = report.since
    known = set() if since is None else set(since.unchanged)
    for finding in report.findings:
        state = "unchanged" if finding.fingerprint in known else "new"
        yield _result(finding, report, index, _baseline(state, compared), ())
    for each in report.accepted:
        yield _result(each.finding, report, index, _baseline("unchanged", compared), (each,))
    for finding in () if since is None else since.cured:
        yield _result(finding, report, index, _baseline("absent", compared), ())
    for finding in () if since is None else since.unjudged:
        unknown = {"kind": "open", "level": "none", **_baseline("updated", compared)}
        yield _result(finding, report, index, unknown, ())


def _baseline(state: str, compared: bool) -> Json:
    return {"baselineState": state} if compared else {}


def _result(
    finding: Finding, report: Report, index: Mapping[str, int], state: Json, accepted: tuple[Accepted, ...]
) -> Json:
    on = finding.subject[0] if finding.subject else "board"
    return {
        "ruleId": clean(finding.rule),
        "ruleIndex": index[clean(finding.rule)],
        "kind": "fail",
        "level": LEVELS[finding.severity],
        "message": {"text": escaped(_told(finding))},
        "locations": [_place(finding.location, on, report)],
        "partialFingerprints": {PRINT: clean(finding.fingerprint)},
        "suppressions": [_suppression(each) for each in accepted],
        "properties": _properties(finding),
        **state,
    }


def _told(finding: Finding) -> str:
    """The message, and below it what else is known."""
    return "\n".join([clean(finding.message), *(f"{label}: {text}" for label, text in facts(finding))])


def _properties(finding: Finding) -> Json:
    keys = ("outcome", "subject", "state", "scenario", "frequency_hz", "measured", "limit", "caused_by", "remedy")
    return {key: plain(getattr(finding, key)) for key in keys if getattr(finding, key) is not None}


def _suppression(each: Accepted) -> Json:
    until = f", until {clean(each.until)}" if each.until else ""
    text = f"{clean(each.reason)} ({name(each.by)}{until})"
    return {"kind": "external", "status": "accepted", "justification": escaped(text)}


def _file(path: str) -> Json:
    return {"physicalLocation": {"artifactLocation": {"uri": uri(path)}}}


def _place(location: Location | None, subject: str, report: Report) -> Json:
    """File and line, the sheet, and the part on it."""
    where = _file(location.file if location is not None and location.file else report.netlist.path)
    if location is not None and location.line > 0:
        where["physicalLocation"]["region"] = {"startLine": location.line}
    sheet = clean(location.sheet) if location is not None else ""
    part = {"name": name(subject), "fullyQualifiedName": f"{sheet}{name(subject)}", "kind": "element"}
    parts = sheet.strip("/").rpartition("/")
    sheets = [{"name": parts[2] or "/", "fullyQualifiedName": sheet, "kind": "module"}] if sheet else []
    return {**where, "logicalLocations": [*sheets, part]}
