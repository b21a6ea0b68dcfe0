"""One table of the file against its keys: every value converted, every fault with its line."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from typing import Any

from checker.intent import values
from checker.intent.hints import misplaced, unknown
from checker.intent.keys import SECTIONS, Key
from checker.intent.source import KeyPath, Source
from checker.intent.types import Band
from checker.intent.values import BadValueError

ROLES = ("input", "output")


def table(source: Source, path: KeyPath, keys: Mapping[str, Key], title: str) -> dict[str, Any]:
    """The table at `path` as key -> value read by the key's kind; `title` is its name in messages.

    Kinds that need to know a neighbour ("level", "bound", "map") come back as they stand in the file.
    Raises InputTrouble for an unknown, missing or unreadable key.
    """
    raw = at(source, path)
    if not isinstance(raw, dict):
        raise source.trouble(f"{title} must be a table, got {values.shown(raw)}", *path)
    for name in raw:
        if name not in keys:
            raise source.trouble(misplaced(name, title, keys), *path, name)
    for name, key in keys.items():
        if key.required and name not in raw:
            raise source.trouble(f"{title} lacks {name!r}", *path)
    return {name: _read(source, (*path, name), keys[name], raw[name], title) for name in raw}


def at(source: Source, path: KeyPath) -> Any:
    """What stands at `path`."""
    value: Any = source.data
    for step in path:
        value = value[step]
    return value


def guarded(source: Source, path: KeyPath, title: str, read: Callable[[], Any]) -> Any:
    """`read()`, with a BadValueError turned into the message of the key at `path`."""
    try:
        return read()
    except BadValueError as fault:
        raise source.trouble(f"{path[-1]!r} of {title}: {fault}", *path) from None


def band(source: Source, path: KeyPath, title: str) -> Band:
    """The band at `path`; `low` may be 0."""
    read = table(source, path, SECTIONS["band"], title)
    if read["low"] < 0.0:
        raise source.trouble(f"'low' of {title} is negative; the lowest frequency is 0", *path, "low")
    if read["low"] >= read["high"]:
        message = f"'low' of {title}, {read['low']:g} Hz, is not below 'high', {read['high']:g} Hz"
        raise source.trouble(message, *path, "low")
    return Band(low_hz=read["low"], high_hz=read["high"])


def _read(source: Source, path: KeyPath, key: Key, raw: Any, title: str) -> Any:
    if key.kind == "band":
        return band(source, path, f"'band' of {title}")
    if key.kind == "role":
        return _role(source, path, raw, title)
    reader = _READERS.get(key.kind)
    if reader is None:
        return raw
    return guarded(source, path, title, lambda: reader(raw, key.unit))


def _role(source: Source, path: KeyPath, raw: Any, title: str) -> str:
    if not isinstance(raw, str):
        message = f'\'role\' of {title}: expected "input" or "output", got {values.shown(raw)}'
        raise source.trouble(message, *path)
    if raw not in ROLES:
        raise source.trouble(unknown(raw, ROLES, f"role of {title}"), *path)
    return raw


_READERS: Mapping[str, Callable[[Any, str], Any]] = {
    "text": lambda raw, _: values.text(raw),
    "texts": lambda raw, _: values.texts(raw),
    "amount": values.amount,
    "fraction": lambda raw, _: values.fraction(raw),
    "flag": lambda raw, _: values.flag(raw),
    "day": lambda raw, _: values.day(raw),
}
