"""The in-place small-signal solution over frequencies, with low-rank changes.

One inverse an AC island serves every drive; removing a device, shorting a part or opening a link is an update of
low rank (a second factorisation only where that would cost digits), and never another bias.

Unknowns: voltages of nets that no ideal source fixes, then branch currents of floating sources and of inductors.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import replace

import numpy as np

from checker.arrays import BoolArray, ComplexArray, FloatArray, IntArray
from checker.circuit.types import Branches, Circuit, Port
from checker.shape import frozen
from checker.solve.admittance import device_pencils, outer_admittance
from checker.solve.counters import COUNTERS
from checker.solve.frequencies import angular
from checker.solve.operating import OperatingPoint
from checker.solve.system import signal_system
from checker.solve.update import updated

SHORT_FACTOR = 1e7
"""A shorted part gets this many times the admittance its nodes present: 1e-7 from ideal, and 1e-9 in arithmetic."""


@frozen
class Drive:
    """Unit excitation: 1 V on `source` (index into `voltages`), or 1 A into `node` out of ground."""

    source: int = -1
    node: int = -1


@frozen
class Block:
    """Element admittances between a few nodes: `nodes` (k,), `y` complex128 (S, F, k, k)."""

    nodes: tuple[int, ...]
    y: ComplexArray


@frozen
class Response:
    """`z` complex128 (S, F, u, u): inverse of the system matrix `y`; `y_known` (S, F, u, n_net): coupling from nets.

    Immutable; `removed`, `shorted`, `opened` return changed copies. `row` (n_net,): unknown of a net, -1 if none.
    `device_y`: family -> devices at their outer terminals (S, F, n, k, k).
    """

    circuit: Circuit
    f_hz: FloatArray
    row: IntArray
    v_row: IntArray
    l_row: IntArray
    known: BoolArray
    tree: tuple[tuple[int, int, int, float], ...]
    z: ComplexArray
    y: ComplexArray
    y_known: ComplexArray
    device_y: Mapping[str, ComplexArray]

    # --- solutions ---------------------------------------------------------------------------------------
    def solution(self, drive: Drive) -> ComplexArray:
        """Net voltages, then the raw unknowns (nets and branch currents): complex128 (S, F, n_net + u)."""
        known_v = np.zeros(len(self.row), dtype=complex)
        for node, parent, source, sign in self.tree:
            known_v[node] = known_v[parent] + (sign if source == drive.source else 0.0)
        rhs = -(self.y_known @ known_v)
        if drive.source >= 0 and self.v_row[drive.source] >= 0:
            rhs[..., self.v_row[drive.source]] += 1.0
        if drive.node > 0 and self.row[drive.node] >= 0:
            rhs[..., self.row[drive.node]] += 1.0
        out = np.einsum("sfij,sfj->sfi", self.z, rhs)
        full = np.empty((*out.shape[:2], len(self.row)), dtype=complex)
        full[:] = known_v
        live = self.row >= 0
        full[..., live] = out[..., self.row[live]]
        full[..., ~live & ~self.known] = np.nan
        return np.concatenate([full, out], axis=-1)

    def voltages(self, drive: Drive) -> ComplexArray:
        """Net voltages, complex128 (S, F, n_net) [V]."""
        return self.solution(drive)[..., : len(self.row)]

    def impedance(self, node: int) -> ComplexArray:
        """Driving-point impedance of a net to ground, complex128 (S, F) [ohm]; 0 on a net of fixed voltage."""
        return self.transfer(node, node)

    def transfer(self, to: int, of: int) -> ComplexArray:
        """Voltage at `to` for 1 A into `of`, complex128 (S, F) [ohm]."""
        r, c = self.row[to], self.row[of]
        if r < 0 or c < 0:
            return np.zeros(self.z.shape[:2], dtype=complex)
        return self.z[..., r, c]

    def between(self, a: int, b: int) -> ComplexArray:
        """Impedance between two nets, complex128 (S, F) [ohm]."""
        return self.transfer(a, a) - self.transfer(a, b) - self.transfer(b, a) + self.transfer(b, b)

    # --- elements ----------------------------------------------------------------------------------------
    def block(self, part: str) -> Block:
        """Admittance block of a resistor, capacitor or semiconductor. Raises KeyError for another part."""
        c = self.circuit
        s = angular(self.f_hz)
        for table, y_of in ((c.resistors, self._y_r), (c.capacitors, self._y_c)):
            if part in table.names:
                j = table.names.index(part)
                y = y_of(table, j, s)
                return Block(nodes=_ends(table, j), y=y[..., None, None] * np.array([[1.0, -1.0], [-1.0, 1.0]]))
        kind, j = c.find_device(part)
        return Block(nodes=tuple(c.devices[kind].nodes[j].tolist()), y=self.device_y[kind][:, :, j])

    def _y_r(self, table: Branches, j: int, _s: ComplexArray) -> ComplexArray:
        return np.broadcast_to(1.0 / table.value[:, j, None], (self.z.shape[0], len(self.f_hz))).astype(complex)

    def _y_c(self, table: Branches, j: int, s: ComplexArray) -> ComplexArray:
        return table.value[:, j, None] * s

    def current(self, part: str, terminal: int, solution: ComplexArray) -> ComplexArray:
        """Current into a part's terminal (0 or 1; of a semiconductor as in its table), complex128 (S, F) [A]."""
        c = self.circuit
        if part in c.inductors.names:
            row = self.l_row[c.inductors.names.index(part)]
            sign = 1.0 if terminal == 0 else -1.0
            return sign * solution[..., len(self.row) + row]
        block = self.block(part)
        v = solution[..., list(block.nodes)]
        return np.asarray(np.einsum("sfc,sfc->sf", block.y[..., terminal, :], v))

    # --- changes -----------------------------------------------------------------------------------------
    def removed(self, devices: Sequence[str]) -> Response:
        """The same circuit with whole devices taken out."""
        out = self
        for name in devices:
            block = out.block(name)
            out = out._changed(block.nodes, -block.y)._with_device(name, np.zeros_like(block.y))
        return out

    def replaced(self, device: str, y: ComplexArray) -> Response:
        """The same circuit with another admittance block for a device."""
        block = self.block(device)
        return self._changed(block.nodes, y - block.y)._with_device(device, y)

    def loaded(self, nodes: tuple[int, ...], y: ComplexArray) -> Response:
        """The same circuit with admittances (S, F, k) [S] from k nets to signal ground."""
        return self._changed(nodes, y[..., None] * np.eye(len(nodes)))

    def shorted(self, part: str) -> Response:
        """The same circuit with a two-terminal part shorted."""
        return self._tied(*self._two_nodes(part))

    def grounded(self, node: int) -> Response:
        """The same circuit with a net shorted to signal ground."""
        return self._tied(node, 0)

    def _tied(self, a: int, b: int) -> Response:
        """Two nets made one: Z - Z e (e^T Z e)^-1 e^T Z with e = +1 at a, -1 at b; the limit of an infinite link.

        Their coupling to nets of fixed voltage follows a link of `SHORT_FACTOR` times what the nets present.
        """
        z_ab = self.between(a, b)
        size = np.where(np.isfinite(z_ab), np.abs(z_ab), 1.0)
        y = SHORT_FACTOR / np.maximum(size, 1e-12)
        if any(self.known[n] and n > 0 for n in (a, b)):
            return self._changed((a, b), y[..., None, None] * np.array([[1.0, -1.0], [-1.0, 1.0]], dtype=complex))
        e = np.zeros(self.z.shape[-1])
        for node, sign in ((a, 1.0), (b, -1.0)):
            if self.row[node] >= 0:
                e[self.row[node]] += sign
        pivot = np.where(z_ab == 0.0, np.inf, z_ab)[..., None, None]
        z = self.z - (self.z @ e)[..., :, None] * (e @ self.z)[..., None, :] / pivot
        return replace(self, z=z, y=self.y + y[..., None, None] * np.outer(e, e))

    def opened(self, part: str, terminal: int = 0) -> Response:
        """The same circuit with one terminal of a part lifted off its net."""
        if part in self.circuit.inductors.names:
            return self._open_inductor(part)
        block = self.block(part)
        t = terminal
        y_tt = block.y[..., t, t]
        safe = np.where(y_tt == 0.0, 1.0, y_tt)
        delta = -block.y[..., :, t, None] * block.y[..., None, t, :] / safe[..., None, None]
        out = self._changed(block.nodes, delta)
        return out._with_device(part, block.y + delta)

    def _open_inductor(self, part: str) -> Response:
        row = self.l_row[self.circuit.inductors.names.index(part)]
        column, line = self.z[..., :, row], self.z[..., row, :]
        # The branch current forced to zero: the limit of an infinite impedance added to its equation.
        pivot = self.z[..., row, row][..., None, None]
        z = self.z - column[..., :, None] * line[..., None, :] / np.where(pivot == 0.0, np.inf, pivot)
        y = self.y.copy()
        y[..., row, :] = 0.0
        y[..., row, row] = 1.0
        return replace(self, z=z, y=y)

    def _two_nodes(self, part: str) -> tuple[int, int]:
        c = self.circuit
        whole = c.ends(part)
        if whole is not None:
            return whole
        for table in (c.resistors, c.capacitors, c.inductors):
            if part in table.names:
                a, b = _ends(table, table.names.index(part))
                return a, b
        raise KeyError(part)

    def _with_device(self, name: str, y: ComplexArray) -> Response:
        """The block of a semiconductor as it now is; other parts keep none."""
        for kind, table in self.circuit.devices.items():
            if name in table.names:
                new = self.device_y[kind].copy()
                new[:, :, table.names.index(name)] = y
                return replace(self, device_y={**self.device_y, kind: new})
        return self

    def _changed(self, nodes: tuple[int, ...], delta: ComplexArray) -> Response:
        """Add `delta` (S, F, k, k) between `nodes`, and to the coupling from nets of fixed voltage."""
        live = [k for k, node in enumerate(nodes) if self.row[node] >= 0]
        if not live:
            return self
        rows = self.row[[nodes[k] for k in live]]
        inner, merged = _merge(rows, delta[..., live, :][..., :, live])
        z, y = updated(self.z, self.y, inner, merged)
        y_known = self.y_known
        outside = [k for k, node in enumerate(nodes) if self.known[node] and node > 0]
        if outside:
            y_known = y_known.copy()
            for k in outside:
                for r in live:
                    y_known[..., self.row[nodes[r]], nodes[k]] += delta[..., r, k]
        return replace(self, z=z, y=y, y_known=y_known)


