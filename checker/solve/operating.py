"""The certified operating point of a circuit, all scenarios in one stack."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import field
from typing import Any

import numpy as np

from checker.arrays import BoolArray, FloatArray
from checker.circuit.types import Circuit
from checker.constants import KCL_REL
from checker.devices.family import TRANSISTORS
from checker.shape import frozen
from checker.solve.assemble import Assembler
from checker.solve.newton import Solved, conditions, iterate, solve
from checker.solve.plan import Plan, make_plan

ALIKE = ("i_out_a", "i_control_a", "i_common_a", "v_out_v", "v_control_v", "power_w")
"""What all transistors have: current into output, control and common terminal, voltage of the first two over the third,
power. The order is that of a family's `FIGURES`."""


@frozen
class Island:
    """One DC island. Arrays (S,): `ok`, `kcl`, `step_v`. `reason` where it was not solved
    at all; `nets` without inner nodes; `states` found, `exhaustive` whether more are ruled out."""

    nets: tuple[str, ...]
    ok: BoolArray
    kcl: FloatArray
    step_v: FloatArray
    reason: str = ""
    states: int = 1
    exhaustive: bool = False


@frozen
class OperatingPoint:
    """`v_v` float64 (S, n_nodes) [V] over nets then inner nodes, nan where not certified.

    `devices`: family -> figures of each device, (S, n) a key, as the family's module says (nan where not certified).
    `device_k`: family -> junction temperatures used (S, n) [K].
    `refused`: island -> why its solution is not printed though it balances.
    `kept`: what later steps derive from the point once (pencils, numbering).
    """

    circuit: Circuit
    plan: Plan
    assembler: Assembler
    solved: Solved
    v_v: FloatArray
    islands: tuple[Island, ...]
    devices: Mapping[str, Mapping[str, FloatArray]]
    device_k: Mapping[str, FloatArray]
    refused: Mapping[int, str] = field(default_factory=dict)
    kept: dict[str, Any] = field(default_factory=dict)

    @property
    def bipolar(self) -> Mapping[str, FloatArray]:
        """ic_a, ib_a, ie_a (into the terminal, signs as they flow), vbe_v, vce_v, vbc_v at the outer terminals times
        the polarity, power_w; each (S, n). Empty without bipolars."""
        return self.devices.get("bipolar", {})

    @property
    def diode(self) -> Mapping[str, FloatArray]:
        """i_a, v_v, power_w; each (S, n). Empty without diodes."""
        return self.devices.get("diode", {})

    @property
    def transistor(self) -> Mapping[str, FloatArray]:
        """`ALIKE` of every transistor, (S, n) a key, in the order of `Circuit.transistors`. Currents into the
        terminals as they flow, voltages times the polarity."""
        if "transistor" not in self.kept:
            self.kept["transistor"] = _alike(self.devices, self.circuit.size)
        return self.kept["transistor"]  # type: ignore[no-any-return]

    def jacobian(self, island: int) -> tuple[float, float]:
        """Condition (scaled rows and columns) and sign of the determinant of a solved island, in scenario 0."""
        if "conditions" not in self.kept:
            self.kept["conditions"] = conditions(self.solved)
        condition, sign = self.kept["conditions"]
        return float(condition[island]), float(sign[island])

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
    rise_k: Mapping[str, FloatArray] | None = None,
    x0: FloatArray | None = None,
    quick: bool = False,
    refuse: Mapping[int, str] | None = None,
) -> OperatingPoint:
    """Solve and certify.

    `near`: a solution of the same topology to start from, scenario by scenario where both have as many, else from its
    scenario 0.
    `rise_k`: junction temperature rise over ambient by family, each (S, n) [K]. `x0` (S, U): start there.
    `quick`: give up early on what does not converge, for trials. `refuse`: islands (by place in the plan) that are no
    rest, with the reason; those that `near` refuses stay refused.
    """
    plan = near.plan if near is not None else make_plan(circuit)
    ambient, rise = circuit.temperature_k[:, None], rise_k or {}
    device_k = {
        kind: np.broadcast_to(ambient + rise.get(kind, 0.0), (circuit.size, len(placed.table.names))).copy()
        for kind, placed in plan.placed.items()
    }
    assembler = Assembler(circuit, plan, device_k)
    if x0 is None and near is not None and near.solved.x.shape[0] == circuit.size and near.solved.done.all():
        x0 = near.solved.x
    if x0 is None and near is not None and near.solved.done[0].all():
        x0 = np.repeat(near.solved.x[:1], circuit.size, axis=0)
    solved = solve(assembler, x0, quick=quick)
    refused = {**(near.refused if near is not None else {}), **(refuse or {})}
    return _collect(circuit, plan, assembler, solved, device_k, refused)


