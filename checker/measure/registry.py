"""The one registry of quantity names: what a report prints, a rule asks, and a target may name."""

from __future__ import annotations

from collections.abc import Callable
from typing import Literal

from checker.measure.bench import Bench
from checker.quantity.figure import Figure
from checker.shape import frozen

Subject = Literal["stage", "group", "port", "part", "gain"]
Measure = Callable[[Bench, str], Figure]


@frozen
class Quantity:
    """A named question: `unit` of the answer, what it is asked of, one line of meaning, and how it is answered."""

    name: str
    unit: str
    subject: Subject
    meaning: str
    measure: Measure


REGISTRY: dict[tuple[str, Subject], Quantity] = {}


def quantity(name: str, unit: str, subject: Subject, meaning: str) -> Callable[[Measure], Measure]:
    """Register a measure under a name, once."""

    def register(measure: Measure) -> Measure:
        key = (name, subject)
        if key in REGISTRY:
            raise ValueError(f"quantity {name} of a {subject} is registered twice")
        REGISTRY[key] = Quantity(name=name, unit=unit, subject=subject, meaning=meaning, measure=measure)
        return measure

    return register
