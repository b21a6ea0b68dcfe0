"""The report as JUnit XML: a suite a board, a case a stage and rule.

A case fails where the exit status does: with a finding at or above the gate. Findings below it are its output; what is
accepted, or could not be judged, is skipped with the reason. No times: equal boards give equal bytes.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from xml.sax.saxutils import escape, quoteattr  # writes only

from checker.record import Finding, Report, in_order, judged_on, natural
from checker.report.bundle import Bundle
from checker.report.clean import clean, name
from checker.report.sections.findings import bearing, facts
from checker.shape import frozen
from checker.words import SEVERITIES

EVERYTHING = "every rule"
"""The case that stands for a stage of which nothing could be judged."""


@frozen
class Case:
    """One test case: `result` is failure, error, skipped or "" for passed; `message` its attribute, `text` below it;
    `output` what goes into the log either way.
    """

    subject: str
    rule: str
    result: str = ""
    kind: str = ""
    message: str = ""
    text: str = ""
    output: str = ""


def render(report: Report, *, width: int, colour: bool) -> str:
    """One board."""
    return render_bundle(Bundle(reports=(report,)), width=width, colour=colour)


def render_bundle(bundle: Bundle, *, width: int, colour: bool) -> str:  # noqa: ARG001 - one signature for all forms
    """All boards; a netlist without a report is a suite with one error."""
    suites = [(report.netlist.path, _cases(in_order(report), bundle)) for report in bundle.reports]
    suites += [
        (path, [Case(subject="netlist", rule="read", result="error", kind="unusable", message=message)])
        for path, message in bundle.without
    ]
    every = [case for _, cases in suites for case in cases]
    lines = [
        '<?xml version="1.0" encoding="UTF-8"?>',
        f"<testsuites{_attributes(name='Stageproof', **_counts(every))}>",
    ]
    for path, cases in suites:
        lines.append(f"  <testsuite{_attributes(name=clean(path), **_counts(cases))}>")
        lines += [line for case in cases for line in _case(case, path)]
        lines.append("  </testsuite>")
    return "\n".join([*lines, "</testsuites>"]) + "\n"


def _counts(cases: Iterable[Case]) -> dict[str, str]:
    results = [case.result for case in cases]
    return {
        "tests": str(len(results)),
        "failures": str(results.count("failure")),
        "errors": str(results.count("error")),
        "skipped": str(results.count("skipped")),
    }


def _cases(report: Report, bundle: Bundle) -> list[Case]:
    """By subject, then rule; first what is wrong with the run as a whole."""
    found: dict[tuple[str, str], Case] = {}
    for case in (*_judged(report), *_unchecked(report), *_accepted(report)):
        found[case.subject, case.rule] = case
    stages = {stage.id for stage in report.stages}
    by_place: dict[tuple[str, str], list[Finding]] = {}
    for finding in report.findings:
        by_place.setdefault((judged_on(finding.subject, stages), finding.rule), []).append(finding)
    for (subject, rule), findings in by_place.items():
        found[subject, rule] = _with_findings(subject, rule, findings, bundle)
    ordered = sorted(found.values(), key=lambda case: (natural(case.subject), case.rule))
    return [*_run(report), *ordered]


def _run(report: Report) -> Iterator[Case]:
    told = f"{report.checked.stages} of {report.checked.of} stages checked"
    blind = report.checked.of > 0 and report.checked.stages == 0
    yield Case(
        subject="board",
        rule="stages checked",
        result="failure" if blind else "",
        kind="unchecked",
        message=told,
        output=told,
    )
    if report.incomplete:
        text = "\n".join(map(clean, report.faults))
        yield Case(subject="board", rule="run", result="error", kind="incomplete", message="incomplete", text=text)


def _judged(report: Report) -> Iterator[Case]:
    for rule, on in report.judged.items():
        yield from (Case(subject=subject, rule=rule) for subject in on)


def _unchecked(report: Report) -> Iterator[Case]:
    for gap in report.unchecked:
        supply = f"; supply {clean(gap.supply)}" if gap.supply else ""
        message = f"not judged, {clean(gap.datum)} is missing{supply}"
        message = "; ".join(filter(None, (message, bearing(gap))))
        yield Case(subject=gap.subject, rule=gap.rule or EVERYTHING, result="skipped", message=message)


def _accepted(report: Report) -> Iterator[Case]:
    stages = {stage.id for stage in report.stages}
    for each in report.accepted:
        until = f" until {clean(each.until)}" if each.until else ""
        yield Case(
            subject=judged_on(each.finding.subject, stages),
            rule=each.finding.rule,
            result="skipped",
            message=f"accepted by {name(each.by)}{until}: {clean(each.reason)}",
            output=_told([each.finding]),
        )


def _with_findings(subject: str, rule: str, findings: list[Finding], bundle: Bundle) -> Case:
    counting = () if bundle.gate == "never" else SEVERITIES[: SEVERITIES.index(bundle.gate) + 1]
    failing = [finding for finding in findings if finding.severity in counting]
    if not failing:
        return Case(subject=subject, rule=rule, output=_told(findings))
    worst = failing[0]
    return Case(
        subject=subject,
        rule=rule,
        result="failure",
        kind=worst.severity,
        message=clean(worst.message),
        text=_told(findings),
    )


def _told(findings: Iterable[Finding]) -> str:
    lines = []
    for finding in findings:
        lines.append(f"{finding.severity}: {clean(finding.message)}")
        lines += [f"  {label}: {text}" for label, text in facts(finding)]
    return "\n".join(lines)


def _case(case: Case, path: str) -> Iterator[str]:
    title = f"{name(case.subject)}: {clean(case.rule)}"
    case_opening = f"    <testcase{_attributes(classname=clean(path), name=title)}"
    if not case.result and not case.output:
        yield f"{case_opening}/>"
        return
    yield f"{case_opening}>"
    if case.result:
        kind = {"type": case.kind} if case.kind and case.result != "skipped" else {}
        opening = f"{case.result}{_attributes(message=clean(case.message), **kind)}"
        yield f"      <{opening}>{escape(case.text)}</{case.result}>"
    if case.output:
        yield f"      <system-out>{escape(case.output)}</system-out>"
    yield "    </testcase>"


def _attributes(**given: str) -> str:
    return "".join(f" {key}={quoteattr(value)}" for key, value in given.items())
