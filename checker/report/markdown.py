"""The report as Markdown for a comment on a pull request: verdict, findings worst first, everything else folded."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Sequence

from checker.record import Finding, Report, in_order
from checker.report.bundle import Bundle
from checker.report.markup import fitted, folded, marked, table
from checker.report.quantities import figure
from checker.report.sections.findings import bearing, facts, place, subject
from checker.report.sections.opening import COUNTED
from checker.report.sections.since import brief
from checker.words import SEVERITIES, Severity

LISTED = 30
"""Boards or lines that are listed before the rest is counted."""
LONGEST = 12_000
"""Characters of a folded list, so that one does not push out the others."""
TITLES: dict[Severity, str] = {"must-fix": "Must fix", "review": "Review", "note": "Note"}


def render(report: Report, *, width: int, colour: bool) -> str:
    """One board."""
    return render_bundle(Bundle(reports=(report,)), width=width, colour=colour)


def render_bundle(bundle: Bundle, *, width: int, colour: bool) -> str:  # noqa: ARG001 - one signature for all forms
    """All boards; width and colour mean nothing here."""
    reports = [in_order(report) for report in bundle.reports]
    found = [(finding, report) for report in reports for finding in report.findings]
    found.sort(key=lambda pair: (SEVERITIES.index(pair[0].severity), pair[0].outcome != "violates"))
    several = len(reports) + len(bundle.without) > 1
    blocks = [
        finding_block(finding, report.netlist.path if several else "", _mark(finding, report))
        for finding, report in found
    ]
    return fitted(
        [f"## Stageproof: {_verdict(reports, bundle)}", *_boards(reports, bundle)], [*blocks, *_rest(reports)], "blocks"
    )


def finding_block(finding: Finding, board: str, mark: str = "") -> str:
    """One finding: a line that says it, the rest folded. `board`: named where there are several."""
    where = f" · {marked(board)}" if board else ""
    title = f"<b>{TITLES[finding.severity]}</b>{mark} · {marked(subject(finding))} · {marked(finding.message)}{where}"
    rows = [(label, marked(text)) for label, text in facts(finding)]
    rows += [("at", marked(place(finding.location)))] if finding.location is not None else []
    rows += [("rule", f"{marked(finding.rule)}, finding {marked(finding.fingerprint)}")]
    return folded(title, table(("", ""), rows))


def _mark(finding: Finding, report: Report) -> str:
    since = report.since
    return " (new)" if since is not None and finding.fingerprint in since.new else ""


def _verdict(reports: Sequence[Report], bundle: Bundle) -> str:
    counts = counted([finding for report in reports for finding in report.findings]) or ["nothing found"]
    accepted = sum(len(report.accepted) for report in reports)
    gaps = sum(len(report.unchecked) for report in reports)
    counts += [f"{accepted} accepted"] if accepted else []
    counts += [f"{gaps} not judged"] if gaps else []
    counts += [f"{len(bundle.without)} netlists without a report"] if bundle.without else []
    counts += ["**incomplete**"] if any(report.incomplete for report in reports) else []
    return ", ".join(counts)


def counted(findings: Iterable[Finding]) -> list[str]:
    """ "2 to fix" and so on, for severities that occur."""
    found = [finding.severity for finding in findings]
    return [f"{found.count(severity)} {COUNTED[severity]}" for severity in SEVERITIES if severity in found]


def _boards(reports: Sequence[Report], bundle: Bundle) -> Iterator[str]:
    """How much was checked of each board, those with findings first; and what could not be read."""
    worst = sorted(reports, key=lambda report: [-_count(report, severity) for severity in SEVERITIES])
    rows = [
        (
            marked(report.netlist.path),
            f"{report.checked.stages} of {report.checked.of}",
            *(str(_count(report, severity)) for severity in SEVERITIES),
            str(len(report.accepted)),
            str(len(report.unchecked)),
        )
        for report in worst[:LISTED]
    ]
    header = ("board", "stages checked", *(COUNTED[severity] for severity in SEVERITIES), "accepted", "not judged")
    yield "\n".join(table(header, rows))
    if len(worst) > LISTED:
        yield f"and {len(worst) - LISTED} more boards"
    faults = [f"{marked(report.netlist.path)}: {marked(fault)}" for report in reports for fault in report.faults]
    lost = [marked(message) for _, message in bundle.without]
    if faults or lost:
        yield "\n".join(shortened([f"- {text}" for text in (*faults, *lost)]))


def _count(report: Report, severity: Severity) -> int:
    return sum(finding.severity == severity for finding in report.findings)


def _rest(reports: Sequence[Report]) -> Iterator[str]:
    """What is known besides, folded, each kind of all boards together."""
    named = len(reports) > 1
    kinds: tuple[tuple[str, list[str]], ...] = (
        ("Accepted", [_on(report, line, named) for report in reports for line in _accepted(report)]),
        (
            "Cured since the earlier report",
            [_on(r, marked(brief(f)), named) for r in reports if r.since for f in r.since.cured],
        ),
        (
            "No longer judged",
            [_on(r, marked(brief(f)), named) for r in reports if r.since for f in r.since.unjudged],
        ),
        ("Not judged, because something is missing", [_on(r, line, named) for r in reports for line in _unchecked(r)]),
        ("Stages", [_on(report, line, named) for report in reports for line in _stages(report)]),
        ("Assumed", [_on(report, marked(text), named) for report in reports for text in report.assumptions]),
        ("Cautions", list(dict.fromkeys(marked(text) for report in reports for text in report.cautions))),
    )
    for title, lines in kinds:
        if lines:
            yield folded(f"{title} ({len(lines)})", shortened([f"- {line}" for line in lines]))


def _on(report: Report, line: str, named: bool) -> str:
    return f"{marked(report.netlist.path)}: {line}" if named else line


def _accepted(report: Report) -> Iterator[str]:
    for each in report.accepted:
        until = f" until {marked(each.until)}" if each.until else ""
        yield f"{marked(brief(each.finding))} Accepted by {marked(each.by)}{until}: {marked(each.reason)}"


def _unchecked(report: Report) -> Iterator[str]:
    for gap in report.unchecked:
        supply = f"; supply {marked(gap.supply)}" if gap.supply else ""
        line = f"{marked(gap.subject)} {marked(gap.rule or 'every rule')}: {marked(gap.datum)}{supply}"
        yield "; ".join(filter(None, (line, marked(bearing(gap)))))


def _stages(report: Report) -> Iterator[str]:
    for stage in report.stages:
        keys = ("voltage_gain_db", "input_impedance_ohm", "output_impedance_ohm")
        told = [f"{marked(stage.id)} {stage.configuration}"]
        values = {"gain": keys[0], "Zin": keys[1], "Zout": keys[2]}
        for label, key in values.items():
            if getattr(stage.specs, key) is not None:
                told.append(f"{label} {marked(figure(getattr(stage.specs, key), key))}")
        yield ", ".join(told)


def shortened(lines: list[str]) -> list[str]:
    """The first lines, as many as `LONGEST` characters hold."""
    kept: list[str] = []
    room = LONGEST
    for line in lines:
        room -= len(line) + 1
        if room < 0:
            break
        kept.append(line)
    left = len(lines) - len(kept)
    return [*kept, f"- and {left} more"] if left else kept
