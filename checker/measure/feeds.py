"""What may feed a terminal from outside what the netlist shows: connectors and parts without a model."""

from __future__ import annotations

from checker.measure.bench import Bench
from checker.stages.terminals import COMMON, CONTROL, OUTPUT, WORDS
from checker.trouble import CannotTell


def reach(bench: Bench, stage: str, terminal: int = CONTROL) -> set[int]:
    """Nets that conducting parts other than the stage's own junctions join to a terminal; known nets end the walk."""
    c, known = bench.circuit, bench.point.plan.is_known
    index = bench.stage(stage).index
    joins = [row for t in (c.resistors, c.inductors, c.voltages, c.diodes) for row in t.nodes.tolist()]
    joins += [row for kind, row in _linked(bench) for row in ([row] if kind != "line" else [row[::2], row[1::2]])]
    others = c.transistors
    for j, (kind, row) in enumerate(zip(others.families, others.nodes.tolist(), strict=True)):
        # The gate of a MOSFET leads nowhere.
        joins += [row[::2] if kind == "mosfet" else row] if j != index else []
    reached = {int(others.nodes[index, terminal])}
    growing = True
    while growing:
        free = {node for node in reached if not known[node]}
        more = {x for row in joins if free & set(row) for x in row} - reached
        reached |= more
        growing = bool(more)
    return reached


def require_supplied(bench: Bench, stage: str) -> None:
    """Raises CannotTell for a device whose output or common terminal nothing on the board feeds, while a connector or a
    part without a model may: what flows is decided there."""
    for terminal in (OUTPUT, COMMON):
        reached = reach(bench, stage, terminal)
        if not any(bench.point.plan.is_known[node] for node in reached) and not current_fed(bench, reached):
            require_not_fed(bench, stage, reached, terminal)


def require_not_fed(bench: Bench, stage: str, reached: set[int], terminal: int = CONTROL) -> None:
    """Raises CannotTell where a connector or a part without a model touches one of these nets, and so may feed it."""
    word = WORDS[bench.family(stage)][terminal]
    nets = {bench.circuit.nets[node] for node in reached if not bench.point.plan.is_known[node]}
    for unknown in bench.circuit.unknowns:
        if nets & set(unknown.nets):
            raise CannotTell(f"what {unknown.ref} does at pin {unknown.pin} for the {word} of {stage}", unknown.supply)
    driven = {port.net for port in bench.ports if port.declared}
    for ref, fact in bench.facts.items():
        if fact.kind not in ("connector", "unmodelled"):
            continue
        for pin, net in fact.terminals.items():
            if net in nets - driven:
                supply = f'[[port]] part = "{ref}", pin = "{pin}", or a [[state]] that drives it'
                raise CannotTell(f"what {ref} pin {pin} feeds to the {word} of {stage}", supply)


def current_fed(bench: Bench, reached: set[int]) -> bool:
    """Whether a current source ends on one of these nets."""
    table = bench.circuit.four_poles
    driven = [row[:2] for kind, row in zip(table.kinds, table.nodes.tolist(), strict=True) if kind in ("F", "G")]
    return any(node in reached for row in (*bench.circuit.currents.nodes.tolist(), *driven) for node in row)


def _linked(bench: Bench) -> list[tuple[str, list[int]]]:
    """Nets between which controlled voltage sources and lines conduct."""
    table = bench.circuit.four_poles
    pairs = zip(table.kinds, table.nodes.tolist(), strict=True)
    return [(kind, row if kind == "line" else row[:2]) for kind, row in pairs if kind in ("E", "H", "line")]
