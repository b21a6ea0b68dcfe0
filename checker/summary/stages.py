"""Stages and groups as the report lists them."""

from __future__ import annotations

import math
from typing import Literal

import numpy as np

from checker.circuit.types import PartFact
from checker.quantity.figure import Figure
from checker.record import (
    Bias,
    CardUsed,
    Complex,
    Connection,
    FetBias,
    Group,
    Location,
    SmallSignal,
    Specs,
    Stage,
    StageLink,
    TerminalFigures,
    Thumb,
)
from checker.setup import Setup
from checker.stages import types as found
from checker.stages.region import is_reversed
from checker.stages.terminals import NUMBER
from checker.summary.ledger import LATER, MIDDLE, Ledger, in_words
from checker.summary.spread import spans
from checker.words import Terminal

AGREES = 0.15
"""Hand formula and solver count as agreeing within this: what a hand calculation leaves out on purpose."""
COMPARED_AT_TERMINALS = ("voltage_gain",)


def stage_records(setup: Setup, ledger: Ledger) -> tuple[Stage, ...]:
    """All stages, and every transistor that could not be solved as an unclassified one."""
    solved = [_stage(setup, ledger, stage) for stage in setup.recognition.stages]
    known = {stage.device for stage in setup.recognition.stages}
    lost = [
        _lost(setup, ledger, ref, fact)
        for ref, fact in setup.circuit.parts.items()
        if fact.kind in ("bipolar", "fet") and ref not in known
    ]
    return tuple(solved + lost)


def _lost(setup: Setup, ledger: Ledger, ref: str, fact: PartFact) -> Stage:
    datum = next((u.datum for u in setup.circuit.unknowns if u.ref == ref), "its model")
    reason = f"not solved: {datum}"
    ledger.missing(reason, "stages", ref)
    return Stage(
        id=ref,
        device=ref,
        configuration="unclassified",
        role="bias",
        confidence=0.0,
        reason=reason,
        location=_location(fact),
    )


def _location(fact: PartFact | None) -> Location | None:
    if fact is None or not fact.origin.file:
        return None
    return Location(file=fact.origin.file, line=fact.origin.line, sheet=fact.origin.sheet)


def _stage(setup: Setup, ledger: Ledger, stage: found.Stage) -> Stage:
    fact = setup.circuit.parts.get(stage.device)
    nets = setup.circuit.nets
    return Stage(
        id=stage.id,
        device=stage.device,
        configuration=stage.configuration,
        role=stage.role,
        confidence=stage.confidence,
        reason=stage.reason,
        groups=stage.groups,
        entry=_connection(setup, stage.device, stage.entry),
        exit=_connection(setup, stage.device, stage.exit),
        input_ref=nets[stage.input_link.stage_node] if stage.input_link else None,
        output_ref=nets[stage.output_link.stage_node] if stage.output_link else None,
        links=_link(setup, "input", stage.input_link) + _link(setup, "output", stage.output_link),
        location=_location(fact),
        card=_card(fact),
        bias=_bias(setup, ledger, stage),
        small_signal=_small(ledger, stage),
        specs=_specs(ledger, "stages", stage.id),
        terminal=_terminal(ledger, stage.id),
        rule_of_thumb=_thumbs(ledger, stage),
        spread=spans(setup, ledger, stage),
        evidence=(*stage.evidence, *_loop(ledger, stage)),
    )


def _loop(ledger: Ledger, stage: found.Stage) -> tuple[str, ...]:
    """Where the output impedance was taken with a loop broken: the figure in place beside it."""
    if stage.output_link is None:
        return ()
    figure = ledger.board.ask("loop_impedance_ohm", stage.id)
    if figure.f_hz is None or not np.isfinite(figure.values[0, MIDDLE]):
        return ()
    shown = in_words(complex(figure.values[0, MIDDLE]), "ohm")
    return (f"loop broken for the output impedance; driving-point impedance in place {shown}",)


def _link(setup: Setup, side: Literal["input", "output"], link: found.Link | None) -> tuple[StageLink, ...]:
    if link is None:
        return ()
    nets = setup.circuit.nets
    return (
        StageLink(
            side=side,
            kind=link.kind,
            part=link.part or None,
            net=nets[link.stage_node],
            far_net=nets[link.far_node],
            other=link.other or None,
        ),
    )


def _connection(setup: Setup, device: str, terminal: Terminal | None) -> Connection | None:
    if terminal is None:
        return None
    kind, place = setup.circuit.find_device(device)
    row = setup.circuit.devices[kind].nodes[place]
    return Connection(terminal=terminal, net=setup.circuit.nets[int(row[NUMBER[terminal]])])


def _card(fact: PartFact | None) -> CardUsed | None:
    if fact is None:
        return None
    if fact.card is None:
        return CardUsed(name=fact.model_source, source="the netlist", assumed=False) if fact.model_source else None
    return CardUsed(name=fact.card.name, source=fact.model_source or fact.card.source, assumed=fact.card.assumed)


def _bias(setup: Setup, ledger: Ledger, stage: found.Stage) -> Bias | FetBias | None:
    if not math.isfinite(setup.point.transistor["i_out_a"][0, stage.index]):
        ledger.missing(stage.reason or "no certified operating point", "stages", stage.id, "bias")
        return None
    return _own_bias(ledger, stage)


