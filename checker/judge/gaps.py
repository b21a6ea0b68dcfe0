"""From gaps that the examination met to the report's unchecked entries."""

from __future__ import annotations

from checker.judge.verdict import Examination
from checker.record.finding import Unchecked


def to_unchecked(examination: Examination) -> tuple[Unchecked, ...]:
    """What could not be judged, as the report lists it; the same gap once."""
    found = dict.fromkeys((each.subject, each.rule, each.datum, each.supply) for each in examination.unchecked)
    return tuple(
        Unchecked(subject=subject, rule=rule, datum=datum, supply=supply) for subject, rule, datum, supply in found
    )
