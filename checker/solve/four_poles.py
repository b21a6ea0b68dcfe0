"""What controlled sources and lines add to the equations, for direct current, for phasors and for poles alike.

Each adds a few numbers to the matrix. Places are counted through three lists: nets, then the branch currents of the
voltage sources, then own branch currents: one of each E and H, two of each line (into port 1 and into port 2). A line
is its chain matrix, V1 = A V2 - B I2 and I1 = C V2 - A I2 with currents into the ports, which stays finite where the
admittances of a resonant line do not (R. E. Collin, Foundations for Microwave Engineering, 2nd ed., sec. 3.6-3.8, from
memory): A = cosh(x), B = Z sinh(x)/x, C = Y sinh(x)/x, x^2 = Z Y, Z = R + sL, Y = G + sC of the whole length.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator, Mapping

import numpy as np

from checker.arrays import ComplexArray, FloatArray, IntArray
from checker.circuit.types import Circuit
from checker.shape import frozen

_SMALL = 1e-4
"""Of |x|, under which sinh(x)/x and cosh(x) are taken from their series."""
Signs = tuple[tuple[int, float], ...]


@frozen
class Entries:
    """Matrix entries: `row`, `column` int64 (m,) places; `value` complex128 (F, m)."""

    row: IntArray
    column: IntArray
    value: ComplexArray


@frozen
class Branch:
    """An own branch current: the four-pole it belongs to, and whether its loops are those of an ideal source."""

    owner: int
    ideal: bool


def branches(circuit: Circuit) -> tuple[Branch, ...]:
    """The own branches in the order of their places."""
    out: list[Branch] = []
    for k, kind in enumerate(circuit.four_poles.kinds):
        if kind in ("E", "H"):
            out.append(Branch(owner=k, ideal=True))
        elif kind == "line":
            out += [Branch(owner=k, ideal=False)] * 2
    return tuple(out)


def conductors(circuit: Circuit) -> Iterator[tuple[int, int]]:
    """Pairs of nodes between which direct current flows."""
    for kind, (a, b, c, d) in zip(circuit.four_poles.kinds, circuit.four_poles.nodes.tolist(), strict=True):
        if kind in ("E", "H"):
            yield a, b
        elif kind == "line":
            yield from ((a, c), (b, d))


def steering(circuit: Circuit) -> Iterator[tuple[int, int]]:
    """Pairs of nodes of which the first decides over the second and draws nothing."""
    table = circuit.four_poles
    for kind, row, sense in zip(table.kinds, table.nodes.tolist(), table.sense.tolist(), strict=True):
        if kind == "line":
            yield from ((row[0], row[1]), (row[1], row[0]), (row[2], row[3]), (row[3], row[2]))
            continue
        controls = row[2:] if sense < 0 else circuit.voltages.nodes[sense].tolist()
        yield from ((control, out) for control in controls for out in row[:2])


def entries(circuit: Circuit, s: ComplexArray) -> Entries:
    """Every entry at the complex frequencies `s` (F,) [rad/s]; 0 is direct current."""
    rows: list[int] = []
    columns: list[int] = []
    values: list[ComplexArray | float] = []

    def put(row: int, signs: Signs, value: ComplexArray | float = 1.0) -> None:
        for column, sign in signs:
            rows.append(row)
            columns.append(column)
            values.append(sign * value)

    table = circuit.four_poles
    sources = len(circuit.nets)
    own = sources + len(circuit.voltages.names)
    for k, kind in enumerate(table.kinds):
        a, b, c, d = table.nodes[k].tolist()
        gain = float(table.value[k, 0])
        control: Signs = ((c, 1.0), (d, -1.0)) if kind in ("E", "G") else ((sources + int(table.sense[k]), 1.0),)
        if kind in ("G", "F"):
            put(a, control, gain)
            put(b, control, -gain)
        elif kind in ("E", "H"):
            _through(put, own, a, b)
            put(own, ((a, 1.0), (b, -1.0)))
            put(own, control, -gain)
            own += 1
        else:
            chain_a, chain_b, chain_c = chain(table.value[k], s)
            _through(put, own, a, b)
            _through(put, own + 1, c, d)
            put(own, ((a, 1.0), (b, -1.0)))
            put(own, ((c, -1.0), (d, 1.0)), chain_a)
            put(own, ((own + 1, 1.0),), chain_b)
            put(own + 1, ((own, 1.0),))
            put(own + 1, ((own + 1, 1.0),), chain_a)
            put(own + 1, ((c, -1.0), (d, 1.0)), chain_c)
            own += 2
    value = np.zeros((len(s), len(rows)), dtype=complex)
    for m, each in enumerate(values):
        value[:, m] = each
    return Entries(row=np.array(rows, dtype=np.int64), column=np.array(columns, dtype=np.int64), value=value)


def add_to_pencil(circuit: Circuit, sources: Mapping[int, int], first: int, g: FloatArray, c: FloatArray) -> None:
    """Add to G and C (u, u) of a pencil; `sources`: row of each voltage source with a branch current; own rows start at
    `first`, one a four-pole. A line stands as one section of its whole inductance between two halves of its
    capacitance: poles far below its first resonance are right, and those of the line itself are passive.
    """
    table = circuit.four_poles
    for k, kind in enumerate(table.kinds):
        a, b, x, y = table.nodes[k].tolist()
        gain, own = float(table.value[k, 0]), first + k
        control: Signs = ((x, 1.0), (y, -1.0)) if kind in ("E", "G") else ((sources.get(int(table.sense[k]), -1), 1.0),)
        if kind in ("G", "F"):
            for node, sign in ((a, gain), (b, -gain)):
                for column, part in control:
                    g[node, column] += sign * part
            continue
        ends: Signs = ((a, 1.0), (b, -1.0)) if kind != "line" else ((a, 1.0), (b, -1.0), (x, -1.0), (y, 1.0))
        for node, sign in ends:
            g[node, own] += sign
            g[own, node] += sign
        if kind != "line":
            for column, part in control:
                g[own, column] -= gain * part
            continue
        g[own, own] -= table.value[k, 0]
        c[own, own] -= table.value[k, 1]
        for p, q in ((a, b), (x, y)):
            for row, column, sign in ((p, p, 0.5), (q, q, 0.5), (p, q, -0.5), (q, p, -0.5)):
                g[row, column] += sign * table.value[k, 2]
                c[row, column] += sign * table.value[k, 3]


def _through(put: Callable[[int, Signs], None], branch: int, a: int, b: int) -> None:
    """A branch current leaves node a and enters node b."""
    put(a, ((branch, 1.0),))
    put(b, ((branch, -1.0),))


def chain(whole: FloatArray, s: ComplexArray) -> tuple[ComplexArray, ComplexArray, ComplexArray]:
    """A, B [ohm] and C [S] of the chain matrix of a line, each (F,). `whole` (4,): R, L, G, C as in `FourPoles`."""
    z, y = whole[0] + s * whole[1], whole[2] + s * whole[3]
    x = np.sqrt(z * y)
    small = np.abs(x) < _SMALL
    safe = np.where(small, 1.0, x)
    shape = np.where(small, 1.0 + z * y / 6.0, np.sinh(safe) / safe)
    a = np.where(small, 1.0 + z * y / 2.0, np.cosh(safe))
    return np.asarray(a), np.asarray(z * shape), np.asarray(y * shape)
