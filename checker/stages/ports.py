"""Directions of ports that nobody declared, and the frequency at which a board without a band is looked at."""

from __future__ import annotations

import re
from dataclasses import replace

import numpy as np

from checker.arrays import FloatArray
from checker.circuit.types import Circuit, Port
from checker.pattern import lazy
from checker.solve.operating import OperatingPoint
from checker.solve.response import Response, port_drive, small_signal
from checker.words import PortRole

DIRECTION_DB = 10.0
"""One way must be this much stronger than the other before a direction is stated."""


def wide_grid_hz() -> FloatArray:
    """1 Hz to 1 GHz, six a decade, (55,)."""
    return np.logspace(0.0, 9.0, 55)


def directed(ports: tuple[Port, ...], response: Response) -> tuple[tuple[Port, ...], tuple[str, ...]]:
    """Give a role to ports without one, by |Z21/Z12| at the frequency where the coupling is strongest.

    Returns the ports and the sentences that say what was found or could not be.
    """
    open_ports = [p for p in ports if p.role is None]
    if not open_ports or len(ports) < 2:
        return ports, tuple(f"port {p.name}: direction not known, no second port to compare with" for p in open_ports)
    roles, words = {}, []
    for port in open_ports:
        role, sentence = _role(port, [p for p in ports if p.name != port.name], response)
        roles[port.name] = role
        words.append(sentence)
    return tuple(replace(p, role=roles[p.name]) if p.role is None else p for p in ports), tuple(words)


def _role(port: Port, others: list[Port], response: Response) -> tuple[PortRole | None, str]:
    best_db, best = 0.0, None
    for other in others:
        forward = np.abs(response.transfer(other.node, port.node)[0])
        backward = np.abs(response.transfer(port.node, other.node)[0])
        usable = np.isfinite(forward) & np.isfinite(backward) & (np.maximum(forward, backward) > 1e-12)
        if not usable.any():
            continue
        at = int(np.argmax(np.where(usable, np.maximum(forward, backward), 0.0)))
        ratio = 20.0 * np.log10(max(forward[at], 1e-15) / max(backward[at], 1e-15))
        if abs(ratio) > abs(best_db):
            best_db, best = float(ratio), other
    if best is None or abs(best_db) < DIRECTION_DB:
        return None, f"port {port.name}: signal passes either way about equally; its direction is not stated"
    role: PortRole = "input" if best_db > 0.0 else "output"
    return role, f"port {port.name} taken as {role}: {abs(best_db):.0f} dB more signal that way, against {best.name}"


def widest_band(point: OperatingPoint, ports: tuple[Port, ...]) -> tuple[tuple[float, float] | None, float]:
    """The widest interval within 1 dB of the largest response between 1 Hz and 1 GHz, and its log-midpoint [Hz].

    Without any path between ports: no band, and 1 kHz.
    """
    f = wide_grid_hz()
    sources = [p for p in ports if p.role == "input"]
    outputs = [p for p in ports if p.role == "output"]
    if not sources or not outputs:
        return None, 1e3
    response = small_signal(point, f)
    h = np.abs(response.voltages(port_drive(sources[0]))[0, :, outputs[0].node])
    if not np.isfinite(h).all() or h.max() <= 0.0:
        return None, 1e3
    level = h >= h.max() * 10.0 ** (-1.0 / 20.0)
    runs = np.flatnonzero(np.diff(np.concatenate([[0], level.astype(int), [0]])))
    spans = [(f[a], f[b - 1]) for a, b in zip(runs[::2], runs[1::2], strict=True)]
    low, high = max(spans, key=lambda s: np.log(s[1] / s[0]))
    return (float(low), float(high)), float(np.sqrt(low * high))


_OUTPUT_NAME = lazy(r"v?_?out(put)?[0-9]*", re.IGNORECASE)


def supposed_output(
    point: OperatingPoint, ports: tuple[Port, ...], response: Response
) -> tuple[tuple[Port, ...], tuple[str, ...]]:
    """An output for a board that has inputs and nothing else: the net named like one, else the last net that carries
    signal. Returns the ports with it and the sentence that says so."""
    sources = [p for p in ports if p.role == "input"]
    if not sources or any(p.role == "output" for p in ports):
        return ports, ()
    v = np.abs(response.voltages(port_drive(sources[0]))[0]).max(axis=0)
    taken = {p.node for p in ports}
    live = [
        n for n in range(1, len(v)) if np.isfinite(v[n]) and v[n] > 1e-6 and n not in taken and not response.known[n]
    ]
    nets = point.circuit.nets
    named = [n for n in live if _OUTPUT_NAME.fullmatch(nets[n].rpartition("/")[2])]
    hops = device_hops(point.circuit, sources[0].node, response)
    ends = named or [n for n in live if hops.get(n, 0) > 0]
    if not ends:
        return ports, ()
    node = max(ends, key=lambda n: (hops.get(n, 0), float(v[n]), nets[n]))
    port = Port(name=nets[node], net=nets[node], node=node, role="output", reference_ohm=None)
    return (*ports, port), (f"no output is declared: {nets[node]}, where the signal ends, taken as one",)


def device_hops(circuit: Circuit, start: int, response: Response) -> dict[int, int]:
    """Transistors between a net and each net that they drive onward from it: base to collector and emitter, emitter to
    collector; passive parts carry on free of charge. Only collectors and emitters that carry signal are listed."""
    passive = [row for t in (circuit.resistors, circuit.capacitors, circuit.inductors) for row in t.nodes.tolist()]
    reached: dict[int, int] = {start: 0}
    driven: dict[int, int] = {}
    hop = 0
    while True:
        _spread(reached, passive, hop, response)
        fresh: set[int] = set()
        for c, b, e in circuit.transistors.nodes.tolist():
            exits = {c, e} if b in reached else {c} if e in reached else set()
            fresh |= {node for node in exits if node not in reached and not response.known[node]}
        if not fresh:
            return driven
        hop += 1
        reached.update(dict.fromkeys(fresh, hop))
        driven.update(dict.fromkeys(fresh, hop))


def _spread(reached: dict[int, int], passive: list[list[int]], hop: int, response: Response) -> None:
    """Let passive parts carry what is reached on to their other nets."""
    growing = True
    while growing:
        more = {
            far
            for a, b in passive
            for here, far in ((a, b), (b, a))
            if here in reached and far not in reached and not response.known[far]
        }
        reached.update(dict.fromkeys(more, hop))
        growing = bool(more)
