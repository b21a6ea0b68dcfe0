"""The sixty circuits: certified, where their arithmetic says, in balance, and by which helper."""

from __future__ import annotations

import numpy as np
import pytest

from checker.solve.newton import HELPERS
from checker.solve.operating import OperatingPoint, operating_point
from checker.solve.poles import growing_poles
from checker.solve.states import searched
from tests.solve.sixty import SIXTY, Entry

EACH = pytest.mark.parametrize("entry", SIXTY, ids=lambda entry: entry.name)


def helper_of(point: OperatingPoint) -> str:
    """The last rung of the ladder that any island needed."""
    return HELPERS[int(point.solved.helper.max(initial=0))]


def test_there_are_sixty_and_they_span_the_ranges() -> None:
    assert len(SIXTY) >= 60 and len({entry.name for entry in SIXTY}) == len(SIXTY)
    currents, volts = [], []
    for entry in SIXTY:
        point = operating_point(entry.bench().circuit())
        volts.append(np.abs(point.v_v[np.isfinite(point.v_v)]).max())
        tables = [t.get("ic_a", t.get("id_a", t.get("i_a"))) for t in point.devices.values()]
        currents += [np.abs(t).max() for t in tables if t is not None and t.size]
    assert min(volts) <= 1e-6 and max(volts) >= 400.0
    assert min(c for c in currents if c > 0.0) < 1e-11 and max(currents) > 9.0


@EACH
def test_certified_and_where_it_must_be(entry: Entry) -> None:
    point = operating_point(entry.bench().circuit())
    assert all(island.ok.all() for island in point.islands), [(i.nets, i.reason, i.kcl) for i in point.islands]
    for net, (low, high) in entry.expect.items():
        assert low <= point.v_v[0, point.circuit.node(net)] <= high, net
    assert helper_of(point) == entry.helper


@EACH
def test_power_taken_is_power_given(entry: Entry) -> None:
    """What resistors and devices turn into heat comes from the sources, to 1e-9 of it."""
    point = operating_point(entry.bench().circuit())
    c, v = point.circuit, point.v_v[0]
    drop = v[c.resistors.nodes[:, 0]] - v[c.resistors.nodes[:, 1]]
    heat = float(np.sum(drop**2 / c.resistors.value[0]))
    heat += sum(float(t["power_w"].sum()) for t in point.devices.values())
    given = -float(np.sum((v[c.currents.nodes[:, 0]] - v[c.currents.nodes[:, 1]]) * c.currents.value[0]))
    given += sum(_delivered(point, j) for j in range(len(c.voltages.names)))
    # A drop is known to the spacing of doubles at its ends' voltages, and so is the power at them.
    ends = np.abs(v[c.resistors.nodes]).max(axis=1)
    rounding = 4.0 * np.finfo(float).eps * float(np.sum(ends**2 / c.resistors.value[0]))
    assert abs(heat - given) <= 1e-9 * abs(heat) + rounding


def _delivered(point: OperatingPoint, source: int) -> float:
    """Power out of an ideal source: its voltage times the sum of all other currents out of its hot net.

    The test circuits have at most one source on a net besides ground, or a floating one with its current known.
    """
    c, plan, v = point.circuit, point.plan, point.v_v[0]
    row = plan.v_row[source]
    volts = float(c.voltages.value[0, source])
    if row >= 0:
        return -volts * float(point.solved.x[0, row])
    node = int(c.voltages.nodes[source, 0])
    total = 0.0
    for (a, b), r in zip(c.resistors.nodes.tolist(), c.resistors.value[0].tolist(), strict=True):
        total += (v[a] - v[b]) / r * ((a == node) - (b == node))
    for (a, b), i in zip(c.currents.nodes.tolist(), c.currents.value[0].tolist(), strict=True):
        total += i * ((a == node) - (b == node))
    for kind, placed in plan.placed.items():
        at = point.assembler.junctions(point.assembler.voltages(point.solved.x))
        place = list(plan.placed).index(kind)
        polarity = c.devices[kind].polarity
        i = placed.model.evaluate(point.assembler.p[kind], polarity, point.v_v[:, placed.nodes], at[place], 0.0).i
        total += float(i[0][placed.nodes == node].sum())
    return volts * total


@EACH
def test_rests_are_counted(entry: Entry) -> None:
    point = searched(operating_point(entry.bench().circuit()))
    assert max(island.states for island in point.islands) == entry.rests


LATCHES = [entry for entry in SIXTY if entry.rests > 1]


@pytest.mark.parametrize("entry", LATCHES, ids=lambda entry: entry.name)
def test_what_is_reported_of_a_latch_is_a_rest(entry: Entry) -> None:
    """The certified balance has det J > 0 and no growing real pole once charges are there."""
    b = entry.bench()
    for net in [n for n in b._nets if n not in ("0", "vcc", "in")]:
        b.c(f"CP{net}", net, "0", 1e-12)
    point = searched(operating_point(b.circuit()))
    grow = growing_poles(point)
    rest = not np.any(np.abs(grow.imag) <= 1e-6 * np.abs(grow))
    refused = any(island.states > 1 for island in point.islands)
    assert rest or refused


@pytest.mark.parametrize("t_c", [-40.0, 125.0])
@EACH
def test_at_the_ends_of_the_temperature_range(entry: Entry, t_c: float) -> None:
    point = operating_point(entry.bench(t_c).circuit())
    assert all(island.ok.all() for island in point.islands)