def _own_bias(ledger: Ledger, stage: found.Stage) -> Bias | FetBias:
    terms = ledger.board.terms(stage.id)
    keys = (terms.current, terms.bias, terms.across, terms.drive, "headroom_v", "power_w", "tj_c")
    values = {key: ledger.real_at(key, stage.id, "stages", stage.id, "bias", key) for key in keys}
    polarity = _sign(ledger, stage)
    for key in (terms.current, terms.bias):
        current = values[key]
        values[key] = None if current is None else polarity * current
    region = ledger.board.region_words(stage.id) or None
    if terms.current == "ic_a":
        return Bias(region=region, **values)
    turned = bool(is_reversed(ledger.board.bench.point, stage.device)[0])
    return FetBias(region=region, reversed=turned, **values)


def _sign(ledger: Ledger, stage: found.Stage) -> float:
    return float(ledger.board.circuit.transistors.polarity[stage.index])


def _small(ledger: Ledger, stage: found.Stage) -> SmallSignal:
    keys = ("gm_s", "re_ohm", "rpi_ohm", "ro_ohm", "ft_hz")
    return SmallSignal(**{key: ledger.real_at(key, stage.id, "stages", stage.id, "small_signal", key) for key in keys})


def _specs(ledger: Ledger, kind: str, subject: str) -> Specs:
    path = (kind, subject, "specs")
    for key in ("clip_up_v", "clip_down_v", "swing_vpp", "noise_figure_db"):
        ledger.missing(LATER, *path, key)

    def real(key: str) -> float | None:
        return ledger.real_at(key, subject, *path, key)

    def both(key: str) -> Complex | None:
        return ledger.complex_at(key, subject, *path, key)

    return Specs(
        voltage_gain=both("voltage_gain"),
        voltage_gain_db=real("voltage_gain_db"),
        current_gain=both("current_gain"),
        power_gain_db=real("power_gain_db"),
        input_impedance_ohm=both("input_impedance_ohm"),
        output_impedance_ohm=both("output_impedance_ohm"),
        low_corner_hz=real("low_corner_hz"),
        high_corner_hz=real("high_corner_hz"),
        droop_low_db=real("droop_low_db"),
        droop_high_db=real("droop_high_db"),
    )


def _terminal(ledger: Ledger, subject: str) -> TerminalFigures:
    return TerminalFigures(
        **{
            key: ledger.complex_at(f"terminal_{key}", subject, "stages", subject, "terminal", key)
            for key in ("voltage_gain", "input_impedance_ohm", "output_impedance_ohm")
        }
    )


def _thumbs(ledger: Ledger, stage: found.Stage) -> dict[str, Thumb]:
    out = {}
    for key, hand in ledger.board.rule_of_thumb(stage.id).items():
        name = f"terminal_{key}" if key in COMPARED_AT_TERMINALS else key
        out[key] = _thumb(ledger, stage, key, hand, ledger.board.ask(name, stage.id))
    return out


def _thumb(ledger: Ledger, stage: found.Stage, key: str, hand: Figure, exact: Figure) -> Thumb:
    value = abs(float(hand.values[0, 0]))
    true = abs(complex(exact.values[0, MIDDLE]))
    ledger.note(hand, complex(hand.values[0, 0]))
    if not math.isfinite(true) or true == 0.0:
        ledger.missing("the exact figure is not available", "stages", stage.id, "rule_of_thumb", key)
        return Thumb(value=value, exact=None, deviation=None, agrees=None, formula=hand.working.formula)
    deviation = (value - true) / true
    agrees = abs(deviation) <= AGREES
    note = "" if agrees else _why_not(ledger, stage, exact)
    return Thumb(value=value, exact=true, deviation=deviation, agrees=agrees, formula=hand.working.formula, note=note)


def _why_not(ledger: Ledger, stage: found.Stage, exact: Figure) -> str:
    """What the hand formula leaves out and the solver does not."""
    f0 = ledger.board.bench.f0_hz
    ft = ledger.board.ask("ft_hz", stage.id).values[0, 0]
    if math.isfinite(ft) and f0 > ft / 50.0:
        return "the formula knows no charges; they count at this frequency"
    value = complex(exact.values[0, MIDDLE])
    if abs(value.imag) > 0.3 * abs(value):
        return "reactive at this frequency; the formula is for mid-band"
    return "the formula leaves out ro, lead resistances and parts beyond the nearest ones"


def group_records(setup: Setup, ledger: Ledger) -> tuple[Group, ...]:
    """All groups."""
    out = []
    for group in setup.recognition.groups:
        ledger.missing("terminal figures are given for single devices", "groups", group.id, "terminal")
        out.append(
            Group(
                id=group.id,
                configuration=group.configuration,
                devices=group.devices,
                entry=_outer(setup, group.entry),
                exit=_outer(setup, group.exit),
                specs=_specs(ledger, "groups", group.id),
                evidence=group.evidence,
            )
        )
    return tuple(out)


def _outer(setup: Setup, where: tuple[str, Terminal] | None) -> Connection | None:
    if where is None:
        return None
    connection = _connection(setup, *where)
    return None if connection is None else Connection(terminal=connection.terminal, net=connection.net, device=where[0])
