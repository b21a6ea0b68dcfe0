"""Low-rank changes of the small-signal solution against a matrix assembled anew without the part."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from checker.solve.operating import operating_point
from checker.solve.response import Drive, Response, small_signal
from tests.bench import Bench
from tests.reference.boards import NPN, PNP
from tests.solve.random_circuits import steady

F_HZ = np.array([100.0, 1e4, 1e6, 1e8])


def _two_stages(coupling: float = 1e-5, bypass: float = 1e-4) -> Bench:
    b = Bench(27.0)
    b.v("VCC", "vcc", "0", 12.0)
    b.v("VS", "s", "0", 0.0)
    b.r("RS", "s", "in", 600.0)
    b.c("C1", "in", "b1", coupling)
    b.r("R1", "vcc", "b1", 47e3)
    b.r("R2", "b1", "0", 10e3)
    b.r("RC1", "vcc", "c1", 4.7e3)
    b.r("RE1", "e1", "0", 1e3)
    b.c("CE1", "e1", "0", bypass)
    b.q("Q1", "c1", "b1", "e1", **NPN)
    b.q("Q2", "c2", "c1", "e2", pnp=True, sub="vcc", **PNP)
    b.r("RE2", "vcc", "e2", 2.2e3)
    b.c("CE2", "vcc", "e2", bypass)
    b.r("RC2", "c2", "0", 3.3e3)
    b.c("C2", "c2", "k", coupling)
    b.l("L1", "k", "m", 1e-3)
    b.r("RX", "k", "m", 1e3)
    b.r("RL", "m", "0", 10e3)
    b.r("RF", "m", "e1", 33e3)
    b.d("D1", "0", "c2")
    return b


class Anew:
    """The same small-signal circuit put together again by hand, element admittances only, then one dense solve."""

    def __init__(self, r: Response) -> None:
        c = self.c = r.circuit
        n = len(c.nets)
        self.y = np.zeros((len(r.f_hz), n, n), dtype=complex)
        self.s = 2j * np.pi * r.f_hz
        self.blocks: dict[str, tuple[list[int], np.ndarray]] = {}
        one = np.array([[1.0, -1.0], [-1.0, 1.0]])
        for table, admittance in (
            (c.resistors, lambda x: np.full(len(self.s), 1 / x, dtype=complex)),
            (c.capacitors, lambda x: self.s * x),
            (c.inductors, lambda x: 1 / (self.s * x)),
        ):
            for j, name in enumerate(table.names):
                self.blocks[name] = (
                    table.nodes[j].tolist(),
                    admittance(table.value[0, j])[:, None, None] * one,
                )
        for kind, devices in c.devices.items():
            y = r.device_y[kind]
            for j, name in enumerate(devices.names):
                self.blocks[name] = (devices.nodes[j].tolist(), y[0, :, j])

    def voltages(self, source: int, merged: tuple[str, str] | None = None) -> np.ndarray:
        """(F, n_net) for 1 V on a source; `merged`: two nets made one."""
        c = self.c
        n = len(c.nets)
        fold = np.eye(n)
        if merged:
            keep, gone = (c.node(x) for x in merged)
            fold[gone] = fold[keep]
        y = np.zeros((len(self.s), n, n), dtype=complex)
        for nodes, block in self.blocks.values():
            for i, a in enumerate(nodes):
                for k, b in enumerate(nodes):
                    y[:, a, b] += block[:, i, k]
        y = fold.T @ y @ fold
        fixed = {0: 0.0, **{int(a): float(j == source) for j, (a, _) in enumerate(c.voltages.nodes)}}
        free = [j for j in range(n) if j not in fixed and not (merged and j == c.node(merged[1]))]
        known = list(fixed)
        rhs = -y[:, free][:, :, known] @ np.array([fixed[k] for k in known])
        out = np.zeros((len(self.s), n), dtype=complex)
        out[:, known] = [fixed[k] for k in known]
        out[:, free] = np.linalg.solve(y[:, free][:, :, free], rhs[..., None])[..., 0]
        if merged:
            out[:, c.node(merged[1])] = out[:, c.node(merged[0])]
        return out

    def without(self, *names: str) -> Anew:
        """Parts taken out."""
        for name in names:
            del self.blocks[name]
        return self

    def lifted(self, name: str, terminal: int) -> Anew:
        """One terminal of a part left open: Schur complement over it."""
        nodes, y = self.blocks.pop(name)
        rest = [k for k in range(len(nodes)) if k != terminal]
        left = (
            y[:, rest][:, :, rest]
            - y[:, rest, terminal, None] * y[:, None, terminal, rest] / y[:, terminal, terminal, None, None]
        )
        self.blocks[name] = ([nodes[k] for k in rest], left)
        return self


def _start(b: Bench, f_hz: np.ndarray = F_HZ) -> Response:
    point = operating_point(b.circuit())
    assert all(island.ok.all() for island in point.islands)
    return small_signal(point, f_hz)


CHANGES: dict[str, tuple[Callable[[Response], Response], Callable[[Anew], np.ndarray]]] = {
    "nothing": (lambda r: r, lambda a: a.voltages(1)),
    "Q1 out": (lambda r: r.removed(["Q1"]), lambda a: a.without("Q1").voltages(1)),
    "Q2 out": (lambda r: r.removed(["Q2"]), lambda a: a.without("Q2").voltages(1)),
    "both out": (lambda r: r.removed(["Q1", "Q2"]), lambda a: a.without("Q1", "Q2").voltages(1)),
    "diode out": (lambda r: r.removed(["D1"]), lambda a: a.without("D1").voltages(1)),
    "CE1 shorted": (lambda r: r.shorted("CE1"), lambda a: a.voltages(1, ("0", "e1"))),
    "CE2 shorted to the supply": (lambda r: r.shorted("CE2"), lambda a: a.voltages(1, ("vcc", "e2"))),
    "C2 shorted": (lambda r: r.shorted("C2"), lambda a: a.voltages(1, ("c2", "k"))),
    "L1 shorted": (lambda r: r.shorted("L1"), lambda a: a.voltages(1, ("k", "m"))),
    "base grounded": (lambda r: r.grounded(r.circuit.node("c1")), lambda a: a.voltages(1, ("0", "c1"))),
    "C1 open": (lambda r: r.opened("C1"), lambda a: a.without("C1").voltages(1)),
    "RF open": (lambda r: r.opened("RF"), lambda a: a.without("RF").voltages(1)),
    "CE1 open": (lambda r: r.opened("CE1"), lambda a: a.without("CE1").voltages(1)),
    "L1 open": (lambda r: r.opened("L1"), lambda a: a.without("L1").voltages(1)),
    "base of Q2 lifted": (lambda r: r.opened("Q2", 1), lambda a: a.lifted("Q2", 1).voltages(1)),
    "emitter of Q1 lifted": (lambda r: r.opened("Q1", 2), lambda a: a.lifted("Q1", 2).voltages(1)),
    "RF open, then Q2 out": (
        lambda r: r.opened("RF").removed(["Q2"]),
        lambda a: a.without("RF", "Q2").voltages(1),
    ),
    "L1 open, then C1 open": (
        lambda r: r.opened("L1").opened("C1"),
        lambda a: a.without("L1", "C1").voltages(1),
    ),
    "C1 shorted, then CE1 open": (
        lambda r: r.shorted("C1").opened("CE1"),
        lambda a: a.without("CE1").voltages(1, ("in", "b1")),
    ),
}


@pytest.mark.parametrize("supply", [0, 1], ids=["driven at the supply", "driven at the source"])
@pytest.mark.parametrize("name", CHANGES)
def test_change_equals_the_circuit_put_together_again(name: str, supply: int) -> None:
    change, _ = CHANGES[name]
    r = _start(_two_stages())
    got = change(r).voltages(Drive(source=supply))[0]
    wanted = _with_drive(CHANGES[name][1], r, supply)
    # LARGEST_LOSS leaves eight digits of the 1 V drive; a short to a supply is SHORT_FACTOR, 1e-7, from ideal.
    np.testing.assert_allclose(got, wanted, rtol=1e-6, atol=1e-7)


def _with_drive(make: Callable[[Anew], np.ndarray], r: Response, source: int) -> np.ndarray:
    class Driven(Anew):
        def voltages(self, _source: int, merged: tuple[str, str] | None = None) -> np.ndarray:
            return super().voltages(source, merged)

    return make(Driven(r))


@steady
@given(st.floats(-9.0, -3.0), st.floats(-6.0, -2.0))
def test_opening_keeps_its_digits_however_large_the_capacitor(log_coupling: float, log_bypass: float) -> None:
    """1 nF to 1 mF in a link, to 10 mF at an emitter, to 1 MHz: the plain update would lose all digits."""
    r = _start(_two_stages(10.0**log_coupling, 10.0**log_bypass), F_HZ[:3])
    for part in ("C1", "C2", "CE1"):
        got = r.opened(part).voltages(Drive(source=1))[0]
        wanted = Anew(r).without(part).voltages(1)
        # 1e-8 of the 1 V drive is what LARGEST_LOSS leaves.
        np.testing.assert_allclose(got, wanted, rtol=1e-6, atol=1e-7)


def test_what_a_cut_leaves_floating_reads_nan_and_harms_nothing_else() -> None:
    b = Bench(27.0)
    b.v("VCC", "vcc", "0", 12.0)
    b.c("C1", "in", "b", 1e-6)
    b.r("R1", "vcc", "b", 470e3)
    b.r("RC", "vcc", "c", 1e3)
    b.q("Q1", "c", "b", "0", **NPN)
    r = _start(b).opened("C1")
    node = r.circuit.node
    assert np.isnan(r.impedance(node("in"))).all()
    alone = Bench(27.0)
    alone.v("VCC", "vcc", "0", 12.0)
    alone.r("R1", "vcc", "b", 470e3)
    alone.r("RC", "vcc", "c", 1e3)
    alone.q("Q1", "c", "b", "0", **NPN)
    whole = _start(alone)
    for net in ("b", "c"):
        np.testing.assert_allclose(
            r.impedance(node(net)), whole.impedance(whole.circuit.node(net)), rtol=1e-9, err_msg=net
        )


def test_coupled_windings_against_the_ideal_transformer() -> None:
    """k = 1 and large inductances: 100 ohm behind 4 : 1 turns shows 1600 ohm, and the voltage falls by 4."""
    b = Bench(27.0)
    b.v("VS", "s", "0", 0.0)
    b.r("RS", "s", "p", 1600.0)
    b.l("LP", "p", "0", 16.0)
    b.l("LS", "x", "0", 1.0)
    b.k("K1", "LP", "LS", 1.0 - 1e-12)
    b.r("RL", "x", "0", 100.0)
    r = small_signal(operating_point(b.circuit()), np.array([1e6]))
    v = r.voltages(Drive(source=0))[0, 0]
    node = r.circuit.node
    # Magnetising reactance 1e8 ohm beside 800 ohm: 1e-5.
    np.testing.assert_allclose(abs(v[node("p")]), 0.5, rtol=1e-5)
    np.testing.assert_allclose(v[node("p")] / v[node("x")], 4.0, rtol=1e-4)


def test_parts_carry_the_current_their_nodes_say() -> None:
    """`current` of every kind of part at a net sums to zero there."""
    r = _start(_two_stages())
    solution = r.solution(Drive(source=1))
    at_c2 = [("RC2", 0), ("C2", 0), ("Q2", 0), ("D1", 1)]
    at_m = [("L1", 1), ("RX", 1), ("RL", 0), ("RF", 0)]
    for parts in (at_c2, at_m):
        currents = np.array([r.current(name, terminal, solution) for name, terminal in parts])
        assert np.abs(currents).max() > 0.0
        # The current of a capacitor of 6 kS is a difference of voltages: 1e-8 is what their rounding leaves.
        assert (np.abs(currents.sum(axis=0)) <= 1e-8 * np.abs(currents).max(axis=0)).all()
