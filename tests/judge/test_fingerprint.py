"""Fingerprints hold through renumbering, revaluing and moving; they tell structures apart."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from checker.circuit.types import Circuit, PartFact, Port, Rail
from checker.judge.fingerprint import fingerprints
from checker.judge.verdict import Verdict
from tests.judge.samples import verdict
from tests.rules.fake import fact, figure, small_circuit


def board(names: dict[str, str] | None = None, **changed: PartFact) -> Circuit:
    """A stage with its divider on 12 V and a port at its input; `names` renames parts."""
    renamed = names or {}
    facts = {
        "Q1": fact("Q1", "bipolar", C="c", B="b", E="e"),
        "R1": fact("R1", "resistor", **{"1": "vcc", "2": "b"}),
        "R2": fact("R2", "resistor", **{"1": "b", "2": "0"}),
        "R3": fact("R3", "resistor", **{"1": "vcc", "2": "c"}),
        "R4": fact("R4", "resistor", **{"1": "e", "2": "0"}),
        "C1": fact("C1", "capacitor", **{"1": "b", "2": "in"}),
        **changed,
    }
    bare = small_circuit()
    devices = tuple(renamed.get(ref, ref) for ref, each in facts.items() if each.kind == "bipolar")
    return replace(
        bare,
        devices={
            "bipolar": replace(
                bare.bipolars,
                names=devices,
                polarity=np.ones(len(devices)),
                nodes=np.zeros((len(devices), 4), dtype=np.int64),
                rth_kpw=np.full(len(devices), np.nan),
            )
        },
        parts={renamed.get(ref, ref): each for ref, each in facts.items()},
        rails=(Rail(net="vcc", volts=12.0, source="intent", element=0),),
        ports=(Port(name="antenna", net="in", node=4, role="input", reference_ohm=50.0),),
    )


def mark(circuit: Circuit, each: Verdict | None = None) -> str:
    """Of one verdict."""
    return fingerprints([each or verdict()], circuit)[0]


def test_references_lines_and_order_do_not_matter() -> None:
    circuit = board()
    renamed = board({"Q1": "Q7", "R1": "R91", "C1": "C44"})
    turned = replace(renamed, parts=dict(reversed(renamed.parts.items())))
    assert mark(circuit) == mark(turned, verdict(subject=("Q7",)))


def test_the_sense_of_a_resistor_does_not_matter() -> None:
    assert mark(board()) == mark(board(R4=fact("R4", "resistor", **{"1": "0", "2": "e"})))


def test_net_names_do_not_matter_unless_known() -> None:
    other = board(
        Q1=fact("Q1", "bipolar", C="Net-7", B="b", E="e"), R3=fact("R3", "resistor", **{"1": "vcc", "2": "Net-7"})
    )
    assert mark(board()) == mark(other)


def test_structure_rule_quantity_rail_and_port_do_matter() -> None:
    circuit = board()
    marks = {
        mark(circuit),
        mark(circuit, verdict("another-rule")),
        mark(circuit, verdict(judged=figure([2.0] * 3, quantity="ic_a"))),
        mark(circuit, verdict(subject=("C1",))),
        mark(board(R4=fact("R4", "inductor", **{"1": "e", "2": "0"}))),
        mark(board(Q1=fact("Q1", "bipolar", C="e", B="b", E="c"))),
        mark(replace(circuit, rails=(Rail(net="vcc", volts=9.0, source="intent", element=0),))),
        mark(replace(circuit, ports=(replace(circuit.ports[0], name="line"),))),
    }
    assert len(marks) == 8


def test_what_else_hangs_on_a_supply_does_not_matter() -> None:
    more = board(R9=fact("R9", "resistor", **{"1": "vcc", "2": "0"}), J1=fact("J1", "connector", **{"1": "vcc"}))
    assert mark(board()) == mark(more)


def test_a_later_subject_that_values_choose_does_not_matter() -> None:
    circuit = board()
    assert mark(circuit, verdict(subject=("Q1", "R1"))) == mark(circuit, verdict(subject=("Q1", "R2")))


def test_two_ports_are_told_apart_though_they_are_no_parts() -> None:
    circuit = board()
    others = [
        Port(name=name, net="c", node=3, role="output", reference_ohm=None, declared=True) for name in ("IF", "monitor")
    ]
    circuit = replace(circuit, ports=(*circuit.ports, *others))
    pairs = [("antenna", "IF"), ("antenna", "monitor")]
    assert len({mark(circuit, verdict(subject=pair)) for pair in pairs}) == 2


def test_equal_findings_are_numbered_by_reference() -> None:
    circuit = board(Q2=fact("Q2", "bipolar", C="c", B="b", E="e"), Q10=fact("Q10", "bipolar", C="c", B="b", E="e"))
    made = fingerprints([verdict(subject=(ref,)) for ref in ("Q10", "Q1", "Q2")], circuit)
    bare = made[1]
    assert made == (f"{bare}-3", bare, f"{bare}-2")
