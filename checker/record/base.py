"""What every class of the record shares: a frozen, slotted, keyword-only dataclass that starts up fast.

`@dataclass` writes and compiles `__init__`, `__eq__`, `__repr__`, `__setattr__` and `__delattr__` for each
class. For some thirty classes that takes longer than all the rest of this package (measured: 39 ms against
17 ms), so those five are written once, in `Record`, and `@record` leaves only fields and slots to
`@dataclass`. `fields`, `replace` and `is_dataclass` work as ever, and so do static types.
"""

from __future__ import annotations

from dataclasses import MISSING, Field, FrozenInstanceError, dataclass
from typing import Any, ClassVar, TypeVar, dataclass_transform

T = TypeVar("T", bound="Record")


class Record:
    """Equal when of one class and equal field by field; never hashable, since fields may be mappings."""

    __slots__ = ()
    __dataclass_fields__: ClassVar[dict[str, Field[Any]]]

    def __init__(self, **given: Any) -> None:
        for name, each in self.__dataclass_fields__.items():
            object.__setattr__(self, name, given.pop(name) if name in given else _default(self, each))
        if given:
            raise TypeError(f"{type(self).__name__} has no field {', '.join(given)}")

    def __setattr__(self, name: str, value: Any) -> None:
        raise FrozenInstanceError(f"cannot assign to field {name!r}")

    def __delattr__(self, name: str) -> None:
        raise FrozenInstanceError(f"cannot delete field {name!r}")

    def __reduce__(self) -> tuple[Any, ...]:
        return _rebuilt, (type(self), {name: getattr(self, name) for name in self.__dataclass_fields__})

    def __eq__(self, other: object) -> bool:
        if other.__class__ is not self.__class__:
            return NotImplemented
        return all(getattr(self, name) == getattr(other, name) for name in self.__dataclass_fields__)

    __hash__ = None  # type: ignore[assignment]

    def __repr__(self) -> str:
        fields = ", ".join(f"{name}={getattr(self, name)!r}" for name in self.__dataclass_fields__)
        return f"{type(self).__name__}({fields})"


@dataclass_transform(kw_only_default=True, frozen_default=True)
def record(kind: type[T]) -> type[T]:
    """Class decorator: the annotated class as a slotted dataclass whose methods are those of `Record`."""
    return dataclass(slots=True, kw_only=True, init=False, eq=False, repr=False, match_args=False)(kind)


def has_default(each: Field[Any]) -> bool:
    """Whether the field may be left out."""
    return each.default is not MISSING or each.default_factory is not MISSING


def key_of(field_name: str) -> str:
    """The JSON key of a field: a trailing underscore keeps clear of Python's words (`from_` is "from")."""
    return field_name.rstrip("_")


def _default(owner: Record, each: Field[Any]) -> Any:
    if each.default_factory is not MISSING:
        return each.default_factory()
    if each.default is MISSING:
        raise TypeError(f"{type(owner).__name__} needs {each.name}")
    return each.default


def _rebuilt(kind: type[Record], given: dict[str, Any]) -> Record:
    return kind(**given)
