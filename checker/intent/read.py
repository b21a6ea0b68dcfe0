"""The intent file as a whole: what the engineer says of a board, checked before anything uses it."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from functools import partial
from itertools import pairwise
from pathlib import Path
from typing import Any, TypeVar

from checker.intent import entries
from checker.intent.hints import misplaced, swallowed
from checker.intent.keys import LISTS, RAIL_KEYS, SECTIONS, TOP_LEVEL
from checker.intent.section import band, guarded, table
from checker.intent.source import KeyPath, Source, load
from checker.intent.types import Ambient, Intent, RailIntent
from checker.intent.values import amount, shown, text

_Entry = TypeVar("_Entry")


def read_intent(path: Path) -> Intent:
    """Read and check an intent file.

    Values come out in SI (temperatures in degC, levels as the peak e.m.f. in V). Names of nets, parts,
    quantities, rules and limits are not looked up here: see `checker.intent.checks` and the circuit.
    Raises InputTrouble with file and line for a file that cannot be used.
    """
    source = load(path)
    _check_top(source)
    limits = _limits(source)
    return Intent(
        path=source.file,
        band=band(source, ("band",), "[band]") if "band" in source.data else None,
        ambient=_ambient(source),
        rails=tuple(_rails(source)),
        ports=_each(source, "port", entries.port, "name"),
        states=_each(source, "state", entries.state, "name"),
        targets=_each(source, "target", entries.target),
        limits=limits,
        limit_lines={rule: source.line("limits", rule) for rule in limits},
        parts=_each(source, "part", entries.part, "ref"),
        accepted=_each(source, "accepted", entries.accepted),
    )


def _check_top(source: Source) -> None:
    for name, value in source.data.items():
        if name not in TOP_LEVEL:
            raise source.trouble(misplaced(name, "the file's top level", TOP_LEVEL), name)
        wanted = list if name in LISTS else dict
        if not isinstance(value, wanted):
            header = f"[[{name}]]" if name in LISTS else f"[{name}]"
            raise source.trouble(f"{name!r} must be written as {header}, got {shown(value)}", name)


def _ambient(source: Source) -> Ambient:
    if "ambient" not in source.data:
        return Ambient()
    read = table(source, ("ambient",), SECTIONS["ambient"], "[ambient]")
    said = [(name, read[name]) for name in ("min", "nominal", "max") if name in read]
    for (low, low_c), (high, high_c) in pairwise(said):
        if low_c > high_c:
            message = f"{low!r} of [ambient], {low_c:g} degC, is above {high!r}, {high_c:g} degC"
            raise source.trouble(message, "ambient", low)
    return Ambient(min_c=read.get("min"), nominal_c=read.get("nominal"), max_c=read.get("max"))


def _rails(source: Source) -> Iterator[RailIntent]:
    for net, value in source.data.get("rails", {}).items():
        path: KeyPath = ("rails", net)
        if isinstance(value, dict | list) and not (isinstance(value, dict) and "volts" in value):
            message = swallowed(net, "[rails]")
            if message is not None:
                raise source.trouble(message, *path)
        title = f"rail {net!r}"
        origin = entries.origin(source, path)
        guarded(source, path, "[rails]", partial(text, net))
        if isinstance(value, dict):
            read = table(source, path, RAIL_KEYS, title)
            yield RailIntent(
                net=net,
                volts=read["volts"],
                origin=origin,
                tolerance=read.get("tolerance"),
                may_be_absent=read.get("may_be_absent", False),
            )
        else:
            yield RailIntent(net=net, volts=_rail_volts(source, path, value), origin=origin)


def _rail_volts(source: Source, path: KeyPath, value: Any) -> float:
    net = str(path[-1])
    hint = ""
    owners = [name for name in ("band", "ambient", "port", "part") if net in SECTIONS[name]]
    if owners:
        hint = f" (in [rails] every key is the name of a net; {net!r} is a key of {owners[0]!r})"
    return float(guarded(source, path, "[rails]" + hint, lambda: amount(value, "V")))


def _limits(source: Source) -> dict[str, dict[str, float | str]]:
    read: dict[str, dict[str, float | str]] = {}
    for rule, table_ in source.data.get("limits", {}).items():
        message = swallowed(rule, "[limits]")
        if message is not None:
            raise source.trouble(message, "limits", rule)
        if not isinstance(table_, dict):
            text_ = f"a rule's limits are a table, [limits.{rule}]; got {shown(table_)}"
            raise source.trouble(text_, "limits", rule)
        read[rule] = {name: _limit(source, ("limits", rule, name), value) for name, value in table_.items()}
    return read


def _limit(source: Source, path: KeyPath, value: Any) -> float | str:
    title = f"[limits.{path[1]}]"
    message = swallowed(str(path[-1]), title)
    if message is not None:
        raise source.trouble(message, *path)
    if isinstance(value, str):
        return str(guarded(source, path, title, lambda: text(value)))
    return float(guarded(source, path, title, lambda: amount(value, "")))


def _each(source: Source, name: str, read: Callable[[Source, KeyPath], _Entry], unique: str = "") -> tuple[_Entry, ...]:
    """The tables of a list; no two may share the value of `unique`."""
    found: list[_Entry] = []
    seen: dict[str, int] = {}
    for index in range(len(source.data.get(name, ()))):
        path: KeyPath = (name, index)
        entry = read(source, path)
        found.append(entry)
        if unique:
            value = str(getattr(entry, unique))
            if value in seen:
                message = f"{unique} {value!r} of [[{name}]] is used twice, first in line {seen[value]}"
                raise source.trouble(message, *path, unique)
            seen[value] = source.line(*path, unique)
    return tuple(found)
