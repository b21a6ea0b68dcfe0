"""How much a bias leans on the transistor: divider stiffness, gain spread, and the base's path for direct current."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace

import numpy as np

from checker.arrays import FloatArray, IntArray
from checker.circuit.changes import with_changes
from checker.circuit.types import Change, Circuit, Scenario
from checker.measure.bench import Bench
from checker.measure.bias import require_bias
from checker.measure.feeds import current_fed, reach, require_not_fed
from checker.measure.make import figure, first, missing, nominal
from checker.measure.registry import quantity
from checker.measure.single import nominal_circuit
from checker.quantity.figure import Figure
from checker.solve.operating import operating_point
from checker.stages.terminals import CONTROL
from checker.stages.wiring import resistors_on

NO_BASE_CURRENT = 1e9
"""Factor on the forward current gain that stands for a base current of zero."""


def _stacked(bench: Bench) -> Mapping[str, FloatArray]:
    """IC of each device itself at highest and lowest gain, and without base current: (n,) each; one solve, kept."""
    if "steadiness" not in bench.kept:
        circuit = nominal_circuit(bench.circuit)
        names = circuit.bipolars.names
        scenarios = [Scenario(name="nominal")]
        for name in names:
            low, high = gain_limits(circuit, name)
            scenarios += [
                Scenario(name=f"{name} {word}", kind="sample", changes=(Change(part=name, property="bf", value=bf),))
                for word, bf in (("low", low), ("high", high), ("none", high * NO_BASE_CURRENT))
            ]
        stack = _without_leakage(with_changes(circuit, scenarios), len(names))
        ic = np.abs(operating_point(stack, near=bench.nominal_point).transistor["i_out_a"])
        rows = 1 + 3 * np.arange(len(names))
        own = np.arange(len(names))
        bench.kept["steadiness"] = {
            "low": ic[rows, own],
            "high": ic[rows + 1, own],
            "none": ic[rows + 2, own],
        }
    kept = bench.kept["steadiness"]
    assert isinstance(kept, dict)  # noqa: S101 - narrows the type
    return kept


def _without_leakage(stack: Circuit, count: int) -> Circuit:
    """Take the base leakage out too, in the scenarios that stand for no base current."""
    return _leakless(stack, 3 + 3 * np.arange(count), np.arange(count))


def _leakless(stack: Circuit, rows: IntArray, devices: IntArray) -> Circuit:
    if not stack.bipolars.names:
        return stack
    params = dict(stack.bipolars.params)
    leak = np.array(params["ise"])
    leak[rows, devices] = 0.0
    params["ise"] = leak
    return replace(stack, devices={**stack.devices, "bipolar": replace(stack.bipolars, params=params)})


def _answered(bench: Bench, stage: str) -> tuple[FloatArray, FloatArray, FloatArray]:
    """IC of one device at lowest and highest gain and without base current, each (S,): for the nominal and for the
    scenarios that are remedy candidates, else nan, since each costs three solutions a device."""
    index = bench.stage(stage).index
    out = np.full((3, bench.size), np.nan)
    out[:, 0] = [_stacked(bench)[word][index] for word in ("low", "high", "none")]
    rows = [k for k, scenario in enumerate(bench.scenarios) if scenario.kind == "candidate"]
    if rows:
        out[:, rows] = _tried(bench, stage, rows)
    return out[0], out[1], out[2]


def _tried(bench: Bench, stage: str, rows: list[int]) -> FloatArray:
    """The same three currents in some scenarios, (3, n)."""
    circuit = nominal_circuit(bench.circuit)
    index = bench.stage(stage).index
    low, high = gain_limits(circuit, stage)
    gains = [Change(part=stage, property="bf", value=bf) for bf in (low, high, high * NO_BASE_CURRENT)]
    tried = [bench.scenarios[k] for k in rows]
    scenarios = [replace(each, changes=(*each.changes, gain)) for each in tried for gain in gains]
    stack = with_changes(circuit, [Scenario(name="nominal"), *scenarios])
    none = 3 + 3 * np.arange(len(rows))
    point = operating_point(_leakless(stack, none, np.full(len(rows), index)), near=bench.nominal_point)
    return np.abs(point.transistor["i_out_a"][1:, index]).reshape(-1, 3).T


def gain_limits(circuit: Circuit, device: str) -> tuple[float, float]:
    """Lowest and highest BF of a device: its card's range of gain over its typical, else half and twice.

    The card gives the terminal gain at a stated current; BF is moved in the same proportion.
    """
    fact = circuit.parts.get(device)
    bf = float(circuit.bipolars.params["bf"][0, circuit.bipolars.names.index(device)])
    if fact is None or fact.gain_min is None or fact.gain_max is None:
        return 0.5 * bf, 2.0 * bf
    typical = float(np.sqrt(fact.gain_min * fact.gain_max))
    return bf * fact.gain_min / typical, bf * fact.gain_max / typical


@quantity("gain_spread_ratio", "", "stage", "collector current at the highest over the lowest current gain of the part")
def gain_spread_ratio(bench: Bench, stage: str) -> Figure:
    """Each device moved alone, at the nominal temperature."""
    require_bias(bench, stage)
    if bench.family(stage) != "bipolar":
        return missing("gain_spread_ratio", stage, bench.size, "", "not applicable: no current gain")
    low, high, _ = _answered(bench, stage)
    ratio = np.maximum(high, low) / np.minimum(high, low)
    bf = gain_limits(bench.circuit, stage)
    made = nominal(
        "gain_spread_ratio",
        stage,
        first(ratio),
        bench.size,
        "",
        formula="IC at highest gain / IC at lowest gain",
        numbers=(
            *(("IC high", first(high), "A"), ("IC low", first(low), "A")),
            *(("BF low", bf[0], ""), ("BF high", bf[1], "")),
        ),
        source="stacked solve over the part's gain range",
    )
    return replace(made, values=ratio[:, None])


@quantity("divider_shift", "%", "stage", "collector current against that of the same circuit without base current")
def divider_shift(bench: Bench, stage: str) -> Figure:
    """|IC/IC(IB = 0) - 1| where a divider feeds the base; at nominal gain (scenario 0)."""
    require_bias(bench, stage)
    if bench.family(stage) != "bipolar":
        return missing("divider_shift", stage, bench.size, "%", "not applicable: no base current")
    if len(base_feeds(bench, stage)) < 2:
        return missing("divider_shift", stage, bench.size, "%", "not applicable: no divider feeds the base")
    _, _, ideal = _answered(bench, stage)
    ic = np.abs(bench.point.transistor["i_out_a"][:, bench.stage(stage).index])
    shift = np.abs(ic / ideal - 1.0)
    made = nominal(
        "divider_shift",
        stage,
        first(shift),
        bench.size,
        "%",
        formula="|IC/IC(IB = 0) - 1|",
        numbers=(("IC", first(ic), "A"), ("IC(IB = 0)", first(ideal), "A")),
        source="stacked solve with and without base current",
    )
    return replace(made, values=shift[:, None])


def base_feeds(bench: Bench, stage: str) -> tuple[str, ...]:
    """Resistors that lead from the base net, or from a net one series resistor away, to a supply; sorted.

    A supply is a net of known voltage, or a net behind a resistor from one with a capacitor to ground (a filter).
    """
    c = bench.circuit
    base = int(c.transistors.nodes[bench.stage(stage).index, CONTROL])
    supplies = _supplies(bench)
    taken = set(c.transistors.nodes.ravel().tolist())
    near = {base} | {far for _, far in resistors_on(c, base) if far not in taken and far not in supplies}
    return tuple(sorted({name for node in near for name, far in resistors_on(c, node) if far in supplies}))


def _supplies(bench: Bench) -> set[int]:
    c = bench.circuit
    known = set(np.flatnonzero(bench.point.plan.is_known).tolist())
    held = {x for a, b in c.capacitors.nodes.tolist() for x, far in ((a, b), (b, a)) if far in known}
    return known | {node for node in held if any(far in known for _, far in resistors_on(c, node))}


@quantity("base_dc_path", "", "stage", "1 where direct base current has a path other than the device's own junctions")
def base_dc_path(bench: Bench, stage: str) -> Figure:
    """Structure alone: resistors, coils, sources, diodes and other devices lead from the base to a known net.

    Raises CannotTell where nothing does but a connector or a part without a model may.
    """
    reached = reach(bench, stage)
    found = bool(bench.point.plan.is_known[list(reached)].any()) or bool(current_fed(bench, reached))
    if not found:
        require_not_fed(bench, stage, reached)
    values = np.full(bench.size, 1.0 if found else 0.0)
    return figure("base_dc_path", stage, values, "", formula="a chain of conducting parts from the base to a supply")
