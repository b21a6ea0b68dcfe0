"""The small-signal system: its unknowns, AC islands, and matrices at given frequencies.

AC islands are nets joined by any element, cut at nets that ideal sources fix. An island that nothing ties to a fixed
net is pinned at one net by 1 S: no current flows there, so differences are unharmed and the matrix can be solved.
"""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np

from checker.arrays import BoolArray, ComplexArray, FloatArray, IntArray
from checker.circuit.types import Branches, Circuit, Devices
from checker.shape import frozen
from checker.solve.assemble import Scatter
from checker.solve.frequencies import angular
from checker.solve.operating import OperatingPoint
from checker.solve.plan import Sets


@frozen
class SignalSystem:
    """`row` (n_net,): unknown of a net or -1; `v_row`, `l_row`: of sources and inductors; `own_row`: of the own
    branches of controlled sources and lines; `islands`: unknowns each;
    `pins`: unknowns that are pinned; `tree`: (node, parent, source, sign) of nets fixed by ideal sources.
    `linear`: G and C (S, u, u + n_net) of all that is no semiconductor; columns: unknowns, then nets of fixed voltage.
    `semiconductors`: where the admittances of the families of the plan go in the flat (u, u + n_net)."""

    circuit: Circuit
    row: IntArray
    v_row: IntArray
    l_row: IntArray
    own_row: IntArray
    known: BoolArray
    tree: tuple[tuple[int, int, int, float], ...]
    islands: tuple[IntArray, ...]
    pins: tuple[int, ...]
    size: int
    linear: tuple[FloatArray, FloatArray]
    semiconductors: Scatter

    def matrices(self, f_hz: FloatArray, device_y: Mapping[str, ComplexArray]) -> tuple[ComplexArray, ComplexArray]:
        """System matrix (S, F, u, u) and its coupling from nets (S, F, u, n_net); `device_y` by family."""
        s = angular(f_hz)
        g, c = self.linear
        full = g[:, None] + s[None, :, None, None] * c[:, None]
        flat = [y.reshape(*full.shape[:2], -1) for y in device_y.values()]
        if flat:
            self.semiconductors.into(full.reshape(*full.shape[:2], -1), np.concatenate(flat, axis=-1))
        if self.circuit.four_poles.names:
            self._link(full, s)
        return full[..., : self.size], full[..., self.size :]

    def _link(self, full: ComplexArray, s: ComplexArray) -> None:
        """Add controlled sources and lines to the matrix (S, F, u, u + n_net)."""
        from checker.solve.four_poles import entries

        found = entries(self.circuit, s)
        branches = np.concatenate([self.v_row, self.own_row]).tolist()
        nets, row = len(self.circuit.nets), self.row.tolist()
        for m, (r, c) in enumerate(zip(found.row.tolist(), found.column.tolist(), strict=True)):
            place = row[r] if r < nets else branches[r - nets]
            column = _column(row, c, self.size) if c < nets else branches[c - nets]
            if place >= 0 and column >= 0:
                full[:, :, place, column] += found.value[:, m]

    def inverse(self, y: ComplexArray) -> ComplexArray:
        """Island by island; nan where an island has an unbiased device or is singular."""
        z = np.zeros_like(y)
        for island in self.islands:
            block = y[..., island[:, None], island[None, :]]
            lost = ~np.isfinite(block).all(axis=(-1, -2))
            block[lost] = np.eye(len(island))
            inverse = _inverse(block)
            inverse[lost] = np.nan
            z[..., island[:, None], island[None, :]] = inverse
        return z


def _inverse(a: ComplexArray) -> ComplexArray:
    try:
        return np.asarray(np.linalg.inv(a), dtype=complex)
    except np.linalg.LinAlgError:
        out = np.full_like(a, np.nan)
        for where in np.ndindex(a.shape[:-2]):
            try:
                out[where] = np.linalg.inv(a[where])
            except np.linalg.LinAlgError:
                continue
        return out


def signal_system(point: OperatingPoint) -> SignalSystem:
    """Number the small-signal unknowns of a circuit; kept with the point."""
    if "signal system" not in point.kept:
        point.kept["signal system"] = _numbered(point)
    return point.kept["signal system"]  # type: ignore[no-any-return]


