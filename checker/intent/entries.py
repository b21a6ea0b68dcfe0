"""The tables that come in lists: port, state, target, part, accepted."""

from __future__ import annotations

from collections.abc import Sequence
from functools import partial
from typing import Any

from checker.intent import values
from checker.intent.hints import swallowed
from checker.intent.keys import QUANTITY_UNITS, RATING_KEYS, SECTIONS
from checker.intent.section import at, guarded, table
from checker.intent.source import KeyPath, Source
from checker.intent.types import AcceptedIntent, PartIntent, PortIntent, StateIntent, TargetIntent
from checker.quantity.value import Origin

PIN_WORDS = ("high", "low", "open")

PARASITICS = {
    "series_resistance": "rser",
    "series_inductance": "lser",
    "self_resonance": "resonance_hz",
    "quality": "quality",
    "quality_at": "quality_hz",
}
"""Key of a [[part]] to its name in `PartIntent.parasitics`."""


def origin(source: Source, path: KeyPath) -> Origin:
    """Where the entry at `path` stands."""
    return Origin(kind="intent", file=source.file, line=source.line(*path))


def port(source: Source, path: KeyPath) -> PortIntent:
    """One [[port]]: by net, or by part and pin."""
    read, title = _read(source, path)
    _one_way(source, path, read, title, (("net",), ("part", "pin")))
    impedance = read.get("impedance")
    if impedance is not None and impedance <= 0.0:
        raise source.trouble(f"'impedance' of {title} is not above 0 ohm", *path, "impedance")
    level = None
    if "level" in read:
        level = guarded(source, (*path, "level"), title, lambda: values.level(read["level"], impedance))
    return PortIntent(
        name=read["name"],
        role=read["role"],
        origin=origin(source, path),
        net=read.get("net", ""),
        part=read.get("part", ""),
        pin=read.get("pin", ""),
        impedance_ohm=impedance,
        attach=read.get("attach", True),
        level_v=level,
        band=read.get("band"),
    )


def state(source: Source, path: KeyPath) -> StateIntent:
    """One [[state]]: pins held at a level, rails that are absent."""
    read, title = _read(source, path)
    pins = _map(source, (*path, "pins"), read.get("pins", {}), f"'pins' of {title}")
    held = {}
    for name, value in pins.items():
        where = (*path, "pins", name)
        if name in SECTIONS["state"]:
            message = f"{name!r} stands inside 'pins' of {title}; move it above [state.pins]"
            raise source.trouble(message, *where)
        if "." not in name:
            message = f'{name!r} of {title} is not a pin; write the part and the pin, e.g. "U1.7"'
            raise source.trouble(message, *where)
        held[name] = _pin_level(source, where, value, title)
    return StateIntent(name=read["name"], origin=origin(source, path), pins=held, absent=read.get("absent", ()))


def _pin_level(source: Source, path: KeyPath, value: Any, title: str) -> float | str:
    if isinstance(value, str) and value in PIN_WORDS:
        return value

    def volts() -> float:
        try:
            return values.amount(value, "V")
        except values.BadValueError:
            raise values.BadValueError(
                f'expected "high", "low", "open" or a voltage such as "2.4 V", got {values.shown(value)}'
            ) from None

    return float(guarded(source, path, title, volts))


def target(source: Source, path: KeyPath) -> TargetIntent:
    """One [[target]]: of a stage, of a group, or from one port to another."""
    read, title = _read(source, path)
    _one_way(source, path, read, title, (("stage",), ("group",), ("from", "to")))
    unit = QUANTITY_UNITS.get(read["quantity"].rpartition("_")[2], "")
    bounds = {}
    for name in ("min", "max"):
        if name in read:
            read_bound = partial(values.amount, read[name], unit)
            bounds[name] = guarded(source, (*path, name), title, read_bound)
    if not bounds:
        raise source.trouble(f"{title} wants nothing; give 'min', 'max' or both", *path)
    if len(bounds) == 2 and bounds["min"] > bounds["max"]:
        message = f"'min' of {title}, {bounds['min']:g}, is above 'max', {bounds['max']:g}"
        raise source.trouble(message, *path, "min")
    return TargetIntent(
        quantity=read["quantity"],
        origin=origin(source, path),
        stage=read.get("stage", ""),
        group=read.get("group", ""),
        source=read.get("from", ""),
        to=read.get("to", ""),
        minimum=bounds.get("min"),
        maximum=bounds.get("max"),
    )


def part(source: Source, path: KeyPath) -> PartIntent:
    """One [[part]]: ratings stand in a table `ratings` or directly in the entry."""
    read, title = _read(source, path)
    ratings = {name: read[name] for name in RATING_KEYS if name in read}
    if "ratings" in read:
        nested = table(source, (*path, "ratings"), RATING_KEYS, f"'ratings' of {title}")
        for name in nested:
            if name in ratings:
                raise source.trouble(f"{name!r} of {title} is given twice", *path, "ratings", name)
        ratings |= nested
    for name in ("resistance", "inductance", "capacitance", *PARASITICS):
        if read.get(name, 1.0) <= 0.0:
            raise source.trouble(f"{name!r} of {title} is not above 0", *path, name)
    if ("quality" in read) != ("quality_at" in read):
        raise source.trouble(f"{title} needs both 'quality' and 'quality_at', the frequency it holds at", *path)
    return PartIntent(
        ref=read["ref"],
        origin=origin(source, path),
        card=read.get("card", ""),
        tolerance=read.get("tolerance"),
        ratings=ratings,
        resistance_ohm=read.get("resistance"),
        inductance_h=read.get("inductance"),
        capacitance_f=read.get("capacitance"),
        parasitics={key: read[name] for name, key in PARASITICS.items() if name in read},
    )


def accepted(source: Source, path: KeyPath) -> AcceptedIntent:
    """One [[accepted]]: by rule and subject, or by fingerprint."""
    read, title = _read(source, path)
    _one_way(source, path, read, title, (("rule", "subject"), ("fingerprint",)))
    return AcceptedIntent(
        reason=read["reason"],
        by=read["by"],
        origin=origin(source, path),
        rule=read.get("rule", ""),
        subject=read.get("subject", ""),
        fingerprint=read.get("fingerprint", ""),
        until=read.get("until"),
    )


def _read(source: Source, path: KeyPath) -> tuple[dict[str, Any], str]:
    """The entry's checked values and its title for messages."""
    section = str(path[0])
    title = f"[[{section}]]"
    raw = at(source, path)
    for key in ("name", "ref"):
        if isinstance(raw, dict) and isinstance(raw.get(key), str):
            title = f"{section} {raw[key][:60]!r}"
    return table(source, path, SECTIONS[section], title), title


def _map(source: Source, path: KeyPath, raw: Any, title: str) -> dict[str, Any]:
    if not isinstance(raw, dict):
        raise source.trouble(f"{title} must be a table, got {values.shown(raw)}", *path)
    for name in raw:
        message = swallowed(name, title)
        if message is not None:
            raise source.trouble(message, *path, name)
    return raw


def _one_way(source: Source, path: KeyPath, read: dict[str, Any], title: str, ways: Sequence[tuple[str, ...]]) -> None:
    """Exactly one of `ways` must be given, and given whole."""
    used = [way for way in ways if any(name in read for name in way)]
    whole = len(used) == 1 and all(name in read for name in used[0])
    if not whole:
        choices = ", or ".join(" and ".join(repr(name) for name in way) for way in ways)
        got = [repr(name) for way in ways for name in way if name in read]
        raise source.trouble(f"{title} needs {choices}; got {', '.join(got) or 'none of them'}", *path)
