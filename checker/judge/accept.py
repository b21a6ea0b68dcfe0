"""Findings that the team has signed for, and signatures that no longer match anything."""

from __future__ import annotations

import datetime
from collections.abc import Iterable
from typing import NamedTuple

from checker.intent.hints import unknown
from checker.intent.types import AcceptedIntent, Intent
from checker.judge.verdict import AnyRule
from checker.record.finding import Accepted, Finding
from checker.trouble import InputTrouble


class Sorted(NamedTuple):
    """Findings still open, those accepted, and cautions about acceptances that ended or match nothing."""

    open: tuple[Finding, ...]
    accepted: tuple[Accepted, ...]
    cautions: tuple[str, ...]


def sort_accepted(
    findings: Iterable[Finding], intent: Intent, rules: Iterable[AnyRule], today: datetime.date
) -> Sorted:
    """Part the findings by the intent file's [[accepted]] entries; an entry ends with the day in `until`.

    Raises `InputTrouble` for an entry that names a rule that does not exist.
    """
    ids = {name: rule.id for rule in rules for name in (rule.id, *rule.aliases)}
    for entry in intent.accepted:
        if entry.rule and entry.rule not in ids:
            message = unknown(entry.rule, ids, "rule in [[accepted]]")
            raise InputTrouble(message, file=entry.origin.file, line=entry.origin.line)
    open_: list[Finding] = []
    accepted: list[Accepted] = []
    used: set[int] = set()
    for finding in findings:
        matching = [i for i, entry in enumerate(intent.accepted) if _matches(entry, finding, ids)]
        used.update(matching)
        valid = next((i for i in matching if not _ended(intent.accepted[i], today)), None)
        if valid is None:
            open_.append(finding)
        else:
            accepted.append(_signed(finding, intent.accepted[valid]))
    cautions = (_caution(entry, i in used, today) for i, entry in enumerate(intent.accepted))
    return Sorted(tuple(open_), tuple(accepted), tuple(filter(None, cautions)))


def _matches(entry: AcceptedIntent, finding: Finding, ids: dict[str, str]) -> bool:
    if entry.fingerprint:
        return entry.fingerprint == finding.fingerprint
    return ids[entry.rule] == finding.rule and (not entry.subject or entry.subject in finding.subject)


def _ended(entry: AcceptedIntent, today: datetime.date) -> bool:
    return entry.until is not None and entry.until < today


def _signed(finding: Finding, entry: AcceptedIntent) -> Accepted:
    until = None if entry.until is None else entry.until.isoformat()
    return Accepted(finding=finding, reason=entry.reason, by=entry.by, until=until)


def _caution(entry: AcceptedIntent, used: bool, today: datetime.date) -> str:
    what = entry.fingerprint or " ".join(filter(None, (entry.rule, entry.subject)))
    where = f"{entry.origin.file}:{entry.origin.line}"
    if not used:
        return f"{where}: the accepted finding {what} is no longer there; the entry can go"
    if _ended(entry, today):
        return f"{where}: the acceptance of {what} ended on {entry.until}"
    return ""
