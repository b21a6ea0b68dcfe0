"""A number that knows its unit, how it was written and where it came from."""

from __future__ import annotations

from checker.shape import frozen
from checker.words import OriginKind


@frozen
class Origin:
    """Where a datum stands: file (relative, forward slashes), line (1-based, 0 unknown), sheet path."""

    kind: OriginKind
    file: str = ""
    line: int = 0
    sheet: str = ""
    note: str = ""


@frozen
class Value:
    """One quantity in SI.

    `tolerance` is a fraction (0.01 is 1 %), None where nothing says; `assumed_tolerance` where nothing wrote it.
    """

    si: float
    unit: str
    text: str
    tolerance: float | None
    origin: Origin
    assumed_tolerance: bool = False
