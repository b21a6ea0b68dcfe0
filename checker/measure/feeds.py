"""What may feed a base from outside what the netlist shows: connectors and parts without a model."""

from __future__ import annotations

from checker.measure.bench import Bench
from checker.stages.terminals import CONTROL, WORDS
from checker.trouble import CannotTell


def base_reach(bench: Bench, stage: str) -> set[int]:
    """Nets that conducting parts other than the stage's own junctions join to its base; known nets end the walk."""
    c, known = bench.circuit, bench.point.plan.is_known
    index = bench.stage(stage).index
    joins = [row for t in (c.resistors, c.inductors, c.voltages, c.diodes) for row in t.nodes.tolist()]
    others = c.transistors
    for j, (kind, row) in enumerate(zip(others.families, others.nodes.tolist(), strict=True)):
        # The gate of a MOSFET leads nowhere.
        joins += [row[::2] if kind == "mosfet" else row] if j != index else []
    reached = {int(others.nodes[index, CONTROL])}
    growing = True
    while growing:
        free = {node for node in reached if not known[node]}
        more = {x for row in joins if free & set(row) for x in row} - reached
        reached |= more
        growing = bool(more)
    return reached


def require_not_fed(bench: Bench, stage: str, reached: set[int]) -> None:
    """Raises CannotTell where a connector or a part without a model touches one of these nets, and so may feed it."""
    base = WORDS[bench.family(stage)][CONTROL]
    nets = {bench.circuit.nets[node] for node in reached if not bench.point.plan.is_known[node]}
    for unknown in bench.circuit.unknowns:
        if nets & set(unknown.nets):
            raise CannotTell(f"what {unknown.ref} does at pin {unknown.pin} for the {base} of {stage}", unknown.supply)
    driven = {port.net for port in bench.ports if port.declared}
    for ref, fact in bench.facts.items():
        if fact.kind not in ("connector", "unmodelled"):
            continue
        for pin, net in fact.terminals.items():
            if net in nets - driven:
                supply = f'[[port]] part = "{ref}", pin = "{pin}", or a [[state]] that drives it'
                raise CannotTell(f"what {ref} pin {pin} feeds to the {base} of {stage}", supply)
