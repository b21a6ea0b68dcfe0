"""What could not be looked at: lines that were not understood, parts that cannot be solved with, stages without an
operating point; each with the stages that it may bear on.
"""

from __future__ import annotations

from collections.abc import Iterable

from checker.circuit.types import Unknown
from checker.quantity.value import Origin
from checker.record import Location, Stage, Unchecked
from checker.setup import Setup

FORM = "the same in a form that the reader knows, or nothing if the board works without it"


def unread(setup: Setup) -> tuple[Unchecked, ...]:
    """Lines of the netlist that were not understood."""
    stages = Neighbours(setup)
    return tuple(
        Unchecked(
            subject=remark.parts[0] if remark.parts else f"line {remark.origin.line}",
            rule="",
            datum=f"what the netlist says there: {remark.text}",
            supply=FORM,
            location=_location(remark.origin),
            touches=stages.of(remark.nets),
        )
        for remark in setup.netlist.remarks
        if remark.lost
    )


def unknowns(setup: Setup) -> tuple[Unchecked, ...]:
    """Parts and nets that cannot be solved with."""
    if not setup.circuit.unknowns:
        return ()
    parts = {part.ref: part for part in setup.netlist.parts}
    held = {rail.net for rail in setup.circuit.rails}
    stages = Neighbours(setup)

    def nets(each: Unknown) -> Iterable[str]:
        """Those of the datum; of a whole part also those that it only senses, but no supply."""
        part = parts.get(each.ref) if not each.pin else None
        return each.nets if part is None else {*each.nets, *(pin.net for pin in part.pins if pin.net not in held)}

    def own(each: Unknown) -> tuple[str, ...]:
        """A transistor that cannot be solved with is a stage itself."""
        fact = setup.circuit.parts.get(each.ref)
        return (each.ref,) if fact is not None and fact.kind in ("bipolar", "fet") else ()

    return tuple(
        Unchecked(
            subject=each.ref,
            rule="",
            datum=each.datum,
            supply=each.supply,
            location=_location(parts[each.ref].origin) if each.ref in parts else None,
            touches=tuple(dict.fromkeys((*own(each), *stages.of(nets(each))))),
        )
        for each in setup.circuit.unknowns
    )


def unsolved(stages: Iterable[Stage]) -> tuple[Unchecked, ...]:
    """Stages without an operating point."""
    return tuple(
        Unchecked(
            subject=stage.id,
            rule="",
            datum="operating point",
            supply=stage.reason,
            location=stage.location,
            touches=(stage.id,),
        )
        for stage in stages
        if stage.bias is None
    )


def judged_apart(stages: Iterable[Stage], gaps: Iterable[Unchecked]) -> tuple[Unchecked, ...]:
    """Gaps of rules, but for stages without an operating point: there one line stands for all rules."""
    lost = {stage.id for stage in stages if stage.bias is None}
    return tuple(gap for gap in gaps if gap.subject not in lost)


class Neighbours:
    """Finds the stages that have a terminal on a net, or on a net of the same DC island; ground joins nothing."""

    def __init__(self, setup: Setup) -> None:
        self._circuit = setup.circuit
        self._island = {node: tuple(each.nodes) for each in setup.point.plan.islands for node in each.nodes}
        self._places = {stage.id: place for place, stage in enumerate(setup.recognition.stages)}
        table = setup.circuit.transistors
        nodes = dict(zip(table.names, table.nodes.tolist(), strict=True))
        self._on: dict[int, set[str]] = {}
        for stage in setup.recognition.stages:
            for node in nodes.get(stage.device, ()):
                self._on.setdefault(node, set()).add(stage.id)

    def of(self, nets: Iterable[str]) -> tuple[str, ...]:
        """Ids of the stages, in their order."""
        near = {self._circuit.node(net) for net in nets if net in self._circuit.nets} - {0}
        wider = near.union(*(self._island.get(node, ()) for node in near))
        found = set().union(*(self._on.get(node, ()) for node in wider))
        return tuple(sorted(found, key=self._places.__getitem__))


def _location(origin: Origin) -> Location | None:
    return Location(file=origin.file, line=origin.line, sheet=origin.sheet) if origin.file else None
