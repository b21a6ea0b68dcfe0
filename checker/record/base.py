"""What every class of the record shares: the marker `Record`, and how its fields become JSON keys.

The classes themselves are made by `checker.shape.frozen`, like all others of the house.
"""

from __future__ import annotations

from dataclasses import MISSING, Field
from typing import Any, ClassVar


class Record:
    """Marks a part of the report: what is written, read and described field by field."""

    __slots__ = ()
    __dataclass_fields__: ClassVar[dict[str, Field[Any]]]


def has_default(each: Field[Any]) -> bool:
    """Whether the field may be left out."""
    return each.default is not MISSING or each.default_factory is not MISSING


def key_of(field_name: str) -> str:
    """The JSON key of a field: a trailing underscore keeps clear of Python's words (`from_` is "from")."""
    return field_name.rstrip("_")
