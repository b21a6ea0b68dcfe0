"""The certified operating point of a circuit, all scenarios in one stack."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import field
from typing import Any

import numpy as np
from numpy.typing import NDArray

from checker.circuit.types import Circuit
from checker.constants import KCL_REL
from checker.devices import bipolar, diode
from checker.shape import frozen
from checker.solve.assemble import Assembler
from checker.solve.newton import Solved, solve
from checker.solve.plan import Plan, make_plan

FloatArray = NDArray[np.float64]
BoolArray = NDArray[np.bool_]


@frozen
class Island:
    """One DC island. Arrays (S,): `ok`, `kcl`, `step_v`, `condition`, `sign`. `reason` where it was not solved
    at all; `nets` without inner nodes; `states` found, `exhaustive` whether more are ruled out."""

    nets: tuple[str, ...]
    ok: BoolArray
    kcl: FloatArray
    step_v: FloatArray
    condition: FloatArray
    sign: FloatArray
    reason: str = ""
    states: int = 1
    exhaustive: bool = False


@frozen
class OperatingPoint:
    """`v_v` float64 (S, n_nodes) [V] over nets then inner nodes, nan where not certified.

    `bipolar`: ic_a, ib_a, ie_a (into the terminal, signs as they flow), vbe_v, vce_v, vbc_v at the outer terminals
    times the polarity, power_w; each (S, n). `diode`: i_a, v_v, power_w. `bipolar_k`, `diode_k`: temperatures used.
    `refused`: island -> why its solution is not printed though it balances.
    `kept`: what later steps derive from the point once (pencils, numbering).
    """

    circuit: Circuit
    plan: Plan
    assembler: Assembler
    solved: Solved
    v_v: FloatArray
    islands: tuple[Island, ...]
    bipolar: Mapping[str, FloatArray]
    diode: Mapping[str, FloatArray]
    bipolar_k: FloatArray
    diode_k: FloatArray
    refused: Mapping[int, str] = field(default_factory=dict)
    kept: dict[str, Any] = field(default_factory=dict)

    def reason(self, net: str) -> str:
        """Why a net has no certified voltage; empty where it has one in scenario 0."""
        node = self.circuit.node(net)
        if np.isfinite(self.v_v[0, node]):
            return ""
        for island in self.islands:
            if net in island.nets:
                return island.reason or "the operating point did not converge to a certified answer"
        return f"{net} joins only parts that block direct current; it has no DC voltage"


def operating_point(
    circuit: Circuit,
    *,
    near: OperatingPoint | None = None,
    rise_k: tuple[FloatArray, FloatArray] | None = None,
    x0: FloatArray | None = None,
    quick: bool = False,
    refuse: Mapping[int, str] | None = None,
) -> OperatingPoint:
    """Solve and certify.

    `near`: a solution of the same topology to start from, scenario by scenario where both have as many, else from its
    scenario 0.
    `rise_k`: junction temperature rise over ambient of bipolars and diodes, each (S, n) [K]. `x0` (S, U): start there.
    `quick`: give up early on what does not converge, for trials. `refuse`: islands (by place in the plan) that are no
    rest, with the reason; those that `near` refuses stay refused.
    """
    plan = near.plan if near is not None else make_plan(circuit)
    ambient = circuit.temperature_k[:, None]
    rise_b = rise_k[0] if rise_k else np.zeros((1, 1))
    rise_d = rise_k[1] if rise_k else np.zeros((1, 1))
    t_b = np.broadcast_to(ambient + rise_b, (circuit.size, len(circuit.bipolars.names))).copy()
    t_d = np.broadcast_to(ambient + rise_d, (circuit.size, len(circuit.diodes.names))).copy()
    assembler = Assembler(circuit, plan, t_b, t_d)
    if x0 is None and near is not None and near.solved.x.shape[0] == circuit.size and near.solved.done.all():
        x0 = near.solved.x
    if x0 is None and near is not None and near.solved.done[0].all():
        x0 = np.repeat(near.solved.x[:1], circuit.size, axis=0)
    solved = solve(assembler, x0, quick=quick)
    refused = {**(near.refused if near is not None else {}), **(refuse or {})}
    return _collect(circuit, plan, assembler, solved, (t_b, t_d), refused)


def self_heated(cold: OperatingPoint, *, rounds: int = 8) -> OperatingPoint:
    """The second solution, junctions at their own temperature: TJ = TA + P RthJA where RthJA is known."""
    point = cold
    rth_b = np.nan_to_num(cold.circuit.bipolars.rth_kpw)
    rth_d = np.nan_to_num(cold.circuit.diodes.rth_kpw)
    for _ in range(rounds):
        rise_b = np.minimum(np.nan_to_num(point.bipolar["power_w"]) * rth_b, 500.0)
        rise_d = np.minimum(np.nan_to_num(point.diode["power_w"]) * rth_d, 500.0)
        before = point
        point = operating_point(cold.circuit, near=point, rise_k=(rise_b, rise_d))
        moved = np.abs(point.bipolar_k - before.bipolar_k)
        if not moved.size or float(moved.max()) < 0.01:
            break
    return point


def _collect(
    circuit: Circuit,
    plan: Plan,
    assembler: Assembler,
    solved: Solved,
    device_k: tuple[FloatArray, FloatArray],
    refused: Mapping[int, str],
) -> OperatingPoint:
    v = assembler.voltages(solved.x)
    v[:, (plan.unknown < 0) & ~plan.is_known] = np.nan
    agreed = _sources_agree(circuit, plan, v)
    islands: list[Island] = []
    for index, island in enumerate(plan.islands):
        nets = tuple(circuit.nets[i] for i in island.nodes if i < len(circuit.nets))
        if island.trouble:
            nan = np.full(circuit.size, np.nan)
            bad = np.zeros(circuit.size, dtype=bool)
            islands.append(
                Island(nets=nets, ok=bad, kcl=nan, step_v=nan, condition=nan, sign=nan, reason=island.trouble)
            )
            continue
        ok = solved.done[:, index] & (solved.kcl[:, index] <= KCL_REL) & agreed & (index not in refused)
        v[np.ix_(~ok, np.array(island.nodes))] = np.nan
        islands.append(
            Island(
                nets=nets,
                ok=ok,
                kcl=solved.kcl[:, index],
                step_v=solved.step[:, index],
                condition=solved.condition[:, index],
                sign=solved.sign[:, index],
                reason=""
                if ok[0]
                else refused.get(index, "the operating point did not converge to a certified answer"),
                exhaustive=_single(plan, set(island.nodes)),
            )
        )
    return OperatingPoint(
        circuit=circuit,
        plan=plan,
        assembler=assembler,
        solved=solved,
        v_v=v,
        islands=tuple(islands),
        bipolar=_bipolar_table(assembler, v),
        diode=_diode_table(assembler, v),
        bipolar_k=device_k[0],
        diode_k=device_k[1],
        refused=refused,
    )


def _sources_agree(circuit: Circuit, plan: Plan, v: FloatArray) -> BoolArray:
    """(S,): no ideal source between fixed nets says otherwise than those that fixed them; a change may part them."""
    table = circuit.voltages
    followed = {step.source for step in plan.known}
    spare = [j for j, ends in enumerate(table.nodes) if j not in followed and plan.is_known[ends].all()]
    off = np.abs(v[:, table.nodes[spare, 0]] - v[:, table.nodes[spare, 1]] - table.value[:, spare])
    return np.asarray((off <= 1e-9 * np.maximum(1.0, np.abs(table.value[:, spare]))).all(axis=1), dtype=bool)


def _single(plan: Plan, nodes: set[int]) -> bool:
    """With one transistor at most an island has one state (Nielsen and Willson, Proc. IEEE 68(2), 1980; memory)."""
    return sum(bool(nodes & {int(x) for x in row}) for row in plan.bipolars.nodes) <= 1


def _bipolar_table(assembler: Assembler, v: FloatArray) -> dict[str, FloatArray]:
    """Terminal figures from the certified voltages (nan stays nan)."""
    placed = assembler.plan.bipolars
    p = placed.table.polarity
    terminals = v[:, placed.nodes]
    at = bipolar.junctions(terminals, p)
    k = bipolar.core(assembler.p_bipolar, at[..., 0], at[..., 1])
    c, b, e = terminals[..., 0], terminals[..., 1], terminals[..., 2]
    ic, ib = p * k.ic, p * k.ib
    return {
        "ic_a": ic,
        "ib_a": ib,
        "ie_a": -(ic + ib),
        "vbe_v": p * (b - e),
        "vce_v": p * (c - e),
        "vbc_v": p * (b - c),
        "power_w": ic * (c - e) + ib * (b - e),
    }


def _diode_table(assembler: Assembler, v: FloatArray) -> dict[str, FloatArray]:
    placed = assembler.plan.diodes
    terminals = v[:, placed.nodes]
    at = assembler.junctions(np.nan_to_num(v)).diode
    i, _ = diode.current(assembler.p_diode, at[..., 0])
    across = terminals[..., 0] - terminals[..., 1]
    i = np.where(np.isfinite(across), i, np.nan)
    return {"i_a": i, "v_v": across, "power_w": i * across}
