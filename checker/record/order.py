"""The one order of a report, so that equal boards give equal text whatever order they were solved in."""

from __future__ import annotations

from collections.abc import Collection, Iterable, Mapping, Sequence
from dataclasses import replace
from typing import Any

from checker.pattern import lazy
from checker.record.finding import Finding
from checker.record.report import Report
from checker.words import SEVERITIES

_DIGITS = lazy("([0-9]+)")

Key = tuple[Any, ...]


def natural(name: str) -> Key:
    """Sort key that counts numbers in a name as numbers: Q2 before Q10. Equal keys mean equal names."""
    return tuple(part if i % 2 == 0 else _number(part) for i, part in enumerate(_DIGITS.split(name)))


def _number(digits: str) -> tuple[int, str, str]:
    # By length, then digits: a hostile name may hold more digits than `int` takes.
    bare = digits.lstrip("0")
    return len(bare), bare, digits


def finding_key(finding: Finding) -> Key:
    """Worst first, then what is certain before what may be, then rule, subject and the rest."""
    return (
        SEVERITIES.index(finding.severity),
        finding.outcome != "violates",
        finding.rule,
        tuple(natural(name) for name in finding.subject),
        finding.state or "",
        finding.fingerprint,
    )


def judged_on(subject: Sequence[str], stages: Collection[str]) -> str:
    """Which one of a finding's subjects a rule was judged on: the first that is a stage, else the first."""
    return next((name for name in subject if name in stages), subject[0] if subject else "")


def in_order(report: Report) -> Report:
    """The same report with every collection in the order that the contract fixes."""
    return replace(
        report,
        assumptions=tuple(sorted(report.assumptions)),
        cautions=tuple(sorted(report.cautions)),
        rails=_by(report.rails, lambda rail: natural(rail.net)),
        nets=_mapping(report.nets),
        parts=_mapping(report.parts),
        islands=_by(
            (replace(island, nets=_by(island.nets, natural)) for island in report.islands),
            lambda island: tuple(natural(net) for net in island.nets),
        ),
        stages=_by(report.stages, lambda stage: natural(stage.id)),
        groups=_by(report.groups, lambda group: natural(group.id)),
        ports=_by(report.ports, lambda port: natural(port.name)),
        gains=_by(report.gains, lambda gain: (natural(gain.from_), natural(gain.to))),
        findings=_by(report.findings, finding_key),
        accepted=_by(report.accepted, lambda accepted: finding_key(accepted.finding)),
        unchecked=_by(report.unchecked, lambda it: (natural(it.subject), it.rule, it.datum, it.supply)),
        judged={rule: _by(on, natural) for rule, on in sorted(report.judged.items())},
        unavailable=_mapping(report.unavailable),
    )


def _by(items: Iterable[Any], key: Any) -> tuple[Any, ...]:
    return tuple(sorted(items, key=key))


def _mapping(items: Mapping[str, Any]) -> dict[str, Any]:
    return {key: items[key] for key in sorted(items, key=natural)}
