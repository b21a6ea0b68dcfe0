"""The same quantities at the device terminals, and the hand formulas that belong beside them."""

from __future__ import annotations

from typing import Final

import numpy as np

from checker.arrays import ComplexArray
from checker.measure.bench import Bench
from checker.measure.bias import region_words
from checker.measure.links import (
    Outer,
    current_out,
    cut_input,
    cut_output,
    drive_of,
    outer_of,
    terminal_index,
    terminal_net,
)
from checker.measure.make import figure, first, missing
from checker.measure.registry import quantity
from checker.measure.small_signal import r_e, r_pi
from checker.quantity.figure import Figure
from checker.shape import frozen
from checker.solve.response import Response
from checker.stages.terminals import COMMON, CONTROL, NUMBER

LIKE = {
    "common-base": "common-base",
    "common-emitter": "common-emitter",
    "common-collector": "common-collector",
    "common-gate": "common-base",
    "common-source": "common-emitter",
    "common-drain": "common-collector",
}
"""Configurations by the bipolar one of the same formulas."""
MIDDLE = 1
"""f0 in the three frequencies of the bench's edges."""


def _setup(bench: Bench, stage: str) -> tuple[Outer, Response] | str:
    outer = outer_of(bench, stage)
    return outer if isinstance(outer, str) else (outer, bench.response(bench.edges_hz))


@quantity("terminal_voltage_gain", "", "stage", "v(exit terminal) over v(entry terminal)")
def terminal_voltage_gain(bench: Bench, stage: str) -> Figure:
    """In place, loaded."""
    found = _setup(bench, stage)
    if isinstance(found, str):
        return missing("terminal_voltage_gain", stage, bench.size, "", found)
    outer, response = found
    v = response.voltages(drive_of(bench, outer))
    ratio = v[..., terminal_net(bench.circuit, outer.exit)] / v[..., terminal_net(bench.circuit, outer.entry)]
    return figure("terminal_voltage_gain", stage, ratio, "", f_hz=response.f_hz, formula="v(exit)/v(entry)")


@quantity("terminal_input_impedance_ohm", "ohm", "stage", "v/i into the entry terminal itself")
def terminal_input(bench: Bench, stage: str) -> Figure:
    """Bias and emitter resistors on the net are not in it."""
    found = _setup(bench, stage)
    if isinstance(found, str):
        return missing("terminal_input_impedance_ohm", stage, bench.size, "ohm", found)
    outer, response = found
    s = response.solution(drive_of(bench, outer))
    i = response.current(outer.entry[0], terminal_index(outer.entry[1]), s)
    z = s[..., terminal_net(bench.circuit, outer.entry)] / i
    return figure("terminal_input_impedance_ohm", stage, z, "ohm", f_hz=response.f_hz, formula="v(entry)/i(entry)")


@quantity("terminal_output_impedance_ohm", "ohm", "stage", "of the exit terminal, its net's parts taken away")
def terminal_output(bench: Bench, stage: str) -> Figure:
    """1/(1/Z in place - 1/Z with the device out), source's signal zero."""
    found = _setup(bench, stage)
    if isinstance(found, str):
        return missing("terminal_output_impedance_ohm", stage, bench.size, "ohm", found)
    outer, response = found
    net = terminal_net(bench.circuit, outer.exit)
    whole, without = response.impedance(net), response.removed([outer.exit[0]]).impedance(net)
    difference = 1.0 / whole - 1.0 / without
    z = 1.0 / np.where(np.abs(difference) > 1e-12 / np.abs(whole), difference, np.nan)
    return figure(
        "terminal_output_impedance_ohm", stage, z, "ohm", f_hz=response.f_hz, formula="1/(1/Z - 1/Z without device)"
    )


OPEN_OHM: Final = 1e13
"""More than any part or leakage on a board has."""


