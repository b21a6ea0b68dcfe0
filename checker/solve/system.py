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
from checker.solve.frequencies import angular
from checker.solve.operating import OperatingPoint
from checker.solve.plan import Sets


@frozen
class SignalSystem:
    """`row` (n_net,): unknown of a net or -1; `v_row`, `l_row`: of sources and inductors; `islands`: unknowns each;
    `pins`: unknowns that are pinned; `tree`: (node, parent, source, sign) of nets fixed by ideal sources."""

    circuit: Circuit
    row: IntArray
    v_row: IntArray
    l_row: IntArray
    known: BoolArray
    tree: tuple[tuple[int, int, int, float], ...]
    islands: tuple[IntArray, ...]
    pins: tuple[int, ...]
    size: int

    def matrices(self, f_hz: FloatArray, device_y: Mapping[str, ComplexArray]) -> tuple[ComplexArray, ComplexArray]:
        """System matrix (S, F, u, u) and its coupling from nets (S, F, u, n_net); `device_y` by family."""
        c = self.circuit
        s = angular(f_hz)
        shape = (c.size, len(f_hz))
        n_net = len(c.nets)
        full = np.zeros((*shape, self.size, self.size + n_net), dtype=complex)
        for a, b, y in self._admittances(s, device_y):
            self._stamp(full, a, b, y)
        self._branches(full, s)
        for pin in self.pins:
            full[..., pin, pin] += 1.0
        return full[..., : self.size], full[..., self.size :]

    def _admittances(
        self, s: ComplexArray, device_y: Mapping[str, ComplexArray]
    ) -> list[tuple[int, int, ComplexArray]]:
        c = self.circuit
        out: list[tuple[int, int, ComplexArray]] = []
        for table, y in (
            (c.resistors, np.repeat(1.0 / c.resistors.value[:, None], len(s), axis=1).astype(complex)),
            (c.capacitors, np.asarray(c.capacitors.value[:, None] * s[None, :, None])),
        ):
            for j, (a, b) in enumerate(table.nodes.tolist()):
                for row, column, sign in ((a, a, 1), (b, b, 1), (a, b, -1), (b, a, -1)):
                    out.append((row, column, sign * y[..., j]))
        for kind, y in device_y.items():
            for j, terminals in enumerate(c.devices[kind].nodes.tolist()):
                for r, a in enumerate(terminals):
                    for k, b in enumerate(terminals):
                        out.append((a, b, y[:, :, j, r, k]))
        return out

    def _stamp(self, full: ComplexArray, a: int, b: int, y: ComplexArray) -> None:
        row = self.row[a]
        if row < 0:
            return
        if self.row[b] >= 0:
            full[..., row, self.row[b]] += y
        elif b > 0:
            full[..., row, self.size + b] += y

    def _branches(self, full: ComplexArray, s: ComplexArray) -> None:
        c = self.circuit
        for table, rows in ((c.voltages, self.v_row), (c.inductors, self.l_row)):
            for j, row in enumerate(rows.tolist()):
                if row < 0:
                    continue
                for node, sign in zip(table.nodes[j].tolist(), (1.0, -1.0), strict=True):
                    if self.row[node] >= 0:
                        full[..., self.row[node], row] += sign
                        full[..., row, self.row[node]] += sign
                    elif node > 0:
                        full[..., row, self.size + node] += sign
        for j, row in enumerate(self.l_row.tolist()):
            if row >= 0:
                full[..., row, row] -= s * c.inductors.value[:, j, None]
        for j, (p, q) in enumerate(c.couplings.pair.tolist()):
            rp, rq = self.l_row[p], self.l_row[q]
            if rp >= 0 and rq >= 0:
                mutual = c.couplings.k[:, j] * np.sqrt(c.inductors.value[:, p] * c.inductors.value[:, q])
                full[..., rp, rq] -= s * mutual[:, None]
                full[..., rq, rp] -= s * mutual[:, None]

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
    islands, pins = _islands(c, joins, row, known, (v_row, l_row), size)
    tree = tuple((t.node, t.parent, t.source, t.sign) for t in plan.known)
    return SignalSystem(
        circuit=c,
        row=row,
        v_row=v_row,
        l_row=l_row,
        known=known,
        tree=tree,
        islands=islands,
        pins=pins,
        size=size,
    )


def _joins(c: Circuit) -> list[list[int]]:
    """Nets that each element joins; a substrate tied to ground joins nothing of its own."""
    tables = (c.resistors, c.capacitors, c.inductors, c.voltages)
    out = [row for table in tables for row in table.nodes.tolist()]
    out += [[j for j in row if j > 0] for table in c.devices.values() for row in table.nodes.tolist()]
    pairs = c.couplings.pair.tolist()
    ends = c.inductors.nodes.tolist()
    # Coupled windings share an island of unknowns though no net joins them.
    return out + [[node for node in (ends[p] + ends[q]) if node > 0] for p, q in pairs]


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
    branch_rows: tuple[IntArray, IntArray],
    size: int,
) -> tuple[tuple[IntArray, ...], tuple[int, ...]]:
    sets = Sets(size)
    anchored: set[int] = set()
    for nodes in joins:
        free = [int(row[x]) for x in nodes if row[x] >= 0]
        for other in free[1:]:
            sets.join(free[0], other)
    for rows, table in zip(branch_rows, (c.voltages, c.inductors), strict=True):
        for j, r in enumerate(rows.tolist()):
            for node in table.nodes[j].tolist():
                if r >= 0 and row[node] >= 0:
                    sets.join(r, int(row[node]))
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
    return [row for table in tables for row in table.nodes.tolist()]
