"""The limits in force: each rule's defaults, and what the intent file puts in their place."""

from __future__ import annotations

from collections.abc import Iterable, Mapping

from checker.intent.checks import check_limits
from checker.intent.types import Intent
from checker.judge.verdict import AnyRule, Limits
from checker.quantity.show import show
from checker.quantity.with_unit import parse_with_unit
from checker.rulekit import Bound, Limit
from checker.trouble import InputTrouble, NotAQuantity


def resolve_limits(rules: Iterable[AnyRule], intent: Intent) -> Limits:
    """Every limit of every rule as a bound.

    A number in the intent file is in the limit's unit ("%": per cent), a text may carry its own. Raises
    `InputTrouble` for an unknown rule or limit (with what was probably meant), another unit, or a value
    outside the limit's range.
    """
    ordered = tuple(rules)
    owner = {name: rule.id for rule in ordered for name in (rule.id, *rule.aliases)}
    known = {name: [limit.name for limit in rule.limits] for rule in ordered for name in (rule.id, *rule.aliases)}
    check_limits(intent, known)
    given = {owner[name]: (name, values) for name, values in intent.limits.items()}
    return {rule.id: _of(rule, *given.get(rule.id, (rule.id, {})), intent) for rule in ordered}


def limit_values(limits: Limits) -> dict[str, dict[str, float]]:
    """The bare numbers in SI ("%" a fraction), for the report's conditions; rules without limits are left
    out.
    """
    return {rule: {name: bound.value for name, bound in bounds.items()} for rule, bounds in limits.items() if bounds}


def _of(rule: AnyRule, name: str, given: Mapping[str, float | str], intent: Intent) -> dict[str, Bound]:
    line = intent.limit_lines.get(name, 0)
    bounds = {}
    for limit in rule.limits:
        value, source = limit.default, limit.source
        if limit.name in given:
            value, source = _read(limit, given[limit.name], intent.path, line), f"{intent.path}:{line}"
        bounds[limit.name] = Bound.at(value, limit.unit, source)
    return bounds


def _read(limit: Limit, given: float | str, file: str, line: int) -> float:
    text = given if isinstance(given, str) else repr(given)
    try:
        value = parse_with_unit(text, limit.unit)
    except NotAQuantity as trouble:
        raise InputTrouble(f"limit {limit.name}: {trouble}", file=file, line=line) from None
    if not limit.low <= value <= limit.high:
        low, high, got = (show(each, limit.unit) for each in (limit.low, limit.high, value))
        raise InputTrouble(f"limit {limit.name} = {got} is outside {low} to {high}", file=file, line=line)
    return value
