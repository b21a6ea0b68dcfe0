"""The house's records: slotted, keyword-only dataclasses that start up fast, frozen or filled step by step.

`@dataclass` writes and compiles `__init__`, `__eq__`, `__repr__`, `__hash__`, `__setattr__` and `__delattr__` anew for
each class, about a millisecond a class; with a hundred classes that is more than all else of a start. Here they are
written once, and each class is made a second time with slots, which takes `@dataclass` four times as long even
where it writes nothing. The standard library's `fields`, `replace` and `is_dataclass` work as ever; so do static types.
"""

from __future__ import annotations

from dataclasses import _FIELD, MISSING, Field, FrozenInstanceError, field  # type: ignore[attr-defined]
from inspect import get_annotations
from typing import Any, NoReturn, TypeVar, dataclass_transform

T = TypeVar("T")

_SLOT = object.__setattr__


def _init(self: Any, **given: Any) -> None:
    # A large board makes a million of these: one loop over what is set, and questions only where something is odd.
    filled = self.__filled_defaults__ | given
    for name, make in self.__filled_factories__.items():
        if name not in filled:
            filled[name] = make()
    if filled.keys() != self.__dataclass_fields__.keys():
        _refuse(self, filled)
    for name, value in filled.items():
        _SLOT(self, name, value)


def _refuse(self: Any, filled: dict[str, Any]) -> NoReturn:
    fields = self.__dataclass_fields__
    if missing := [name for name in fields if name not in filled]:
        raise TypeError(f"{type(self).__name__} needs {', '.join(missing)}")
    raise TypeError(f"{type(self).__name__} has no field {', '.join(name for name in filled if name not in fields)}")


def _setattr(self: Any, name: str, _value: Any) -> None:
    raise FrozenInstanceError(f"cannot assign to field {name!r} of {type(self).__name__}")


def _delattr(self: Any, name: str) -> None:
    raise FrozenInstanceError(f"cannot delete field {name!r} of {type(self).__name__}")


def _eq(self: Any, other: Any) -> Any:
    if other.__class__ is not self.__class__:
        return NotImplemented
    return all(getattr(self, name) == getattr(other, name) for name in self.__dataclass_fields__)


def _hash(self: Any) -> int:
    return hash((type(self), *(getattr(self, name) for name in self.__dataclass_fields__)))


def _repr(self: Any) -> str:
    values = ", ".join(f"{name}={getattr(self, name)!r}" for name in self.__dataclass_fields__)
    return f"{type(self).__name__}({values})"


def _rebuilt(kind: type[Any], given: dict[str, Any]) -> Any:
    return kind(**given)


def _reduce(self: Any) -> tuple[Any, ...]:
    return _rebuilt, (type(self), {name: getattr(self, name) for name in self.__dataclass_fields__})


_FILLED: dict[str, Any] = {"__init__": _init, "__eq__": _eq, "__hash__": None, "__repr__": _repr, "__reduce__": _reduce}
_FROZEN = _FILLED | {"__hash__": _hash, "__setattr__": _setattr, "__delattr__": _delattr}
_MADE_ANEW = ("__dict__", "__weakref__")


def _field(kind: type[Any], name: str, annotation: Any) -> Any:
    """The standard library's description of one field, from its annotation and the value that the class gives it."""
    given = kind.__dict__.get(name, MISSING)
    described: Any = given if isinstance(given, Field) else field(default=given)
    described.name, described.type, described.kw_only, described._field_type = name, annotation, True, _FIELD
    return described


def _made(kind: type[T], methods: dict[str, Any]) -> type[T]:
    """The class anew, with slots for its annotated names and with these methods."""
    own = {name: _field(kind, name, each) for name, each in get_annotations(kind).items()}
    inherited: dict[str, Any] = {}
    for base in reversed(kind.__mro__[1:]):
        inherited |= getattr(base, "__dataclass_fields__", {})
    fields = inherited | own
    body = {name: each for name, each in vars(kind).items() if name not in own and name not in _MADE_ANEW}
    body |= methods
    body["__qualname__"] = kind.__qualname__
    body["__slots__"] = tuple(name for name in own if name not in inherited)
    body["__dataclass_fields__"] = fields
    body["__filled_defaults__"] = {name: each.default for name, each in fields.items() if each.default is not MISSING}
    body["__filled_factories__"] = {
        name: each.default_factory for name, each in fields.items() if each.default_factory is not MISSING
    }
    made: type[T] = type.__new__(type(kind), kind.__name__, kind.__bases__, body)
    return made


@dataclass_transform(kw_only_default=True, frozen_default=True, field_specifiers=(Field,))
def frozen(kind: type[T]) -> type[T]:
    """Class decorator: the annotated class as a frozen, slotted, keyword-only dataclass.

    Raises TypeError at a call that lacks a field or names one it does not have, as a dataclass would.
    """
    return _made(kind, _FROZEN)


@dataclass_transform(kw_only_default=True, field_specifiers=(Field,))
def filled(kind: type[T]) -> type[T]:
    """Class decorator: the same, for what is filled step by step; it can be assigned to and has no hash."""
    return _made(kind, _FILLED)
