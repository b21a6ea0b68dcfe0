"""Reading a report back. The file may come from anywhere: each key is checked against the contract."""

from __future__ import annotations

import json
import math
import types
from collections.abc import Callable, Mapping
from dataclasses import fields
from functools import cache
from typing import Any, Literal, Union, get_args, get_origin, get_type_hints

from checker.record.base import Record, has_default, key_of
from checker.record.report import SCHEMA, Report
from checker.trouble import InputTrouble

SEVERAL = "stageproof-reports/1"
"""Names the object that holds the reports of several netlists."""


def from_json(text: str, *, file: str = "") -> Report:
    """The report in `text`. Keys that this version does not know are passed over.

    Raises InputTrouble, naming `file`, for text that is no JSON, another schema, or a value of a wrong type.
    """
    return _read(text, file, _one)[0]


def several_from_json(text: str, *, file: str = "") -> tuple[Report, ...]:
    """The report in `text`, or all of those that one call on several netlists wrote. Raises as `from_json` does."""
    return _read(text, file, _all)


def _read(text: str, file: str, reports: Callable[[Any], tuple[Report, ...]]) -> tuple[Report, ...]:
    try:
        return reports(json.loads(text, parse_constant=_no_constant))
    except RecursionError:
        raise InputTrouble("not a report: nested too deeply", file=file) from None
    except ValueError as problem:
        line = problem.lineno if isinstance(problem, json.JSONDecodeError) else 0
        raise InputTrouble(f"not a readable report: {problem}", file=file, line=line) from None


def _one(value: Any) -> tuple[Report, ...]:
    if not isinstance(value, dict) or value.get("schema") != SCHEMA:
        raise ValueError(f'not a report: expected an object whose "schema" is "{SCHEMA}"')
    report = _record(Report, value, "report")
    assert isinstance(report, Report)  # noqa: S101 - `_record` returns the class it is given
    return (report,)


def _all(value: Any) -> tuple[Report, ...]:
    if isinstance(value, dict) and value.get("schema") == SEVERAL and isinstance(value.get("reports"), list):
        return tuple(report for each in value["reports"] for report in _one(each))
    return _one(value)


def _no_constant(name: str) -> float:
    raise ValueError(f"{name} is no number that a report may hold")


def _record(kind: type[Record], value: Any, where: str) -> Record:
    if not isinstance(value, dict):
        raise ValueError(f"{where}: expected an object, got {_said(value)}")
    hints = _hints(kind)  # type: ignore[arg-type]  # the class is hashable, only its instances are not
    given: dict[str, Any] = {}
    for each in fields(kind):
        key = key_of(each.name)
        if key in value:
            given[each.name] = _value(hints[each.name], value[key], f"{where}.{key}")
        elif not has_default(each):
            raise ValueError(f"{where}: the key {key!r} is missing")
    return kind(**given)


@cache
def _hints(kind: type[Record]) -> dict[str, Any]:
    return get_type_hints(kind)


def _value(hint: Any, value: Any, where: str) -> Any:
    origin, args = get_origin(hint), get_args(hint)
    if origin in (Union, types.UnionType):
        return _one_of(args, value, where)
    if origin is Literal:
        return _checked(value in args and isinstance(value, str), value, where, " or ".join(map(repr, args)))
    if origin is tuple:
        return _tuple(args, value, where)
    if origin is Mapping:
        _checked(isinstance(value, dict), value, where, "an object")
        return {key: _value(args[1], item, f"{where}.{key}") for key, item in value.items()}
    if isinstance(hint, type) and issubclass(hint, Record):
        return _record(hint, value, where)
    return _scalar(hint, value, where)


def _one_of(choices: tuple[Any, ...], value: Any, where: str) -> Any:
    if value is None and type(None) in choices:
        return None
    problems = []
    for choice in (each for each in choices if each is not type(None)):
        try:
            return _value(choice, value, where)
        except ValueError as problem:
            problems.append(str(problem))
    raise ValueError(problems[-1])


def _tuple(args: tuple[Any, ...], value: Any, where: str) -> tuple[Any, ...]:
    _checked(isinstance(value, list), value, where, "an array")
    if args[-1] is Ellipsis:
        return tuple(_value(args[0], item, f"{where}[{i}]") for i, item in enumerate(value))
    _checked(len(value) == len(args), value, where, f"an array of {len(args)}")
    return tuple(_value(hint, value[i], f"{where}[{i}]") for i, hint in enumerate(args))


def _scalar(hint: Any, value: Any, where: str) -> Any:
    if hint is float and type(value) in (int, float):
        return _checked(_finite(value), float(value) if _finite(value) else value, where, "a finite number")
    return _checked(type(value) is hint, value, where, f"a value of type {hint.__name__}")


def _finite(value: float) -> bool:
    try:
        return math.isfinite(value)
    except OverflowError:  # an integer beyond the range of a float
        return False


def _checked(fine: bool, value: Any, where: str, expected: str) -> Any:
    if not fine:
        raise ValueError(f"{where}: expected {expected}, got {_said(value)}")
    return value


def _said(value: Any) -> str:
    text = json.dumps(value)
    return text if len(text) <= 40 else text[:37] + "..."
