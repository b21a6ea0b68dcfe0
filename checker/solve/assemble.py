"""From element equations to stacked residuals and Jacobians, all scenarios at once.

The unknown vector x (S, U) holds node voltages and branch currents in the order of the plan. The residual is the
sum of currents *leaving* each unknown node through its elements, then one voltage equation a branch.
"""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np

from checker.arrays import ComplexArray, FloatArray, IntArray
from checker.circuit.types import Circuit, Devices
from checker.constants import DEFAULT_AMBIENT_C, ZERO_CELSIUS_K, thermal_voltage_v
from checker.devices.family import Family
from checker.solve.counters import COUNTERS
from checker.solve.plan import Plan


class Scatter:
    """Adds columns of (..., m) into (..., size) by destination; a destination of -1 is dropped."""

    def __init__(self, dest: IntArray, size: int) -> None:
        keep = np.flatnonzero(dest >= 0)
        order = np.argsort(dest[keep], kind="stable")
        self._pick = keep[order]
        self._where, self._starts = np.unique(dest[self._pick], return_index=True)
        self._size = size

    def add(self, values: FloatArray) -> FloatArray:
        """Sums by destination, float64 (S, size)."""
        return self._reduce(np.add, values)

    def into(self, out: ComplexArray, values: ComplexArray) -> None:
        """Add the sums to `out` (..., size) in place."""
        if len(self._where):
            out[..., self._where] += np.add.reduceat(values[..., self._pick], self._starts, axis=-1)

    def largest(self, values: FloatArray) -> FloatArray:
        """Largest magnitude by destination, float64 (S, size)."""
        return self._reduce(np.maximum, np.abs(values))

    def _reduce(self, how: np.ufunc, values: FloatArray) -> FloatArray:
        out = np.zeros((values.shape[0], self._size))
        if len(self._where):
            out[:, self._where] = how.reduceat(values[:, self._pick], self._starts, axis=1)
        return out


class _Extra:
    """Controlled sources and lines as matrix entries: `row`, `column` (m,) unknowns or -1, `value` (1, m)."""

    def __init__(self, circuit: Circuit, plan: Plan) -> None:
        self.row = self.column = self._place = np.zeros(0, dtype=np.int64)
        self.value = np.zeros((1, 0))
        self._nets = len(circuit.nets)
        if circuit.four_poles.names:
            self._branches = np.concatenate([plan.v_row, plan.own_row])
            unknown = np.concatenate([plan.unknown[: self._nets], self._branches])
            from checker.solve.four_poles import entries  # few boards have any

            found = entries(circuit, np.zeros(1, dtype=complex))
            self.row, self.column = unknown[found.row], unknown[found.column]
            self._place, self.value = found.column, found.value.real

    def unknowns(self, x: FloatArray, v: FloatArray) -> FloatArray:
        """What each entry multiplies, (S, m): a node voltage or a branch current."""
        if not self._place.size:
            return np.zeros((x.shape[0], 0))
        currents = np.zeros((x.shape[0], len(self._branches)))
        live = self._branches >= 0
        currents[:, live] = x[:, self._branches[live]]
        return np.concatenate([v[:, : self._nets], currents], axis=1)[:, self._place]


Junctions = tuple[FloatArray, ...]
"""Junction voltages at which devices are linearised: (S, n, j) a family of the plan."""


