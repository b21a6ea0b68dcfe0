"""Fingerprints: a finding known again after renumbering, re-valuing and moving, by the structure around its
part.

Only kinds, pins, rails by their volts and port names count, two steps out; no value, no reference, no net
name. Of equal findings the second and later carry their number in the order of their references.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from checker.circuit.types import Circuit, Port
from checker.judge.structure import Drawing, digest, labels
from checker.judge.verdict import Verdict
from checker.record.order import natural

STEPS = 2
_MOST_PINS = 4


def fingerprints(verdicts: Sequence[Verdict], circuit: Circuit) -> tuple[str, ...]:
    """One a verdict, in their order, all different."""
    names = _labels(circuit)
    bare = [digest(_key(verdict, names)) for verdict in verdicts]
    order = sorted(range(len(bare)), key=lambda i: tuple(map(natural, verdicts[i].evidence.subject)))
    made = [""] * len(bare)
    counts: dict[str, int] = {}
    for index in order:
        counts[bare[index]] = number = counts.get(bare[index], 0) + 1
        made[index] = bare[index] if number == 1 else f"{bare[index]}-{number}"
    return tuple(made)


def _key(verdict: Verdict, names: Mapping[str, str]) -> list[str]:
    """Rule, quantity, the first subject and the ports among the others: further parts may depend on values."""
    evidence = verdict.evidence
    first, *others = evidence.subject
    ends = [names[name] for name in others if names.get(name, "").startswith("port")]
    return [verdict.rule.id, evidence.check.figure.quantity, _label(first, names), *ends]


def _label(subject: str, names: Mapping[str, str]) -> str:
    """Of a part or port; the unit of a dual goes by the whole part and its own letter."""
    whole, _, unit = subject.rpartition(".")
    return names.get(subject) or (f"{names[whole]}.{unit}" if whole in names else subject)


def _labels(circuit: Circuit) -> dict[str, str]:
    """Label of each part and port. A declared port is called what the intent file calls it, any other, whose name
    may hold a reference, by the part or net that it was taken from.
    """
    polarity = dict(zip(circuit.transistors.names, circuit.transistors.polarity.tolist(), strict=True))
    on: dict[str, list[str]] = {}
    for port in circuit.ports:
        on.setdefault(port.net, []).append(_public(port))
    drawing = Drawing(
        kinds={ref: f"{fact.kind}{polarity.get(ref, '')}" for ref, fact in circuit.parts.items()},
        pins={ref: fact.terminals for ref, fact in circuit.parts.items()},
        known={rail.net: f"rail {rail.volts:g}" for rail in circuit.rails} | {circuit.nets[0]: "ground"},
        ports={net: tuple(names) for net, names in on.items()},
    )
    parts = labels(drawing, STEPS, most_pins=_MOST_PINS)
    return parts | {port.name: f"port {parts.get(port.part, '')}{_public(port)}" for port in circuit.ports}


def _public(port: Port) -> str:
    """What a port is called where that holds no reference."""
    return port.name if port.declared or not port.part else ""