def _merge(rows: IntArray, delta: ComplexArray) -> tuple[IntArray, ComplexArray]:
    """Fold terminals on one and the same net together."""
    if len(set(rows.tolist())) == len(rows):
        return rows, delta
    inner, where = np.unique(rows, return_inverse=True)
    fold = np.zeros((len(inner), len(rows)))
    fold[where, np.arange(len(rows))] = 1.0
    return inner, fold @ delta @ fold.T


def _ends(table: Branches, j: int) -> tuple[int, int]:
    return int(table.nodes[j, 0]), int(table.nodes[j, 1])


def port_drive(port: Port) -> Drive:
    """The drive of a port: its e.m.f. where it has one, else a current into its plane."""
    return Drive(source=port.emf) if port.emf >= 0 else Drive(node=port.node)


def small_signal(point: OperatingPoint, f_hz: FloatArray) -> Response:
    """Linearise at the operating point and solve at all frequencies [Hz], (F,)."""
    f = np.asarray(f_hz, dtype=float)
    system = signal_system(point)
    placed, pencils = point.plan.placed, device_pencils(point)
    device_y = {kind: outer_admittance(placed[kind], g, c, f) for kind, (g, c) in pencils.items()}
    y, y_known = system.matrices(f, device_y)
    COUNTERS.factorisations += y.shape[0] * y.shape[1] * len(system.islands)
    return Response(
        circuit=point.circuit,
        f_hz=f,
        row=system.row,
        v_row=system.v_row,
        l_row=system.l_row,
        known=system.known,
        tree=system.tree,
        z=system.inverse(y),
        y=y,
        y_known=y_known,
        device_y=device_y,
    )
