"""The parts of the board, each with what the solution takes from it: what a later report is compared with."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import fields

from checker.circuit.types import Circuit, PartFact
from checker.judge.structure import digest
from checker.record import Part

_DIGITS = 12
"""As many as a report has: beyond them two platforms may differ."""


def parts(circuit: Circuit) -> dict[str, Part]:
    """Every part by its reference."""
    numbers: dict[str, list[str]] = {}
    for name, text in _numbers(circuit):
        numbers.setdefault(name, []).append(text)
    return {ref: _part(ref, fact, circuit, numbers.get(ref, [])) for ref, fact in circuit.parts.items()}


def _part(ref: str, fact: PartFact, circuit: Circuit, numbers: list[str]) -> Part:
    value, unit = _value(ref, fact, circuit)
    return Part(
        kind=fact.kind,
        value=value,
        unit=unit,
        model=fact.card.name if fact.card is not None else fact.model_source,
        pins=dict(sorted(fact.terminals.items())),
        data=digest([*sorted(numbers), *_said(fact)]),
    )


def _value(ref: str, fact: PartFact, circuit: Circuit) -> tuple[float | None, str]:
    """Value and unit; of a source what it drives at rest."""
    if fact.value is not None:
        return fact.value.si, fact.value.unit
    for table, unit in ((circuit.voltages, "V"), (circuit.currents, "A")):
        if fact.kind == "source" and ref in table.names:
            return float(table.value[0, table.names.index(ref)]), unit
    return None, ""


def _numbers(circuit: Circuit) -> Iterator[tuple[str, str]]:
    """(part, a number of one of its elements), for the nominal board. Elements of a part are called by its reference,
    or by that and a suffix.
    """
    for kind in ("resistors", "capacitors", "inductors", "voltages", "currents"):
        table = getattr(circuit, kind)
        for name, value in zip(table.names, table.value[0].tolist(), strict=True):
            yield _owner(name, circuit), f"{kind}{name.removeprefix(_owner(name, circuit))} {value:.{_DIGITS}g}"
    for devices in circuit.devices.values():
        for index, name in enumerate(devices.names):
            said = [f"{key} {float(column[0, index]):.{_DIGITS}g}" for key, column in sorted(devices.params.items())]
            yield _owner(name, circuit), " ".join(said)


def _owner(name: str, circuit: Circuit) -> str:
    """The part that an element belongs to; its own name where it belongs to none."""
    owner = name
    while owner not in circuit.parts and "." in owner:
        owner = owner.rpartition(".")[0]
    return owner if owner in circuit.parts else name


def _said(fact: PartFact) -> list[str]:
    """What rules and corners take from the part beyond its elements. Of ratings, those of semiconductors alone: no rule
    asks for a resistor's, and only one format shows its size."""
    tolerance = fact.value.tolerance if fact.value is not None else None
    if fact.kind not in ("bipolar", "fet", "diode"):
        return [str(tolerance)]
    # Ratings of passive parts are shown, and taken by no rule yet.
    judged = fact.kind in ("bipolar", "fet", "diode")
    ratings = [f"{each.name} {getattr(fact.ratings, each.name)}" for each in fields(fact.ratings) if judged]
    return [f"{tolerance} {fact.gain_min} {fact.gain_max}", *ratings]