@frozen
class Around:
    """What stands around a device at f0, nominal, in ohm, with the device out: at the `emitter`, at the `base`
    (upstream source in place), at the base with the input link open too (`base_alone`), at the exit in place
    (`exit_loaded`) and with the output link open (`exit_alone`); `load`: what the output link feeds."""

    emitter: float
    base: float
    base_alone: float
    exit_alone: float
    exit_loaded: float
    load: float


def around(bench: Bench, outer: Outer) -> Around:
    """Magnitudes from the network with the device taken out."""
    response = bench.nominal_response(bench.edges_hz)
    device = outer.entry[0]
    out = response.removed([device])
    direct = outer.input_link.kind == "direct"
    alone_in = cut_input(response, outer).removed([device]) if not direct else out
    alone_out = cut_output(bench, response, outer).removed([device])
    kind, place = bench.circuit.find_device(device)
    _, base, emitter = bench.circuit.devices[kind].nodes[place, :3].tolist()
    leaving = terminal_net(bench.circuit, outer.exit)
    s = response.solution(drive_of(bench, outer))
    with np.errstate(divide="ignore", invalid="ignore"):
        load = np.abs(s[0, MIDDLE, outer.output_link.stage_node] / _out(bench, response, outer, s))
    entered = outer.entry[1]
    return Around(
        emitter=_size(alone_in if NUMBER[entered] == COMMON else out, emitter),
        base=_size(out, base),
        # On a direct link every part on the net belongs to the driving stage: nothing of the base's own is left.
        base_alone=np.inf if direct else _size(alone_in, base),
        exit_alone=_size(alone_out, leaving),
        exit_loaded=_size(out, leaving),
        load=float(load),
    )


def _out(bench: Bench, response: Response, outer: Outer, s: ComplexArray) -> complex:
    return complex(current_out(bench, response, outer, s)[0, MIDDLE])


def _size(response: Response, node: int) -> float:
    """Magnitude at a node; infinite where no part leads anywhere (what is left is rounding)."""
    size = float(np.abs(response.impedance(node)[0, MIDDLE]))
    return size if size < OPEN_OHM else np.inf


def beside(a: float, b: float) -> float:
    """Two resistances in parallel [ohm]; either may be infinite or 0."""
    if a == 0.0 or b == 0.0:
        return 0.0
    return 1.0 / (1.0 / a + 1.0 / b)


def rule_of_thumb(bench: Bench, stage: str) -> dict[str, Figure]:
    """Hand figures at f0, nominal, by quantity; empty where no formula fits (not active, or another label).

    Common practice, no source: common base gain rc/re', input re' || RE, output RC, current gain rc/RL; common emitter
    gain -rc/(re' + Ze), input (beta + 1)(re' + Ze) || RB, output RC; common collector gain r/(r + re'),
    input (beta + 1)(re' + r) || RB, output (re' + RS/(beta + 1)) || RE. Field-effect transistors: 1/gm for re', and no
    current into the gate.
    """
    outer = outer_of(bench, stage)
    label = LIKE.get(bench.stage(stage).configuration)
    if region_words(bench, stage, 0) != "active" or isinstance(outer, str) or label is None:
        return {}
    a = around(bench, outer)
    if bench.family(stage) != "bipolar":
        return _written(
            stage, *_hands(label, a, 1.0 / _gm(bench, stage), np.inf, ("1/gm", "RD", "rd", "RS", "Zs", "RG"))
        )
    re = first(r_e(bench, stage).values.real)
    beta = first(r_pi(bench, stage).values.real) * _gm(bench, stage)
    return _written(stage, *_hands(label, a, re, beta, ("re'", "RC", "rc", "RE", "Ze", "RB")))


Hand = tuple[str, float, str, str, tuple[tuple[str, float, str], ...]]


