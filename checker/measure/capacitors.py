"""What each capacitor of the signal path costs at the band's edges."""

from __future__ import annotations

from typing import Literal

import numpy as np

from checker.measure.bench import Bench
from checker.measure.chain import end_node, transfer
from checker.measure.links import Outer, drive_of, outer_of, terminal_net
from checker.measure.make import figure, missing
from checker.measure.registry import quantity
from checker.quantity.figure import Figure
from checker.shape import frozen
from checker.solve.response import Response


@frozen
class CapacitorUse:
    """A capacitor that the signal needs: in its way (`coupling`) or holding a terminal (`bypass`) of a stage."""

    part: str
    use: Literal["coupling", "bypass"]
    stage: str


def capacitor_uses(bench: Bench) -> tuple[CapacitorUse, ...]:
    """Every link capacitor, and every capacitor from a stage's held terminal to signal ground; sorted by part."""
    found: dict[str, CapacitorUse] = {}
    for stage in bench.recognition.stages:
        outer = outer_of(bench, stage.id)
        if isinstance(outer, str):
            continue
        for link, feeds in ((outer.input_link, True), (outer.output_link, False)):
            last = link.other in {port.name for port in bench.ports}
            if link.kind == "capacitor" and (feeds or last):
                found.setdefault(link.part, CapacitorUse(part=link.part, use="coupling", stage=stage.id))
        for part in _holding(bench, outer):
            found.setdefault(part, CapacitorUse(part=part, use="bypass", stage=stage.id))
    return tuple(sorted(found.values(), key=lambda use: use.part))


def _holding(bench: Bench, outer: Outer) -> tuple[str, ...]:
    """Capacitors to signal ground from the terminals that are neither entry nor exit, one resistor away at most."""
    c = bench.circuit
    silent = _silent(bench)
    device = outer.entry[0]
    carried = {terminal_net(c, outer.entry), terminal_net(c, outer.exit)}
    kind, j = c.find_device(device)
    nets = set(c.devices[kind].nodes[j, :3].tolist()) - carried
    near = set(nets)
    for a, b in c.resistors.nodes.tolist():
        for here, there in ((a, b), (b, a)):
            if here in nets and not silent[there] and there not in carried:
                near.add(there)
    lossy = {
        name.rpartition(".")[0]
        for table in (c.resistors, c.inductors)
        for name in table.names
        if name.endswith((".rser", ".lser"))
    }
    out = []
    for name, bare in zip(c.capacitors.names, c.capacitors.nodes.tolist(), strict=True):
        a, b = (c.ends(name) if name in lossy else None) or bare
        for here, there in ((a, b), (b, a)):
            if here in near and silent[there] and not silent[here]:
                out.append(name)
    return tuple(out)


def _silent(bench: Bench) -> np.ndarray[tuple[int], np.dtype[np.bool_]]:
    from checker.stages.scene import signal_grounds

    return signal_grounds(bench.circuit, bench.nominal_response(bench.edges_hz))


@quantity("own_loss_db", "dB", "part", "what a capacitor loses at the band's edges against a short in its place")
def own_loss(bench: Bench, part: str) -> Figure:
    """|T| of its stage with the part shorted over |T|, at both band edges; positive is loss."""
    use = next((u for u in capacitor_uses(bench) if u.part == part), None)
    if use is None:
        return missing("own_loss_db", part, bench.size, "dB", f"not applicable: {part} is in no stage's signal path")
    if bench.band_hz is None:
        return missing("own_loss_db", part, bench.size, "dB", "not applicable: no band is declared")
    outer = outer_of(bench, use.stage)
    assert isinstance(outer, Outer)  # noqa: S101 - uses exist only for stages with links
    f = bench.edges_hz[[0, 2]]
    response = bench.response(f)
    out = end_node(bench, outer)
    values = 20.0 * np.log10(
        np.abs(_out(bench, response.shorted(part), outer, out) / _out(bench, response, outer, out))
    )
    return figure(
        "own_loss_db",
        part,
        values,
        "dB",
        f_hz=f,
        formula="20 log10 |T shorted|/|T|, e upstream of the cut link unchanged",
        numbers=(("|T|", float(np.abs(transfer(bench, response, outer))[0, 0]), ""),),
        source="in-place small-signal solution, low-rank change",
    )


def _out(
    bench: Bench, response: Response, outer: Outer, node: int
) -> np.ndarray[tuple[int, ...], np.dtype[np.complex128]]:
    return response.voltages(drive_of(bench, outer))[..., node]
