"""What could not be looked at: lines that were not understood, parts that cannot be solved with, stages without an
operating point; each with the stages that it may bear on.
"""

from __future__ import annotations

from collections.abc import Iterable

from checker.quantity.value import Origin
from checker.record import Location, Stage, Unchecked
from checker.setup import Setup

FORM = "the same in a form that the reader knows, or nothing if the board works without it"


def unread(setup: Setup) -> tuple[Unchecked, ...]:
    """Lines of the netlist that were not understood."""
    return tuple(
        Unchecked(
            subject=remark.parts[0] if remark.parts else f"line {remark.origin.line}",
            rule="",
            datum=f"what the netlist says there: {remark.text}",
            supply=FORM,
            location=_location(remark.origin),
            touches=touched(setup, remark.nets),
        )
        for remark in setup.netlist.remarks
        if remark.lost
    )


def unknowns(setup: Setup) -> tuple[Unchecked, ...]:
    """Parts and nets that cannot be solved with."""
    origins = {part.ref: part.origin for part in setup.netlist.parts}
    return tuple(
        Unchecked(
            subject=each.ref,
            rule="",
            datum=each.datum,
            supply=each.supply,
            location=_location(origins[each.ref]) if each.ref in origins else None,
            touches=touched(setup, each.nets),
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


def touched(setup: Setup, nets: Iterable[str]) -> tuple[str, ...]:
    """Stages that have a terminal on one of the nets, or on a net of the same DC island; ground joins nothing."""
    circuit = setup.circuit
    near = {circuit.node(net) for net in nets if net in circuit.nets} - {0}
    for island in setup.point.plan.islands:
        if near & set(island.nodes):
            near |= set(island.nodes)
    table = circuit.transistors
    on = {name for name, row in zip(table.names, table.nodes.tolist(), strict=True) if near & set(row)}
    return tuple(stage.id for stage in setup.recognition.stages if stage.device in on)


def _location(origin: Origin) -> Location | None:
    return Location(file=origin.file, line=origin.line, sheet=origin.sheet) if origin.file else None
