"""The rules and their limits: what `stageproof rules` prints."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from typing import Protocol

from checker.record.units import as_written
from checker.report.clean import clean
from checker.report.layout import Page, finished, hanging
from checker.report.quantities import given


class LimitShown(Protocol):
    """What is printed of a limit: default and allowed range in SI, a share for "%"."""

    @property
    def name(self) -> str: ...
    @property
    def default(self) -> float: ...
    @property
    def unit(self) -> str: ...
    @property
    def low(self) -> float: ...
    @property
    def high(self) -> float: ...
    @property
    def source(self) -> str: ...


class RuleShown(Protocol):
    """What is printed of a rule."""

    @property
    def id(self) -> str: ...
    @property
    def summary(self) -> str: ...
    @property
    def theme(self) -> str: ...
    @property
    def weight(self) -> str: ...
    @property
    def bench(self) -> str: ...
    @property
    def source(self) -> str: ...
    @property
    def limits(self) -> Sequence[LimitShown]: ...


def render_rules(rules: Iterable[RuleShown], *, width: int, colour: bool) -> str:
    """Every rule by theme and id, each with its limits, their range and source."""
    page = Page(width=width, colour=colour)
    lines: list[str] = []
    theme = None
    for rule in sorted(rules, key=lambda rule: (rule.theme, rule.id)):
        if rule.theme != theme:
            theme = rule.theme
            lines += page.heading(clean(theme).capitalize())
        lines += _rule(rule, page)
    return finished(lines[1:])


def _rule(rule: RuleShown, page: Page) -> list[str]:
    lines = [f"  {page.paint(clean(rule.id), 'bold')}  ({clean(rule.weight)})"]
    lines += hanging("    ", clean(rule.summary), page)
    for label, text in (("you see", rule.bench), ("source", rule.source)):
        lines += hanging(f"    {label}".ljust(13), clean(text), page, style="dim") if text else []
    for limit in rule.limits:
        lines += hanging("    limit    ", limit_text(limit), page, style="dim")
    return lines


def limit_text(limit: LimitShown) -> str:
    """Name, default, range and source in one line."""
    default, low, high = (_shown(si, limit.unit) for si in (limit.default, limit.low, limit.high))
    return f"{clean(limit.name)} = {default}, may be {low} to {high}; {clean(limit.source)}"


def _shown(si: float, unit: str) -> str:
    """A limit as the house holds it: a share where the unit is percent."""
    return given(as_written(si, unit), unit)


def render_quantities(rows: Iterable[tuple[str, str, str, str]], *, width: int) -> str:
    """(name, unit, subject, meaning) a line: what a target may name, by what it is asked of."""
    page = Page(width=width, colour=False)
    table = list(rows)
    wide = max((len(name) for name, _, _, _ in table), default=0)
    lines: list[str] = []
    for subject, title in (("stage", "Of a stage"), ("group", "Of a group"), ("gain", "From port to port")):
        lines += page.heading(title)
        for name, unit, of, meaning in table:
            if of == subject:
                lines += hanging(f"  {name:{wide}}  {unit:5} ", meaning, page)
    return finished(lines[1:])
