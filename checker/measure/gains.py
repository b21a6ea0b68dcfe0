"""Gains and impedances of stages and groups at their links, as they stand loaded, over scenarios at the band's edges
and f0 (axis 1: low edge, f0, high edge)."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np

from checker.arrays import ComplexArray, FloatArray
from checker.measure.bench import Bench
from checker.measure.links import Outer, current_in, current_out, cut_output, drive_of, outer_of
from checker.measure.make import db, figure, missing
from checker.measure.registry import Subject, quantity
from checker.quantity.figure import Figure
from checker.solve.response import Response

METHOD = "in-place small-signal solution at the certified operating point"
Compute = Callable[[Bench, Response, Outer], ComplexArray | FloatArray]


def input_impedance(bench: Bench, response: Response, outer: Outer) -> ComplexArray:
    """v/i at the input reference, driven from the port."""
    solution = response.solution(drive_of(bench, outer))
    return solution[..., outer.input_link.stage_node] / current_in(bench, response, outer, solution)


def output_impedance(bench: Bench, response: Response, outer: Outer) -> ComplexArray:
    """Looking back at the output reference with the output link open and the source's signal zero."""
    return cut_output(bench, response, outer).impedance(outer.output_link.stage_node)


def voltage_gain(bench: Bench, response: Response, outer: Outer) -> ComplexArray:
    """v(output reference) over v(input reference)."""
    v = response.voltages(drive_of(bench, outer))
    return v[..., outer.output_link.stage_node] / v[..., outer.input_link.stage_node]


def current_gain(bench: Bench, response: Response, outer: Outer) -> ComplexArray:
    """Output-link current over input-link current."""
    solution = response.solution(drive_of(bench, outer))
    return current_out(bench, response, outer, solution) / current_in(bench, response, outer, solution)


def power_gain_db(bench: Bench, response: Response, outer: Outer) -> FloatArray:
    """10 log10 of Re(v i*) out over in."""
    s = response.solution(drive_of(bench, outer))
    into = np.real(s[..., outer.input_link.stage_node] * np.conj(current_in(bench, response, outer, s)))
    out = np.real(s[..., outer.output_link.stage_node] * np.conj(current_out(bench, response, outer, s)))
    with np.errstate(invalid="ignore", divide="ignore"):
        ratio = out / into
        return np.asarray(10.0 * np.log10(np.where(ratio > 0.0, ratio, np.nan)))


def voltage_gain_db(bench: Bench, response: Response, outer: Outer) -> FloatArray:
    """20 log10 of the voltage gain."""
    return db(voltage_gain(bench, response, outer))


@quantity("loop_impedance_ohm", "ohm", "stage", "driving-point impedance in place, where a loop runs through the link")
def loop_impedance(bench: Bench, ident: str) -> Figure:
    """In place at the output reference, if what lies beyond the open output link still reaches back to it.

    The output impedance with the link open then leaves a loop broken, and this figure stands beside it.
    """
    outer = outer_of(bench, ident)
    if isinstance(outer, str):
        return missing("loop_impedance_ohm", ident, bench.size, "ohm", outer)
    f = bench.edges_hz
    response = bench.response(f)
    here = outer.output_link.stage_node
    cut = cut_output(bench, response, outer)
    far = _beyond(bench, outer)
    back = max((_coupling(cut, here, node) for node in far), default=0.0)
    if back < LOOP:
        reason = "not applicable: no loop runs through the output link"
        return missing("loop_impedance_ohm", ident, bench.size, "ohm", reason)
    return figure(
        "loop_impedance_ohm",
        ident,
        response.impedance(here),
        "ohm",
        f_hz=f,
        formula="v/i at the output reference, nothing opened",
        source=METHOD,
    )


LOOP = 0.05
"""Share of a current beyond the open link that reaches back to the output reference, from which a loop is said to run:
a shared supply filter couples less."""


def _beyond(bench: Bench, outer: Outer) -> tuple[int, ...]:
    """Net on the far side of the output link; of a direct link the exit of the receiving stage."""
    link = outer.output_link
    if link.kind != "direct":
        return () if link.kind == "port" else (link.far_node,)
    receiver = outer_of(bench, link.part)
    return () if isinstance(receiver, str) else (receiver.output_link.stage_node,)


def _coupling(response: Response, to: int, of: int) -> float:
    """|transfer impedance| over the geometric mean of both driving-point impedances, nominal, at f0."""
    z = abs(response.transfer(to, of)[0, 1])
    own = abs(response.impedance(to)[0, 1] * response.impedance(of)[0, 1]) ** 0.5
    return float(z / own) if own > 0.0 and np.isfinite(z) else 0.0


QUANTITIES: tuple[tuple[str, str, str, Compute, str], ...] = (
    ("input_impedance_ohm", "ohm", "v/i at the input reference", input_impedance, "Zin = v(in)/i(input link)"),
    ("output_impedance_ohm", "ohm", "looking back, output link open", output_impedance, "Zout = v(out)/i, link open"),
    ("voltage_gain", "", "v(out) over v(in), loaded", voltage_gain, "Av = v(out)/v(in)"),
    ("voltage_gain_db", "dB", "voltage gain", voltage_gain_db, "20 log10 |v(out)/v(in)|"),
    ("current_gain", "", "output-link over input-link current", current_gain, "Ai = i(out)/i(in)"),
    ("power_gain_db", "dB", "power out over power in", power_gain_db, "10 log10 Re(v i*) out/in"),
)


def _register(name: str, unit: str, meaning: str, compute: Compute, formula: str, subject: Subject) -> None:
    @quantity(name, unit, subject, meaning)
    def measure(bench: Bench, ident: str) -> Figure:
        outer = outer_of(bench, ident, group=subject == "group")
        if isinstance(outer, str):
            return missing(name, ident, bench.size, unit, outer)
        f = bench.edges_hz
        values = compute(bench, bench.response(f), outer)
        reason = "" if np.isfinite(values[0, 1]) else "not defined here: no load current, or an unbiased device"
        return figure(name, ident, values, unit, f_hz=f, formula=formula, source=METHOD, reason=reason)


for _name, _unit, _meaning, _compute, _formula in QUANTITIES:
    _register(_name, _unit, _meaning, _compute, _formula, "stage")
    _register(_name, _unit, _meaning, _compute, _formula, "group")
