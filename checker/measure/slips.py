"""Values off by a unit: is there one part whose value, a thousand times larger or smaller, would set the stage right?

A stage that rests wrong is solved again with each resistor around it a factor of ten and of a thousand up and down, all
in one stack; a capacitor that loses nearly everything is asked again a thousand times larger. What ten mends is design;
only what takes a thousand, of one part alone, looks like p for n, or k for M.
"""

from __future__ import annotations

import numpy as np

from checker.arrays import FloatArray
from checker.circuit.changes import with_changes
from checker.circuit.types import Change, Scenario
from checker.measure.bench import Bench
from checker.measure.bias import kept
from checker.measure.capacitors import own_loss
from checker.measure.feeds import reach, require_not_fed, require_supplied
from checker.measure.make import missing, nominal
from checker.measure.registry import quantity
from checker.measure.single import nominal_circuit
from checker.quantity.figure import Figure
from checker.shape import frozen
from checker.solve.operating import OperatingPoint, operating_point
from checker.stages.region import REGIONS, region_codes
from checker.trouble import CannotTell

DECADES = (-3, -1, 1, 3)
LEAST_A, MOST_A = 10e-6, 0.1
"""Currents that a stage rests at, where its value is right (common practice, no source)."""
MOST_W = 0.5
"""No resistor of a right board takes more in a stage's bias (common practice, no source)."""
MOST_STAGES = 12
"""Stages of a board that are looked at; a board with more that rest wrong has another trouble."""
MOST_RIDE = 1.5
"""Twice the current gain may raise the current of a right bias by half at most."""
LOST_DB = 29.5
"""Own loss of a capacitor whose corner is thirty times off: 20 log10 30."""
KEPT_DB = 12.0
"""Own loss of one whose corner is within four times."""


@frozen
class Slip:
    """`part` whose value is off by `decades` (of ten, signed: what to multiply by); `current_a` and `drop_v` the stage
    would then rest at."""

    part: str
    decades: int
    current_a: float
    drop_v: float


def slips(bench: Bench) -> dict[str, Slip]:
    """Stage -> its slip, where there is one; kept."""
    if "slips" not in bench.kept:
        found: dict[str, Slip] = {}
        for stage in [each.id for each in bench.recognition.stages if _rests_wrong(bench, each.id)][:MOST_STAGES]:
            slip = _of_resistors(bench, stage)
            if slip is not None:
                found[stage] = slip
        bench.kept["slips"] = found
    known = bench.kept["slips"]
    assert isinstance(known, dict)  # noqa: S101 - narrows the type
    return known


@quantity("slip_decades", "", "stage", "powers of ten by which one part's value is off, as the stage's rest tells")
def slip_decades(bench: Bench, stage: str) -> Figure:
    """0 where the stage rests well or no single part explains that it does not; 1 where ten times is enough."""
    if not np.isfinite(_current(bench, stage)):
        return missing("slip_decades", stage, bench.size, "", "not applicable: no certified operating point")
    slip = slips(bench).get(stage)
    return nominal(
        "slip_decades",
        stage,
        0.0 if slip is None else float(abs(slip.decades)),
        bench.size,
        "",
        formula="log10 of the one factor on one part that sets the stage right",
        source="stacked solve over the resistors around the stage",
    )


def _current(bench: Bench, stage: str) -> float:
    """Output current of a stage's device at nominal [A]."""
    return float(abs(bench.nominal_point.transistor["i_out_a"][0, bench.stage(stage).index]))


def _rests_wrong(bench: Bench, stage: str) -> bool:
    """Cut off, saturated, or at next to no current; not where something off the board may decide."""
    code, current = kept(bench, "regions")[0, bench.stage(stage).index], _current(bench, stage)
    if bench.stage(stage).configuration == "switch" or not np.isfinite(current):
        return False
    if REGIONS[int(code)] == "active" and current >= LEAST_A:
        return False
    try:
        require_not_fed(bench, stage, reach(bench, stage))
        require_supplied(bench, stage)
    except CannotTell:
        return False
    return True


