"""A report as JSON text: the same bytes for the same report, on every platform."""

from __future__ import annotations

import json
import math
from collections.abc import Mapping
from dataclasses import fields
from typing import Any

from checker.record.base import Record, key_of
from checker.record.order import in_order
from checker.record.report import Report
from checker.trouble import Internal

DIGITS = 12
"""Significant digits written: beyond them two platforms' arithmetic may differ."""


def to_json(report: Report) -> str:
    """The report as indented JSON: keys in field order, collections in the contract's, no final newline.

    Raises Internal for a number that is not finite or a value that JSON has no form for.
    """
    return dump(plain(in_order(report)))


def dump(value: Any) -> str:
    """Plain values as JSON text. Control, invisible and bidirectional characters, which would mislead whoever
    reads the file, stand as escapes and read back as what they are."""
    text = json.dumps(value, ensure_ascii=False, indent=2, allow_nan=False)
    return "\n".join(line if line.isprintable() else _escaped(line) for line in text.split("\n"))


def _escaped(line: str) -> str:
    return "".join(char if char.isprintable() else json.dumps(char)[1:-1] for char in line)


def plain(value: Any, where: str = "report") -> Any:
    """Dicts, lists, text, Python numbers and None for a record. `where` names the place in a complaint."""
    if value is None or isinstance(value, (str, bool)) or type(value) is int:
        return value
    if isinstance(value, float):
        return _rounded(value, where)
    if isinstance(value, Record):
        return {key_of(f.name): plain(getattr(value, f.name), f"{where}.{f.name}") for f in fields(value)}
    if isinstance(value, Mapping):
        return {key: plain(item, f"{where}[{key!r}]") for key, item in value.items()}
    if isinstance(value, (tuple, list)):
        return [plain(item, f"{where}[{index}]") for index, item in enumerate(value)]
    raise Internal(f"{where}: a {type(value).__name__}; a report holds only text and Python numbers")


def _rounded(value: float, where: str) -> float:
    if not math.isfinite(value):
        raise Internal(f"{where}: {value}; a number that does not exist must be null, with a reason")
    return float(f"{value:.{DIGITS}g}") + 0.0  # + 0.0 turns -0.0 into 0.0