def _numbered(point: OperatingPoint) -> SignalSystem:
    c, plan = point.circuit, point.plan
    n = len(c.nets)
    known = plan.is_known[:n]
    joins = _joins(c)
    touched = np.zeros(n, dtype=bool)
    for nodes in joins:
        touched[nodes] = True
    row = np.full(n, -1, dtype=np.int64)
    free = np.flatnonzero(touched & ~known)
    row[free] = np.arange(len(free))
    in_tree = {step.source for step in plan.known}
    v_row, size = _rows(c.voltages, len(free), known, in_tree)
    l_row, size = _rows(c.inductors, size, known, set())
    own_row = np.arange(size, size + len(plan.own_row), dtype=np.int64)
    size += len(own_row)
    islands, pins = _islands(c, joins, row, known, (v_row, l_row, own_row), size)
    tree = tuple((t.node, t.parent, t.source, t.sign) for t in plan.known)
    places = _destinations([c.devices[kind] for kind in plan.placed], row, size, n)
    linear = _Linear(c, row, size)
    for pin in pins:
        linear.g[:, pin, pin] += 1.0
    linear.branches(v_row, l_row)
    return SignalSystem(
        circuit=c,
        row=row,
        v_row=v_row,
        l_row=l_row,
        own_row=own_row,
        known=known,
        tree=tree,
        islands=islands,
        pins=pins,
        size=size,
        linear=(linear.g, linear.c),
        semiconductors=Scatter(places, size * (size + n)),
    )


class _Linear:
    """G and C of resistors, capacitors, sources and inductors, each stamped once."""

    def __init__(self, circuit: Circuit, row: IntArray, size: int) -> None:
        self.circuit, self.size = circuit, size
        self.row = row.tolist()
        shape = (circuit.size, size, size + len(circuit.nets))
        self.g, self.c = np.zeros(shape), np.zeros(shape)
        for out, table, y in (
            (self.g, circuit.resistors, 1.0 / circuit.resistors.value),
            (self.c, circuit.capacitors, circuit.capacitors.value),
        ):
            for j, (a, b) in enumerate(table.nodes.tolist()):
                for r, column, sign in ((a, a, 1.0), (b, b, 1.0), (a, b, -1.0), (b, a, -1.0)):
                    self._stamp(out, r, column, sign * y[:, j])

    def _stamp(self, out: FloatArray, a: int, b: int, y: FloatArray) -> None:
        row, column = self.row[a], _column(self.row, b, self.size)
        if row >= 0 and column >= 0:
            out[:, row, column] += y

    def branches(self, v_row: IntArray, l_row: IntArray) -> None:
        """The equation of each source and inductor, and their currents in the balances of their nodes."""
        c = self.circuit
        for table, rows in ((c.voltages, v_row), (c.inductors, l_row)):
            for j, row in enumerate(rows.tolist()):
                for node, sign in zip(table.nodes[j].tolist(), (1.0, -1.0), strict=True) if row >= 0 else ():
                    column = _column(self.row, node, self.size)
                    if column >= 0:
                        self.g[:, row, column] += sign
                    if self.row[node] >= 0:
                        self.g[:, self.row[node], row] += sign
        for j, row in enumerate(l_row.tolist()):
            if row >= 0:
                self.c[:, row, row] -= c.inductors.value[:, j]
        for j, (p, q) in enumerate(c.couplings.pair.tolist()):
            rp, rq = l_row[p], l_row[q]
            if rp >= 0 and rq >= 0:
                mutual = c.couplings.k[:, j] * np.sqrt(c.inductors.value[:, p] * c.inductors.value[:, q])
                self.c[:, rp, rq] -= mutual
                self.c[:, rq, rp] -= mutual


def _column(row: list[int], node: int, size: int) -> int:
    """Column of a net: its unknown, else its place among the nets behind the unknowns; -1 for ground."""
    return row[node] if row[node] >= 0 else size + node if node > 0 else -1


def _destinations(tables: list[Devices], row: IntArray, size: int, n_net: int) -> IntArray:
    """Flat place in (u, u + n_net) of each device's admittances in turn; -1 where the row is no unknown."""
    places = row.tolist()
    out = []
    for table in tables:
        for terminals in table.nodes.tolist():
            columns = [_column(places, b, size) for b in terminals]
            for a in terminals:
                first = places[a] * (size + n_net)
                out += [first + column if places[a] >= 0 and column >= 0 else -1 for column in columns]
    return np.array(out, dtype=np.int64)


