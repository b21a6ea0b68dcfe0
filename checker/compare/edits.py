"""What was edited between two boards: values, models, wiring, parts added and removed, and conditions."""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterator, Mapping

from checker.compare.match import net_map
from checker.judge.structure import SYMMETRIC
from checker.record import Part, Report, natural
from checker.record.comparison import Condition, Edit

SAME_VALUE = 1e-9
"""Fraction within which two values are one, written differently."""


def edits(
    old: Report,
    new: Report,
    pairs: Mapping[str, str],
    owned: tuple[Mapping[str, tuple[str, ...]], Mapping[str, tuple[str, ...]]],
) -> tuple[Edit, ...]:
    """By part; `owned`: part to its stages, in the old and the new board."""
    nets = net_map(old.parts, new.parts, pairs, {})
    found: list[Edit] = []
    for before, after in pairs.items():
        found += _of_part(after, old.parts[before], new.parts[after], nets, owned[1].get(after, ()))
    for sides, what, stages in (
        ((old, pairs.keys()), "removed", owned[0]),
        ((new, set(pairs.values())), "added", owned[1]),
    ):
        report, known = sides
        for ref in report.parts.keys() - known:
            found.append(_whole(ref, report.parts[ref], what == "added", stages.get(ref, ())))
    return tuple(sorted(found, key=lambda edit: (natural(edit.part), edit.what)))


def conditions(old: Report, new: Report) -> tuple[Condition, ...]:
    """What differs of band, temperature, limits, rails and ports."""
    before, after = dict(_conditions(old)), dict(_conditions(new))
    return tuple(
        Condition(what=what, before=before.get(what, "—"), after=after.get(what, "—"))
        for what in sorted(before.keys() | after.keys(), key=natural)
        if before.get(what) != after.get(what)
    )


def _whole(ref: str, part: Part, added: bool, stages: tuple[str, ...]) -> Edit:
    value = part.model or part.value
    unit = "" if part.model else part.unit
    before, after = (None, value) if added else (value, None)
    return Edit(
        what="added" if added else "removed",
        part=ref,
        kind=part.kind,
        before=before,
        after=after,
        unit=unit,
        stages=stages,
    )


def _of_part(ref: str, old: Part, new: Part, nets: Mapping[str, str], stages: tuple[str, ...]) -> Iterator[Edit]:
    said = False
    if not _same(old, new):
        said = True
        yield Edit(
            what="value", part=ref, kind=new.kind, before=old.value, after=new.value, unit=new.unit, stages=stages
        )
    if old.model != new.model:
        said = True
        yield Edit(what="model", part=ref, kind=new.kind, before=old.model, after=new.model, stages=stages)
    if old.data != new.data and not said:
        yield Edit(what="data", part=ref, kind=new.kind, stages=stages)
    for before, after in _rewired(old, new, nets):
        yield Edit(what="wiring", part=ref, kind=new.kind, before=before, after=after, stages=stages)


def _same(old: Part, new: Part) -> bool:
    if old.value is None or new.value is None:
        return old.value is new.value
    return abs(old.value - new.value) <= SAME_VALUE * max(abs(old.value), abs(new.value))


def _rewired(old: Part, new: Part, nets: Mapping[str, str]) -> Iterator[tuple[str, str]]:
    """Old net and new net of each pin that moved; pins of a symmetric part may have changed places."""
    there = [(pin, nets.get(net, "")) for pin, net in sorted(old.pins.items())]
    if new.kind in SYMMETRIC and Counter(net for _, net in there) == Counter(new.pins.values()):
        return
    for pin, net in there:
        now = new.pins.get(pin, "—")
        if now != net:
            yield f"{pin} on {old.pins[pin]}", f"{pin} on {now}"


def _conditions(report: Report) -> Iterator[tuple[str, str]]:
    under = report.conditions
    yield "temperature", f"{under.temperature_c:g} °C"
    if under.band_hz is not None:
        yield "band", f"{under.band_hz[0]:.6g} to {under.band_hz[1]:.6g} Hz"
    for rule, limits in under.limits.items():
        for name, value in limits.items():
            yield f"limit {name} of {rule}", f"{value:.6g}"
    for rail in report.rails:
        yield f"rail {rail.net}", f"{rail.volts:.6g} V"
    for port in report.ports:
        if port.reference_ohm is not None:
            yield f"reference of port {port.name}", f"{port.reference_ohm:.6g} ohm"
