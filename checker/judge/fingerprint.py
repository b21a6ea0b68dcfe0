"""Fingerprints: a finding known again after renumbering, re-valuing and moving, by the structure around its
part.

Only kinds, pins, rails by their volts and port names count, two steps out; no value, no reference, no net
name. Of equal findings the second and later carry their number in the order of their references.
"""

from __future__ import annotations

import hashlib
from collections.abc import Iterable, Mapping, Sequence

from checker.circuit.types import Circuit, PartFact
from checker.judge.verdict import Verdict
from checker.record.order import natural

STEPS = 2
_SYMMETRIC = frozenset({"resistor", "capacitor", "inductor", "coil"})
_MOST_PINS = 4
"""Larger parts (connectors, circuits) count by kind alone: all that hangs on them is not the finding's
business.
"""
_DIGITS = 16


def fingerprints(verdicts: Sequence[Verdict], circuit: Circuit) -> tuple[str, ...]:
    """One a verdict, in their order, all different."""
    labels = _labels(circuit)
    bare = [_hash(_key(verdict, labels)) for verdict in verdicts]
    order = sorted(range(len(bare)), key=lambda i: tuple(map(natural, verdicts[i].evidence.subject)))
    made = [""] * len(bare)
    counts: dict[str, int] = {}
    for index in order:
        counts[bare[index]] = number = counts.get(bare[index], 0) + 1
        made[index] = bare[index] if number == 1 else f"{bare[index]}-{number}"
    return tuple(made)


def _key(verdict: Verdict, labels: Mapping[str, str]) -> list[str]:
    """Rule, quantity and the first subject; ports stand for themselves. Later subjects may depend on
    values.
    """
    evidence = verdict.evidence
    first, *others = evidence.subject
    named = [labels.get(first, first), *(name for name in others if name not in labels)]
    return [verdict.rule.id, evidence.check.figure.quantity, *named]


def _labels(circuit: Circuit) -> dict[str, str]:
    """Structure label of each part, by refinement: a part knows its nets, a net its parts, `STEPS` times."""
    fixed, free = _nets(circuit)
    polarity = dict(zip(circuit.transistors.names, circuit.transistors.polarity.tolist(), strict=True))
    parts = {ref: f"{fact.kind}{polarity.get(ref, '')}" for ref, fact in circuit.parts.items()}
    small = {ref: fact for ref, fact in circuit.parts.items() if len(fact.terminals) <= _MOST_PINS}
    for _ in range(STEPS):
        touching: dict[str, list[str]] = {net: [] for net in free}
        for ref, fact in circuit.parts.items():
            for pin, net in fact.terminals.items():
                if net in touching:
                    touching[net].append(f"{_pin(fact, pin)}:{parts[ref]}")
        nets = fixed | {net: _hash([free[net], *sorted(around)]) for net, around in touching.items()}
        parts |= {ref: _hash([parts[ref], *_around(fact, nets)]) for ref, fact in small.items()}
    return parts


def _nets(circuit: Circuit) -> tuple[dict[str, str], dict[str, str]]:
    """Nets of known voltage, which stand for themselves, and all others with the ports on them."""
    fixed = {rail.net: f"rail {rail.volts:g}" for rail in circuit.rails} | {circuit.nets[0]: "ground"}
    ports: dict[str, list[str]] = {}
    for port in circuit.ports:
        ports.setdefault(port.net, []).append(port.name)
    used = {net for fact in circuit.parts.values() for net in fact.terminals.values()}
    return fixed, {net: "port ".join(["", *sorted(ports.get(net, ()))]) for net in used - fixed.keys()}


def _around(fact: PartFact, nets: Mapping[str, str]) -> list[str]:
    return sorted(f"{_pin(fact, pin)}:{nets[net]}" for pin, net in fact.terminals.items())


def _pin(fact: PartFact, pin: str) -> str:
    return "" if fact.kind in _SYMMETRIC else pin


def _hash(words: Iterable[str]) -> str:
    return hashlib.sha256("\0".join(words).encode("utf-8", "surrogatepass")).hexdigest()[:_DIGITS]