def _joins(c: Circuit) -> list[list[int]]:
    """Nets that each element joins; a substrate tied to ground joins nothing of its own."""
    tables = (c.resistors, c.capacitors, c.inductors, c.voltages)
    out = [row for table in tables for row in table.nodes.tolist()]
    out += [[j for j in row if j > 0] for table in c.devices.values() for row in table.nodes.tolist()]
    out += _linked(c)
    pairs = c.couplings.pair.tolist()
    ends = c.inductors.nodes.tolist()
    # Coupled windings share an island of unknowns though no net joins them.
    return out + [[node for node in (ends[p] + ends[q]) if node > 0] for p, q in pairs]


def _linked(c: Circuit) -> list[list[int]]:
    """Nets that a controlled source or a line brings into one matrix; ground joins nothing."""
    table = c.four_poles
    return [
        [node for node in (*row, *(c.voltages.nodes[sense].tolist() if sense >= 0 else ())) if node > 0]
        for row, sense in zip(table.nodes.tolist(), table.sense.tolist(), strict=True)
    ]


def _rows(table: Branches, first: int, known: BoolArray, skip: set[int]) -> tuple[IntArray, int]:
    """Branch unknowns of the elements that touch a free net."""
    rows = np.full(len(table.names), -1, dtype=np.int64)
    for j, (a, b) in enumerate(table.nodes.tolist()):
        if j not in skip and a != b and not (known[a] and known[b]):
            rows[j] = first
            first += 1
    return rows, first


def _islands(
    c: Circuit,
    joins: list[list[int]],
    row: IntArray,
    known: BoolArray,
    branch_rows: tuple[IntArray, IntArray, IntArray],
    size: int,
) -> tuple[tuple[IntArray, ...], tuple[int, ...]]:
    sets = Sets(size)
    anchored: set[int] = set()
    for nodes in joins:
        free = [int(row[x]) for x in nodes if row[x] >= 0]
        for other in free[1:]:
            sets.join(free[0], other)
    ends = (c.voltages.nodes.tolist(), c.inductors.nodes.tolist(), _own_nodes(c, len(branch_rows[2])))
    for rows, nodes_of in zip(branch_rows, ends, strict=True):
        for r, nodes in zip(rows.tolist(), nodes_of, strict=True):
            for node in nodes:
                if r >= 0 and row[node] >= 0:
                    sets.join(r, int(row[node]))
    for k, sense in enumerate(c.four_poles.sense.tolist()):
        # A current whose source stands between fixed nets still shares the matrix of what it controls.
        for node in c.four_poles.nodes[k].tolist() if sense >= 0 and branch_rows[0][sense] >= 0 else ():
            if row[node] >= 0:
                sets.join(int(branch_rows[0][sense]), int(row[node]))
    galvanic = _galvanic(c)
    for nodes in galvanic:
        if any(known[x] for x in nodes):
            anchored.update(sets.find(int(row[x])) for x in nodes if row[x] >= 0)
    members: dict[int, list[int]] = {}
    for unknown in range(size):
        members.setdefault(sets.find(unknown), []).append(unknown)
    pins = tuple(min(m) for root, m in members.items() if root not in anchored)
    return tuple(np.array(m) for m in members.values()), pins


def _galvanic(c: Circuit) -> list[list[int]]:
    """Elements through which current can reach a fixed net."""
    tables: list[Branches | Devices] = [c.resistors, c.capacitors, c.inductors, c.voltages, *c.devices.values()]
    out = [row for table in tables for row in table.nodes.tolist()]
    if c.four_poles.names:
        from checker.solve.four_poles import conductors

        out += [[a, b] for a, b in conductors(c)]
    return out


def _own_nodes(c: Circuit, count: int) -> list[list[int]]:
    """The nets of each own branch of the controlled sources and lines."""
    if not count:
        return []
    from checker.solve.four_poles import branches

    return [c.four_poles.nodes[each.owner].tolist() for each in branches(c)]
