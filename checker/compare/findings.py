"""Findings of two reports beside each other: new, cured, unchanged, and those that could no longer be judged."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import NamedTuple

from checker.compare.match import match_parts
from checker.record import Finding, Report, Since, natural
from checker.words import SEVERITIES


class Sorted(NamedTuple):
    """New ones and unchanged ones are the new report's, the others the old one's."""

    new: tuple[Finding, ...]
    unchanged: tuple[Finding, ...]
    cured: tuple[Finding, ...]
    unjudged: tuple[Finding, ...]


def sort_findings(old: Report, new: Report, renamed: Mapping[str, str]) -> Sorted:
    """Part the findings. `renamed`: old reference to new one, of every part that is in both boards.

    Two findings are one where rule, quantity and first subject agree, else where their fingerprints do. One that got
    more severe, or whose acceptance ended, is new; one that was accepted is not cured.
    """
    partners = _partners(old, new, renamed)
    was_open = {id(finding) for finding in old.findings}
    fresh: list[Finding] = []
    same: list[Finding] = []
    for finding in new.findings:
        before = partners.get(id(finding))
        known = before is not None and id(before) in was_open and not _worse(before, finding)
        (same if known else fresh).append(finding)
    matched = {id(before) for before in partners.values()}
    gone = [finding for finding in old.findings if id(finding) not in matched]
    blind = [finding for finding in gone if _is_unjudged(finding, old, new, renamed)]
    cured = [finding for finding in gone if finding not in blind]
    return Sorted(tuple(fresh), tuple(same), tuple(cured), tuple(blind))


def since(old: Report, new: Report) -> Since:
    """How the findings of `new` stand against `old`."""
    found = sort_findings(old, new, match_parts(old, new))
    return Since(
        path=old.netlist.path,
        new=tuple(finding.fingerprint for finding in found.new),
        unchanged=tuple(finding.fingerprint for finding in found.unchanged),
        cured=found.cured,
        unjudged=found.unjudged,
    )


def _all(report: Report) -> list[Finding]:
    return [*report.findings, *(each.finding for each in report.accepted)]


def _partners(old: Report, new: Report, renamed: Mapping[str, str]) -> dict[int, Finding]:
    """Identity of a new finding to the old one that it is; no old one twice."""
    found: dict[int, Finding] = {}
    taken: set[int] = set()
    by_place = [(each, _place(each, _name(each, old, renamed))) for each in _all(old)]
    by_print = [(each, (each.fingerprint,)) for each in _all(old)]
    for finding, key in ((each, _place(each, each.subject[:1])) for each in _all(new)):
        _pair(finding, key, by_place, found, taken)
    for finding in _all(new):
        _pair(finding, (finding.fingerprint,), by_print, found, taken)
    return found


def _pair(
    finding: Finding,
    key: tuple[object, ...],
    olds: Sequence[tuple[Finding, tuple[object, ...]]],
    found: dict[int, Finding],
    taken: set[int],
) -> None:
    free = [each for each, its in olds if its == key and id(each) not in taken]
    if id(finding) not in found and free:
        found[id(finding)] = free[0]
        taken.add(id(free[0]))


def _place(finding: Finding, subject: tuple[str, ...]) -> tuple[object, ...]:
    quantity = finding.measured.quantity if finding.measured is not None else ""
    return finding.rule, quantity, subject


def _name(finding: Finding, old: Report, renamed: Mapping[str, str]) -> tuple[str, ...]:
    """What the first subject is called in the new board; nothing that exists where its part is gone."""
    return tuple(new_name(name, old, renamed) or "\0gone" for name in finding.subject[:1])


def new_name(name: str, old: Report, renamed: Mapping[str, str]) -> str | None:
    """A part, unit of a dual or group in the new board, None where a part of it is gone. Other names are kept."""
    if "+" in name and name not in old.parts:
        members = [new_name(member, old, renamed) for member in name.split("+")]
        known = [member for member in members if member is not None]
        return "+".join(sorted(known, key=natural)) if len(known) == len(members) else None
    whole, _, unit = name.rpartition(".")
    if name not in old.parts and whole in old.parts:
        return f"{renamed[whole]}.{unit}" if whole in renamed else None
    return renamed.get(name) if name in old.parts else name


def _worse(before: Finding, after: Finding) -> bool:
    return SEVERITIES.index(after.severity) < SEVERITIES.index(before.severity)


def _is_unjudged(finding: Finding, old: Report, new: Report, renamed: Mapping[str, str]) -> bool:
    """Whether the new report could not judge the rule on one of the finding's subjects."""
    subjects = {new_name(name, old, renamed) for name in finding.subject}
    return any(gap.subject in subjects and gap.rule in ("", finding.rule) for gap in new.unchecked)