def _hands(label: str, a: Around, re: float, beta: float, words: tuple[str, ...]) -> tuple[Hand, ...]:
    """The hand formulas of a label; `re` resistance of the common terminal, `beta` current gain [inf at a gate]."""
    own, big, small, tail, lead_word, _ = words
    numbers = ((small, a.exit_loaded, "ohm"), (own, re, "ohm"))
    if label == "common-base":
        return (
            ("voltage_gain", a.exit_loaded / re, "", f"{small}/{own}", numbers),
            (
                "input_impedance_ohm",
                beside(re, a.emitter),
                "ohm",
                f"{own} || {tail}",
                ((tail, a.emitter, "ohm"), numbers[1]),
            ),
            ("output_impedance_ohm", a.exit_alone, "ohm", big, ()),
            ("current_gain", a.exit_loaded / a.load, "", f"{small}/RL", (("RL", a.load, "ohm"), numbers[0])),
        )
    if label == "common-emitter":
        lead = re + a.emitter
        formula = f"-{small}/({own} + {lead_word})"
        return (
            ("voltage_gain", -a.exit_loaded / lead, "", formula, (*numbers, (lead_word, a.emitter, "ohm"))),
            _control_input(a, beta, lead, words),
            ("output_impedance_ohm", a.exit_alone, "ohm", big, ()),
        )
    r = a.exit_loaded
    back = beside(re + a.base / (beta + 1.0), a.exit_alone)
    formula = f"{own} || {tail}" if np.isinf(beta) else f"({own} + RS/(beta + 1)) || {tail}"
    return (
        ("voltage_gain", r / (r + re), "", f"r/(r + {own})", (("r", r, "ohm"), numbers[1])),
        _control_input(a, beta, re + r, words),
        ("output_impedance_ohm", back, "ohm", formula, () if np.isinf(beta) else (("RS", a.base, "ohm"),)),
    )


def _control_input(a: Around, beta: float, lead: float, words: tuple[str, ...]) -> Hand:
    own, _, _, _, lead_word, divider = words
    if np.isinf(beta):
        return ("input_impedance_ohm", a.base_alone, "ohm", divider, ())
    z = beside((beta + 1.0) * lead, a.base_alone)
    numbers = (("beta", beta, ""), (f"{lead_word} + {own}", lead, "ohm"))
    return ("input_impedance_ohm", z, "ohm", f"(beta + 1)({own} + {lead_word}) || {divider}", numbers)


def _written(stage: str, *hands: Hand) -> dict[str, Figure]:
    return {
        name: figure(
            name, stage, np.array([value]), unit, formula=formula, numbers=numbers, source="common practice, no source"
        )
        for name, value, unit, formula, numbers in hands
        if np.isfinite(value)
    }


def _gm(bench: Bench, stage: str) -> float:
    from checker.measure.small_signal import gm

    return first(gm(bench, stage).values.real)


@quantity(
    "base_ground_loss_db",
    "dB",
    "stage",
    "gain lost because base or gate is not at ground",
)
def base_ground_loss(bench: Bench, stage: str) -> Figure:
    """|v(out)/v(in)| with the base grounded over the same in place; at both band edges and f0.

    From the input reference, so that a source of unknown impedance, taken as a current, hides nothing.
    """
    outer = outer_of(bench, stage)
    if isinstance(outer, str) or LIKE.get(bench.stage(stage).configuration) != "common-base":
        why = outer if isinstance(outer, str) else "not applicable: not a common-base or common-gate stage"
        return missing("base_ground_loss_db", stage, bench.size, "dB", why)
    response = bench.response(bench.edges_hz)
    base = int(bench.circuit.transistors.nodes[bench.stage(stage).index, CONTROL])
    drive, node = drive_of(bench, outer), outer.output_link.stage_node
    into = outer.input_link.stage_node
    held, drawn = response.grounded(base).voltages(drive), response.voltages(drive)
    ratio = held[..., node] / held[..., into] / (drawn[..., node] / drawn[..., into])
    return figure(
        "base_ground_loss_db",
        stage,
        20.0 * np.log10(np.abs(ratio)),
        "dB",
        f_hz=response.f_hz,
        formula="20 log10 |v(out)/v(in), base at signal ground|/|v(out)/v(in)|",
        source="in-place small-signal solution, low-rank change",
    )
