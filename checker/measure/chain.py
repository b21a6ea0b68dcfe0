"""T(f): what a stage delivers over the open-circuit voltage of everything upstream, and what follows from it.

T = v(output reference, loaded in place) / e, with e the voltage before the cut input link. A link element belongs to
the stage it feeds; the last one to the stage that drives the port, whose T ends at the port.
"""

from __future__ import annotations

import numpy as np

from checker.arrays import ComplexArray
from checker.measure.bench import Bench
from checker.measure.links import Outer, cut_input, drive_of
from checker.solve.frequencies import angular
from checker.solve.response import Response


def end_node(bench: Bench, outer: Outer) -> int:
    """The net where T ends: the output reference, or the port's plane for the last stage."""
    link = outer.output_link
    ports = {port.name: port for port in bench.ports}
    if link.other in ports:
        return ports[link.other].node
    return link.stage_node


def source_voltage(bench: Bench, response: Response, outer: Outer) -> ComplexArray:
    """e(f), (S, F) [V]: the voltage before the input link with that link cut, for the unit drive."""
    drive = drive_of(bench, outer)
    link = outer.input_link
    if link.kind == "port":
        port = bench.port(link.other)
        if port.emf >= 0:
            return np.ones(response.z.shape[:2], dtype=complex)
        return response.voltages(drive)[..., port.node]
    cut = cut_input(response, outer)
    if link.kind == "winding":
        return _induced(cut, outer, cut.solution(drive))
    return cut.voltages(drive)[..., link.far_node]


def _induced(cut: Response, outer: Outer, solution: ComplexArray) -> ComplexArray:
    """Open-circuit voltage of a winding over ground, (S, F) [V]: its far end's, and s M i of the windings beside it."""
    c, link = cut.circuit, outer.input_link
    own = c.inductors.names.index(link.part)
    total = np.zeros(solution.shape[:2], dtype=complex)
    for j, pair in enumerate(c.couplings.pair.tolist()):
        if own in pair:
            other = pair[1 - pair.index(own)]
            mutual = c.couplings.k[:, j] * np.sqrt(c.inductors.value[:, own] * c.inductors.value[:, other])
            total = total + mutual[:, None] * cut.current(c.inductors.names[other], 0, solution)
    way = 1.0 if int(c.inductors.nodes[own, 0]) == link.stage_node else -1.0
    return np.asarray(way * angular(cut.f_hz) * total + solution[..., link.far_node])


def transfer(bench: Bench, response: Response, outer: Outer) -> ComplexArray:
    """T(f) in place, complex128 (S, F)."""
    out = response.voltages(drive_of(bench, outer))[..., end_node(bench, outer)]
    return out / source_voltage(bench, response, outer)
