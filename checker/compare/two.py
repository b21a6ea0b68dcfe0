"""Two reports side by side: `compare_reports` is the whole comparison."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import fields
from typing import Literal

from checker.compare.edits import conditions, edits
from checker.compare.figures import moved, moved_stage
from checker.compare.findings import new_name, sort_findings
from checker.compare.match import match_parts
from checker.compare.owners import owners
from checker.record import Bias, FetBias, Report, SmallSignal, Stage
from checker.record.comparison import Changed, Comparison, Condition, Edit, Moved, Side
from checker.shape import frozen

AT_REST = frozenset(each.name for kind in (Bias, FetBias, SmallSignal) for each in fields(kind))
"""Figures that no capacitor moves."""
How = Literal["edited", "follows", "conditions", "added", "removed", "unexplained"]
TOLERANCE = 0.01
"""Figures count as equal within this fraction: an engineer reads 1 % as the same."""


@frozen
class _Causes:
    """What a change can be traced to. `owned`: stage to its edited parts, by the names of the new board."""

    edits: tuple[Edit, ...]
    conditions: tuple[Condition, ...]
    owned: Mapping[str, tuple[str, ...]]


def compare_reports(
    old: Report, new: Report, *, names: tuple[str, str] | None = None, tolerance: float = TOLERANCE
) -> Comparison:
    """What changed from `old` to `new`, each change traced to what was edited.

    `names`: what the call named the two. `tolerance`: fraction within which figures count as equal (in decibels and
    degrees what goes with it).
    """
    pairs = match_parts(old, new)
    found = edits(old, new, pairs, (owners(old), owners(new)))
    causes = _Causes(edits=found, conditions=conditions(old, new), owned=_owned(found, old, pairs))
    findings = sort_findings(old, new, pairs)
    titles = names or (old.netlist.path, new.netlist.path)
    return Comparison(
        old=_side(old, titles[0]),
        new=_side(new, titles[1]),
        tolerance=tolerance,
        renumbered={before: after for before, after in sorted(pairs.items()) if before != after},
        conditions=causes.conditions,
        edits=found,
        changed=tuple(_changed(old, new, pairs, causes, tolerance)),
        new_findings=findings.new,
        cured=findings.cured,
        unjudged=findings.unjudged,
        unchanged=findings.unchanged,
    )


def _side(report: Report, name: str) -> Side:
    return Side(
        name=name,
        path=report.netlist.path,
        sha256=report.netlist.sha256,
        checked=report.checked.stages,
        of=report.checked.of,
        incomplete=report.incomplete,
    )


def _owned(found: tuple[Edit, ...], old: Report, pairs: Mapping[str, str]) -> dict[str, tuple[str, ...]]:
    """Stage of the new board to the edited parts that are its own. A part that was removed belonged to the stage that
    its old one became.
    """
    owned: dict[str, dict[str, None]] = {}
    for edit in found:
        for stage in edit.stages:
            name = new_name(stage, old, pairs) if edit.what == "removed" else stage
            owned.setdefault(stage if name is None else name, {})[edit.part] = None
    return {stage: tuple(parts) for stage, parts in owned.items()}


def _changed(
    old: Report, new: Report, pairs: Mapping[str, str], causes: _Causes, tolerance: float
) -> Iterator[Changed]:
    yield from _stages(old, new, pairs, causes, tolerance)
    groups = {new_name(group.id, old, pairs): group for group in old.groups}
    for group in new.groups:
        before = groups.pop(group.id, None)
        figures = () if before is None else tuple(moved(before.specs, group.specs, tolerance))
        if figures and before is not None:
            own = tuple(dict.fromkeys(part for member in group.devices for part in causes.owned.get(member, ())))
            yield _traced("group", group.id, before.id, figures, own, causes)
    yield from _ports(old, new, causes, tolerance)
    yield from _gains(old, new, causes, tolerance)


def _stages(old: Report, new: Report, pairs: Mapping[str, str], causes: _Causes, tolerance: float) -> Iterator[Changed]:
    was = {new_name(stage.id, old, pairs): stage for stage in old.stages}
    for stage in new.stages:
        before = was.pop(stage.id, None)
        if before is None:
            parts = causes.owned.get(stage.id, ())
            yield Changed(kind="stage", id=stage.id, was=None, how="added", because=parts)
            continue
        figures = moved_stage(before, stage, tolerance)
        if figures:
            yield _traced("stage", stage.id, before.id, figures, causes.owned.get(stage.id, ()), causes)
    gone: list[Stage] = [stage for stage in old.stages if stage in was.values()]
    for stage in gone:
        yield Changed(kind="stage", id=stage.id, was=stage.id, how="removed", because=(stage.device,))


def _ports(old: Report, new: Report, causes: _Causes, tolerance: float) -> Iterator[Changed]:
    was = {port.name: port for port in old.ports}
    for port in new.ports:
        before = was.get(port.name)
        figures = () if before is None else tuple(each for each in moved(before, port, tolerance) if _counts(each))
        if figures:
            own = _linked(new, port.name, causes)
            yield _traced("port", port.name, port.name, figures, own, causes)


def _gains(old: Report, new: Report, causes: _Causes, tolerance: float) -> Iterator[Changed]:
    was = {(gain.from_, gain.to): gain for gain in old.gains}
    for gain in new.gains:
        before = was.get((gain.from_, gain.to))
        figures = () if before is None else tuple(each for each in moved(before, gain, tolerance) if _counts(each))
        if figures:
            yield _traced("gain", f"{gain.from_} → {gain.to}", f"{gain.from_} → {gain.to}", figures, (), causes)


def _counts(each: Moved) -> bool:
    """Names and nets are no figures: a renumbered board may call them otherwise."""
    return each.quantity not in ("name", "net", "from", "to")


def _linked(report: Report, port: str, causes: _Causes) -> tuple[str, ...]:
    linked = (stage.id for stage in report.stages if any(link.other == port for link in stage.links))
    return tuple(dict.fromkeys(part for stage in linked for part in causes.owned.get(stage, ())))


def _traced(
    kind: Literal["stage", "group", "port", "gain"],
    name: str,
    was: str,
    figures: tuple[Moved, ...],
    own: tuple[str, ...],
    causes: _Causes,
) -> Changed:
    how: How = "unexplained"
    because: tuple[str, ...] = ()
    if own:
        how, because = "edited", (*own, *_at_rest(figures, own, causes.edits))
    elif causes.edits:
        how, because = "follows", tuple(dict.fromkeys(edit.part for edit in causes.edits))
    elif causes.conditions:
        how, because = "conditions", tuple(each.what for each in causes.conditions)
    return Changed(kind=kind, id=name, was=was, how=how, because=because, figures=figures)


def _at_rest(figures: tuple[Moved, ...], own: tuple[str, ...], found: tuple[Edit, ...]) -> tuple[str, ...]:
    """Edited parts elsewhere that figures at rest must be traced to, where a stage's own are capacitors alone."""
    direct = tuple(dict.fromkeys(edit.part for edit in found if edit.kind != "capacitor" or edit.what == "wiring"))
    if set(direct) & set(own) or not any(each.quantity in AT_REST for each in figures):
        return ()
    return direct