class Assembler:
    """Everything of one circuit that stays the same from iteration to iteration."""

    def __init__(self, circuit: Circuit, plan: Plan, device_k: Mapping[str, FloatArray]) -> None:
        """`device_k`: device temperatures (S, n) [K] by family."""
        self.circuit = circuit
        self.plan = plan
        self.scenarios = circuit.size
        self.p = {
            kind: _params(circuit.devices[kind], placed.model, device_k[kind]) for kind, placed in plan.placed.items()
        }
        self._families = [
            (placed.model, placed.nodes, circuit.devices[kind].polarity, self.p[kind])
            for kind, placed in plan.placed.items()
        ]
        self._g_r = 1.0 / circuit.resistors.value
        self._extra = _Extra(circuit, plan)
        self._blocks()
        self._node_rows = plan.unknown[plan.unknown >= 0]
        self._rows = Scatter(self._row_dest(), plan.n_unknown)
        self._entries = Scatter(self._device_dest(), self.n_flat)
        self.j_linear = self._linear_jacobian()
        self.known_v = self._known_voltages()

    def _blocks(self) -> None:
        """Offset of each unknown's block in the flat Jacobian, and its row in the block."""
        plan = self.plan
        self._block = np.zeros(plan.n_unknown, dtype=np.int64)
        self._first = np.zeros(plan.n_unknown, dtype=np.int64)
        self._size = np.zeros(plan.n_unknown, dtype=np.int64)
        offset = 0
        self.group_offsets: list[int] = []
        for first, count, size in plan.groups:
            self.group_offsets.append(offset)
            for k in range(count):
                rows = slice(first + k * size, first + (k + 1) * size)
                self._block[rows], self._first[rows], self._size[rows] = offset, first + k * size, size
                offset += size * size
        self.n_flat = offset
        sizes = [size for _, count, size in plan.groups for _ in range(count)]
        self.island_sizes = np.array(sizes, dtype=np.int64)
        self.by_island = Scatter(self._homes(len(sizes)), len(sizes))

    def _homes(self, count: int) -> IntArray:
        """The island of each device, family after family; -1 where all its nodes are known or not solved."""
        owner = np.full(self.plan.n_nodes, -1, dtype=np.int64)
        for index, island in enumerate(self.plan.islands[:count]):
            owner[list(island.nodes)] = index
        none = np.zeros(0, dtype=np.int64)
        return np.concatenate([none, *(owner[p.nodes].max(axis=1, initial=-1) for p in self.plan.placed.values())])

    def flat(self, row: IntArray, column: IntArray) -> IntArray:
        """Place of (row, column) unknowns in the flat Jacobian; -1 where either is not an unknown."""
        ok = (row >= 0) & (column >= 0)
        r, c = np.where(ok, row, 0), np.where(ok, column, 0)
        if not self.plan.n_unknown:
            return np.full(row.shape, -1, dtype=np.int64)
        place = self._block[r] + (r - self._first[r]) * self._size[r] + (c - self._first[r])
        return np.where(ok, place, -1)

    def _row_dest(self) -> IntArray:
        """Destination rows in the order in which `_contributions` lists its columns."""
        c, u = self.circuit, self.plan.unknown
        parts = [u[c.resistors.nodes[:, 0]], u[c.resistors.nodes[:, 1]]]
        parts += [u[c.currents.nodes[:, 0]], u[c.currents.nodes[:, 1]]]
        for table, rows in ((c.voltages, self.plan.v_row), (c.inductors, self.plan.l_row)):
            live = rows >= 0
            parts += [np.where(live, u[table.nodes[:, 0]], -1), np.where(live, u[table.nodes[:, 1]], -1)]
        parts.append(self._extra.row)
        parts += [u[placed.nodes].ravel() for placed in self.plan.placed.values()]
        return np.concatenate(parts)

    def _device_dest(self) -> IntArray:
        out = [np.zeros(0, dtype=np.int64)]
        for placed in self.plan.placed.values():
            rows = self.plan.unknown[placed.nodes]
            out.append(self.flat(*np.broadcast_arrays(rows[:, :, None], rows[:, None, :])).ravel())
        return np.concatenate(out)

    def _linear_jacobian(self) -> FloatArray:
        c, u, s = self.circuit, self.plan.unknown, self.scenarios
        dest, vals = [], []
        a, b = u[c.resistors.nodes[:, 0]], u[c.resistors.nodes[:, 1]]
        for row, column, sign in ((a, a, 1.0), (b, b, 1.0), (a, b, -1.0), (b, a, -1.0)):
            dest.append(self.flat(row, column))
            vals.append(sign * self._g_r)
        for table, rows in ((c.voltages, self.plan.v_row), (c.inductors, self.plan.l_row)):
            ones = np.ones((s, len(rows)))
            for end, sign in ((0, 1.0), (1, -1.0)):
                node = u[table.nodes[:, end]]
                dest += [self.flat(node, rows), self.flat(rows, node)]
                vals += [sign * ones, sign * ones]
        dest.append(self.flat(self._extra.row, self._extra.column))
        vals.append(np.broadcast_to(self._extra.value, (s, self._extra.value.shape[1])))
        return Scatter(np.concatenate(dest), self.n_flat).add(np.concatenate(vals, axis=1))

    def _known_voltages(self) -> FloatArray:
        v = np.full((self.scenarios, self.plan.n_nodes), np.nan)
        v[:, 0] = 0.0
        for step in self.plan.known:
            v[:, step.node] = v[:, step.parent] + step.sign * self.circuit.voltages.value[:, step.source]
        v[:, ~self.plan.is_known] = 0.0
        return v

    def voltages(self, x: FloatArray, source_scale: float = 1.0) -> FloatArray:
        """All node voltages (S, n_nodes) [V]; unsolved nodes read 0 here."""
        v = self.known_v * source_scale
        live = self.plan.unknown >= 0
        v[:, live] = x[:, self.plan.unknown[live]]
        return v

    def junctions(self, v: FloatArray) -> Junctions:
        """Junction voltages at node voltages `v`."""
        return tuple(model.junctions(v[:, nodes], polarity) for model, nodes, polarity, _ in self._families)

    def start(self) -> Junctions:
        """Junction voltages for the first iteration."""
        return tuple(model.start(p) for model, _, _, p in self._families)

    def limit(self, new: Junctions, old: Junctions) -> Junctions:
        """Steps held to what the equations can follow."""
        both = zip(self._families, new, old, strict=True)
        return tuple(model.limit(p, wanted, held) for (model, _, _, p), wanted, held in both)

    def contributions(
        self, x: FloatArray, at: Junctions, gmin: float = 0.0, source_scale: float = 1.0
    ) -> tuple[FloatArray, FloatArray]:
        """Currents leaving nodes, column by column, and the device part of the flat Jacobian's columns."""
        c = self.circuit
        v = self.voltages(x, source_scale)
        i_r = (v[:, c.resistors.nodes[:, 0]] - v[:, c.resistors.nodes[:, 1]]) * self._g_r
        i_s = c.currents.value * source_scale
        columns = [i_r, -i_r, i_s, -i_s]
        for rows in (self.plan.v_row, self.plan.l_row):
            i = np.zeros((self.scenarios, len(rows)))
            i[:, rows >= 0] = x[:, rows[rows >= 0]]
            columns += [i, -i]
        columns.append(self._extra.value * self._extra.unknowns(x, v))
        entries = [np.zeros((self.scenarios, 0))]
        for (model, nodes, polarity, p), junction in zip(self._families, at, strict=True):
            n, k = nodes.shape
            e = model.evaluate(p, polarity, v[:, nodes], junction, gmin)
            columns.append(e.i.reshape(self.scenarios, n * k))
            entries.append(e.g.reshape(self.scenarios, n * k * k))
            COUNTERS.device_evaluations += self.scenarios * n
        return np.concatenate(columns, axis=1), np.concatenate(entries, axis=1)

    def residual(self, x: FloatArray, columns: FloatArray, source_scale: float = 1.0, shunt: float = 0.0) -> FloatArray:
        """Residual (S, U): sums of currents (with the helper `shunt` [S] to ground), voltage equations of branches."""
        f = self._rows.add(columns)
        v = self.voltages(x, source_scale)
        if shunt:
            f[:, self._node_rows] += shunt * x[:, self._node_rows]
        for table, rows, on in (
            (self.circuit.voltages, self.plan.v_row, 1.0),
            (self.circuit.inductors, self.plan.l_row, 0.0),
        ):
            live = np.flatnonzero(rows >= 0)
            drop = v[:, table.nodes[live, 0]] - v[:, table.nodes[live, 1]]
            f[:, rows[live]] = drop - on * source_scale * table.value[:, live]
        return f

    def largest(self, columns: FloatArray) -> FloatArray:
        """Largest single current at each node (S, U) [A].

        A device lists an inner node's currents already summed, so there the current of the lead stands for them.
        """
        sized = np.abs(columns)
        at = columns.shape[1] - sum(placed.nodes.size for placed in self.plan.placed.values())
        for placed in self.plan.placed.values():
            n, k = placed.nodes.shape
            block = sized[:, at : at + n * k].reshape(self.scenarios, n, k)
            for _, outer, inner in placed.model.INNER:
                block[..., inner] = np.maximum(block[..., inner], block[..., outer])
            at += n * k
        return self._rows.largest(sized)

    def rounding(self, x: FloatArray, entries: FloatArray) -> FloatArray:
        """What rounding of the node voltages alone makes of each current balance, (S, U) [A].

        A conductance g between nodes at 10 V cannot carry a current known better than g times the spacing of
        doubles at 10 V; behind 1 ohm that is a femtoampere, more than a transistor leaks. Under a thermal voltage
        nothing needs a finer step than at one.
        """
        c, s = self.circuit, self.scenarios
        v = np.maximum(np.abs(self.voltages(x)), thermal_voltage_v(DEFAULT_AMBIENT_C + ZERO_CELSIUS_K))
        i_r = (v[:, c.resistors.nodes[:, 0]] + v[:, c.resistors.nodes[:, 1]]) * self._g_r
        branches = 2 * (c.currents.value.shape[1] + len(self.plan.v_row) + len(self.plan.l_row))
        own = np.abs(self._extra.value * self._extra.unknowns(x, v))
        columns, at = [i_r, i_r, np.zeros((s, branches)), own], 0
        for placed in self.plan.placed.values():
            n, k = placed.nodes.shape
            g = np.abs(entries[:, at : at + n * k * k]).reshape(s, n, k, k)
            columns.append(np.einsum("snrc,snc->snr", g, v[:, placed.nodes]).reshape(s, n * k))
            at += n * k * k
        return np.finfo(float).eps * self._rows.add(np.concatenate(columns, axis=1))

    def jacobian(self, entries: FloatArray, shunt: float = 0.0) -> FloatArray:
        """Flat Jacobian (S, n_flat); `shunt` [S] from every node to ground is a helper of hard starts."""
        j = self.j_linear + self._entries.add(entries)
        if shunt:
            j[:, self.flat(self._node_rows, self._node_rows)] += shunt
        return j

    def block_views(self, flat: FloatArray) -> list[FloatArray]:
        """The flat Jacobian as one stack (S, islands, n, n) a group."""
        views = []
        for (_, count, size), offset in zip(self.plan.groups, self.group_offsets, strict=True):
            views.append(flat[:, offset : offset + count * size * size].reshape(-1, count, size, size))
        return views


def _params(table: Devices, model: Family, t_k: FloatArray) -> dict[str, FloatArray]:
    """Parameters at temperature; infinite ones stay infinite."""
    return model.at_temperature(table.params, t_k, np.broadcast_to(table.tnom_k, t_k.shape))