def _of_resistors(bench: Bench, stage: str) -> Slip | None:
    """A resistor that a factor of ten mends, else the only one that a thousand does."""
    circuit, index = nominal_circuit(bench.circuit), bench.stage(stage).index
    tried = [(name, decades) for name in _around(bench, stage) for decades in DECADES]
    if not tried:
        return None
    scenarios = [
        Scenario(
            name=f"{name} {decades}",
            kind="sample",
            changes=(Change(part=name, property="factor", value=10.0**decades),),
        )
        for name, decades in tried
    ]
    stack = with_changes(circuit, [Scenario(name="nominal"), *scenarios])
    point = operating_point(stack, near=bench.nominal_point, quick=True)
    well = _rests_well(point, index)[1:]
    cures = [(k, name, decades) for k, (name, decades) in enumerate(tried, start=1) if well[k - 1]]
    cures = _steady(bench, stage, cures, point)
    cures.sort(key=lambda cure: abs(cure[2]))
    if not cures or (abs(cures[0][2]) > 1 and len({name for _, name, _ in cures}) > 1):
        return None
    row, name, decades = cures[0]
    return Slip(
        part=name,
        decades=decades,
        current_a=float(abs(point.transistor["i_out_a"][row, index])),
        drop_v=float(point.transistor["v_out_v"][row, index]),
    )


def _steady(
    bench: Bench, stage: str, cures: list[tuple[int, str, int]], point: OperatingPoint
) -> list[tuple[int, str, int]]:
    """The cures whose current does not ride on the current gain: a bias through megohms is not what was meant."""
    if not cures or bench.family(stage) != "bipolar":
        return cures
    device, index = bench.stage(stage).device, bench.stage(stage).index
    gain = Change(part=device, property="factor", value=2.0)
    scenarios = [
        Scenario(name=f"{name} {decades}", kind="sample", changes=(_times(name, decades), gain))
        for _, name, decades in cures
    ]
    stack = with_changes(nominal_circuit(bench.circuit), [Scenario(name="nominal"), *scenarios])
    moved = operating_point(stack, near=bench.nominal_point, quick=True).transistor["i_out_a"][1:, index]
    before = point.transistor["i_out_a"][[row for row, _, _ in cures], index]
    return [cure for cure, ratio in zip(cures, np.abs(moved / before), strict=True) if ratio < MOST_RIDE]


def _times(part: str, decades: int) -> Change:
    return Change(part=part, property="factor", value=10.0**decades)


def _around(bench: Bench, stage: str) -> list[str]:
    """Resistors on the device's nets and on the nets one resistor away, as far as these are not fixed."""
    c, known = bench.circuit, bench.point.plan.is_known
    nets = {node for node in c.transistors.nodes[bench.stage(stage).index].tolist() if not known[node]}
    for a, b in c.resistors.nodes.tolist():
        if (a in nets) != (b in nets):
            nets |= {node for node in (a, b) if not known[node]}
    pairs = zip(c.resistors.names, c.resistors.nodes.tolist(), strict=True)
    return [name for name, ends in pairs if name in c.parts and nets & set(ends)][:24]


def _rests_well(point: OperatingPoint, index: int) -> FloatArray:
    """(S,): active, at a usual current, and no resistor of the board hotter than any such board's."""
    codes = region_codes(point)[:, index]
    current = np.abs(point.transistor["i_out_a"][:, index])
    r = point.circuit.resistors
    drop = point.v_v[:, r.nodes[:, 0]] - point.v_v[:, r.nodes[:, 1]]
    hottest = np.nan_to_num(drop**2 / r.value).max(axis=1, initial=0.0)
    allowed = np.maximum(MOST_W, hottest[0])
    active = codes == REGIONS.index("active")
    return np.asarray(active & (current >= LEAST_A) & (current <= MOST_A) & (hottest <= allowed))


def larger_would_pass(bench: Bench, part: str) -> bool:
    """Whether a capacitor a thousand times larger would lose next to nothing of the band's edges."""
    change = Change(part=part, property="factor", value=1e3)
    stack = with_changes(
        nominal_circuit(bench.circuit),
        [Scenario(name="nominal"), Scenario(name="larger", kind="sample", changes=(change,))],
    )
    point = operating_point(stack, near=bench.nominal_point)
    other = Bench(stack, point, bench.recognition, bench.ports, bench.band_hz, bench.f0_hz, bench.nominal_point)
    return bool(np.nanmax(own_loss(other, part).values[1], initial=0.0) < KEPT_DB)
