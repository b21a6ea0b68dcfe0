"""The same board in both netlist formats, and where the two reports differ."""

from __future__ import annotations

import datetime
import json
import re
from collections.abc import Iterator
from pathlib import Path
from typing import Any

from checker.pipeline import Outcome, check_board
from checker.record.write import to_json

DAY = datetime.date(2025, 1, 1)


def checked(path: Path) -> Outcome:
    """A finished check with the intent file beside the netlist."""
    return check_board(path, None, today=DAY)


def as_data(outcome: Outcome) -> dict[str, Any]:
    """The report as others read it."""
    data: dict[str, Any] = json.loads(to_json(outcome.report))
    return data


def grounded(value: Any) -> Any:
    """The same with SPICE text's net 0 under the name it has in the schematic."""
    if isinstance(value, dict):
        return {("GND" if key == "0" else key): grounded(item) for key, item in value.items()}
    if isinstance(value, list):
        return [grounded(item) for item in value]
    if isinstance(value, str):
        return "GND" if value == "0" else re.sub(r"\bon 0\b", "on GND", value)
    return value


def differences(one: Any, other: Any, path: str = "") -> Iterator[str]:
    """Paths of unequal values; places in lists are left out, keys are kept."""
    if isinstance(one, dict) and isinstance(other, dict):
        for key in sorted(one.keys() | other.keys()):
            yield from differences(one.get(key), other.get(key), f"{path}.{key}" if path else key)
    elif isinstance(one, list) and isinstance(other, list) and len(one) == len(other):
        for a, b in zip(one, other, strict=True):
            yield from differences(a, b, path)
    elif one != other:
        yield path
