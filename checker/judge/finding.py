"""From verdicts to the report's findings. Loaded only where there are any."""

from __future__ import annotations

import math
from collections.abc import Sequence

from checker.circuit.types import Circuit
from checker.judge.causes import causes
from checker.judge.fingerprint import fingerprints
from checker.judge.message import end_at, filled, frequency_hz, value_at
from checker.judge.verdict import Examination, Verdict
from checker.record.finding import Bound, Finding, Measured, Window
from checker.record.stage import Location
from checker.record.units import as_written


def to_findings(examination: Examination, circuit: Circuit) -> tuple[tuple[Verdict, Finding], ...]:
    """Each verdict with its finding (no remedy yet), in the examination's order; fingerprints and causes
    set.
    """
    verdicts = examination.verdicts
    marks = fingerprints(verdicts, circuit)
    roots = [None if index is None else marks[index] for index in causes(verdicts)]
    return tuple(
        (verdict, _finding(verdict, circuit, mark, root))
        for verdict, mark, root in zip(verdicts, marks, roots, strict=True)
    )


def _finding(verdict: Verdict, circuit: Circuit, mark: str, root: str | None) -> Finding:
    rule, evidence, worst = verdict.rule, verdict.evidence, verdict.worst
    return Finding(
        rule=rule.id,
        outcome=verdict.outcome,
        severity=verdict.severity,
        subject=evidence.subject[:3],
        message=filled(evidence, evidence.message, worst),
        fingerprint=mark,
        effect=filled(evidence, evidence.effect or rule.bench, worst),
        why=f"{rule.summary}; {rule.source}",
        state=verdict.state,
        scenario=verdict.name,
        frequency_hz=frequency_hz(evidence.check, worst),
        measured=_measured(verdict),
        limit=_limit(verdict),
        caused_by=root,
        location=_location(evidence.subject, circuit),
    )


def _measured(verdict: Verdict) -> Measured:
    figure, value = verdict.evidence.check.figure, value_at(verdict.evidence.check, verdict.worst)
    return Measured(
        quantity=figure.quantity,
        value=as_written(value, figure.unit) if math.isfinite(value) else None,
        unit=figure.unit,
    )


def _limit(verdict: Verdict) -> Bound | Window:
    check, worst = verdict.evidence.check, verdict.worst
    bound, unit = check.bound, check.bound.unit
    if check.relation == "within":
        low, high = (as_written(end_at(end, worst), unit) for end in (bound.low, bound.high))
        return Window(relation="within", low=low, high=high, unit=unit, source=bound.source)
    end = bound.high if check.relation == "at most" else bound.low
    value = as_written(end_at(end, worst), unit)
    return Bound(relation=check.relation, value=value, unit=unit, source=bound.source)


def _location(subject: Sequence[str], circuit: Circuit) -> Location | None:
    """Where the first subject stands; a port by its part, the unit of a dual by the whole part."""
    ports = {port.name: port.part for port in circuit.ports}
    for name in subject:
        ref = ports.get(name, name)
        fact = circuit.parts.get(ref) or circuit.parts.get(ref.rpartition(".")[0])
        if fact is not None and fact.origin.file:
            return Location(file=fact.origin.file, line=fact.origin.line, sheet=fact.origin.sheet)
    return None