def one_step(circuit: Circuit, near: OperatingPoint) -> FloatArray:
    """Current into each transistor's output (S, n) [A] after one Newton step from `near`'s scenario 0: to first order
    what a small change of the circuit makes of it. No certificate; nan where `near` has no answer."""
    device_k = {kind: np.repeat(table[:1], circuit.size, axis=0) for kind, table in near.device_k.items()}
    assembler = Assembler(circuit, near.plan, device_k)
    x = np.repeat(near.solved.x[:1], circuit.size, axis=0)
    done = np.zeros((circuit.size, len(assembler.island_sizes)), dtype=bool)
    moved, _, _ = iterate(assembler, x, assembler.junctions(assembler.voltages(x)), done, limit=1)
    v = assembler.voltages(moved)
    v[:, ~np.isfinite(near.v_v[0])] = np.nan
    return _alike(_figures(near.plan, circuit, assembler, v), circuit.size)["i_out_a"]


def self_heated(cold: OperatingPoint, *, rounds: int = 8, quick: bool = False) -> OperatingPoint:
    """The second solution, junctions at their own temperature: TJ = TA + P RthJA where RthJA is known.

    `quick`: as in `operating_point`.
    """
    point = cold
    for _ in range(rounds):
        rise = {
            kind: np.minimum(
                _heating_w(cold.circuit, kind, table) * np.nan_to_num(cold.circuit.devices[kind].rth_kpw), 500.0
            )
            for kind, table in point.devices.items()
            if "power_w" in table
        }
        ambient = cold.circuit.temperature_k[:, None]
        moved = [float(np.abs(ambient + r - point.device_k[kind]).max(initial=0.0)) for kind, r in rise.items()]
        if max(moved, default=0.0) < 0.01:
            break
        point = operating_point(cold.circuit, near=point, rise_k=rise, quick=quick)
    return point


def _heating_w(circuit: Circuit, kind: str, table: Mapping[str, FloatArray]) -> FloatArray:
    """What heats each device of a family (S, n) [W]: its own dissipation and that of a partner on its chip."""
    return circuit.devices[kind].chip_power(np.nan_to_num(table["power_w"]))


def _collect(
    circuit: Circuit,
    plan: Plan,
    assembler: Assembler,
    solved: Solved,
    device_k: Mapping[str, FloatArray],
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
            islands.append(Island(nets=nets, ok=bad, kcl=nan, step_v=nan, reason=island.trouble))
            continue
        ok = solved.done[:, index] & (solved.kcl[:, index] <= KCL_REL) & agreed & (index not in refused)
        v[np.ix_(~ok, np.array(island.nodes))] = np.nan
        islands.append(
            Island(
                nets=nets,
                ok=ok,
                kcl=solved.kcl[:, index],
                step_v=solved.step[:, index],
                reason=""
                if ok[0]
                else refused.get(index, "the operating point did not converge to a certified answer"),
                exhaustive=not island.active and _single(plan, set(island.nodes)),
            )
        )
    return OperatingPoint(
        circuit=circuit,
        plan=plan,
        assembler=assembler,
        solved=solved,
        v_v=v,
        islands=tuple(islands),
        devices=_figures(plan, circuit, assembler, v),
        device_k=device_k,
        refused=refused,
    )


def _figures(plan: Plan, circuit: Circuit, assembler: Assembler, v: FloatArray) -> dict[str, Mapping[str, FloatArray]]:
    """Family -> figures of its devices at node voltages (S, n_nodes) [V]."""
    return {
        kind: placed.model.figures(assembler.p[kind], circuit.devices[kind].polarity, v[:, placed.nodes])
        for kind, placed in plan.placed.items()
    }


def _alike(devices: Mapping[str, Mapping[str, FloatArray]], scenarios: int) -> dict[str, FloatArray]:
    """What all transistors have, (S, n) a key, in the order of `Circuit.transistors`."""
    none = np.zeros((scenarios, 0))
    own = [(TRANSISTORS[kind]().FIGURES, devices[kind]) for kind in TRANSISTORS if kind in devices]
    return {
        key: np.concatenate([none, *(table[names[place]] for names, table in own)], axis=1)
        for place, key in enumerate(ALIKE)
    }


def _sources_agree(circuit: Circuit, plan: Plan, v: FloatArray) -> BoolArray:
    """(S,): no ideal source between fixed nets says otherwise than those that fixed them; a change may part them."""
    table = circuit.voltages
    followed = {step.source for step in plan.known}
    spare = [j for j, ends in enumerate(table.nodes) if j not in followed and plan.is_known[ends].all()]
    off = np.abs(v[:, table.nodes[spare, 0]] - v[:, table.nodes[spare, 1]] - table.value[:, spare])
    return np.asarray((off <= 1e-9 * np.maximum(1.0, np.abs(table.value[:, spare]))).all(axis=1), dtype=bool)


def _single(plan: Plan, nodes: set[int]) -> bool:
    """With one transistor at most an island has one state (Nielsen and Willson, Proc. IEEE 68(2), 1980; memory); with
    an amplifier nothing is proved."""
    if "opamp" in plan.placed and any(nodes & set(row) for row in plan.placed["opamp"].nodes.tolist()):
        return False
    rows = [row for kind in TRANSISTORS if kind in plan.placed for row in plan.placed[kind].nodes.tolist()]
    return sum(bool(nodes & set(row)) for row in rows) <= 1
