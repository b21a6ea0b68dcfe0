"""The values of passive parts as they were read: what `stageproof specs --values` prints."""

from __future__ import annotations

from collections.abc import Iterable
from typing import Protocol

from checker.report.clean import clean, name
from checker.report.layout import Page, finished, hanging
from checker.report.quantities import given


class ValueShown(Protocol):
    """A value in SI with its text, tolerance (a fraction) and place."""

    @property
    def si(self) -> float: ...
    @property
    def unit(self) -> str: ...
    @property
    def text(self) -> str: ...
    @property
    def tolerance(self) -> float | None: ...
    @property
    def assumed_tolerance(self) -> bool: ...


class RatingsShown(Protocol):
    """Ratings of a passive part, None where unknown."""

    @property
    def p_max_w(self) -> float | None: ...
    @property
    def v_max_v(self) -> float | None: ...


class FactShown(Protocol):
    """One part: its value (None where none could be read) and its ratings."""

    @property
    def ref(self) -> str: ...
    @property
    def value(self) -> ValueShown | None: ...
    @property
    def ratings(self) -> RatingsShown: ...
    @property
    def ratings_source(self) -> str: ...
    @property
    def dielectric(self) -> str: ...


def render_values(facts: Iterable[FactShown], *, width: int, colour: bool) -> str:
    """One line a part: as written, as read, tolerance, ratings and where those are from."""
    page = Page(width=width, colour=colour)
    lines = [page.paint("part: as written = as read", "bold")]
    for fact in facts:
        lines += hanging(f"  {name(fact.ref)}".ljust(10), _told(fact), page)
    return finished(lines)


def _told(fact: FactShown) -> str:
    value = fact.value
    if value is None:
        return "no value could be read"
    words = [f"{clean(value.text) or '(nothing)'} = {given(value.si, value.unit)}"]
    if value.tolerance is not None:
        words.append(f"±{value.tolerance * 100:g} %" + (" assumed" if value.assumed_tolerance else ""))
    rated = ((fact.ratings.p_max_w, "W"), (fact.ratings.v_max_v, "V"))
    ratings = [given(number, unit) for number, unit in rated if number is not None]
    if ratings:
        words.append(f"{' and '.join(ratings)} ({clean(fact.ratings_source)})")
    words += [clean(fact.dielectric)] if fact.dielectric else []
    return ", ".join(words)
