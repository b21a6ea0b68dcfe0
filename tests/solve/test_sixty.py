"""The sixty circuits: certified, where their arithmetic says, in balance, and by which helper."""

from __future__ import annotations

import numpy as np
import pytest

from checker.circuit.types import Circuit
from checker.solve.newton import signs
from checker.solve.operating import OperatingPoint, operating_point
from checker.solve.poles import growing_poles
from checker.solve.states import searched
from tests.solve.helpers import KINDS, helper_of, print_table
from tests.solve.sixty import SIXTY, Entry

EACH = pytest.mark.parametrize("entry", SIXTY, ids=lambda entry: entry.name)


EPS = float(np.finfo(float).eps)


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
    rounding = 4.0 * EPS * (float(np.sum(ends**2 / c.resistors.value[0])) + _in_leads(point))
    assert abs(heat - given) <= 1e-9 * abs(heat) + rounding


def _in_leads(point: OperatingPoint) -> float:
    """V^2/R of the devices' own leads [W], V being what they stand at: bounds the rounding of the power in them."""
    total = 0.0
    for kind, placed in point.plan.placed.items():
        for name, outer, _ in placed.model.INNER:
            r = point.circuit.devices[kind].params[name][0]
            volts = point.v_v[0, placed.nodes[:, outer]]
            total += float(np.sum(np.where(r > 0.0, volts**2 / np.where(r > 0.0, r, 1.0), 0.0)))
    return total


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
LATCH = pytest.mark.parametrize("entry", LATCHES, ids=lambda entry: entry.name)


def _with_charges(entry: Entry, held: str = "") -> Circuit:
    """The circuit with a picofarad at every net, so that it has poles; `held`: a net tied to ground by an ohm."""
    b = entry.bench()
    for net in [n for n in b._nets if n not in ("0", "vcc", "in")]:
        b.c(f"CP{net}", net, "0", 1e-12)
    if held:
        b.r("RHELD", held, "0", 1.0)
    return b.circuit()


def _grows(point: OperatingPoint) -> bool:
    """Whether a real pole grows: a balance that nothing rests in."""
    grow = growing_poles(point)
    return bool(np.any(np.abs(grow.imag) <= 1e-6 * np.abs(grow)))


@LATCH
def test_a_latch_let_go_rests_on_either_side(entry: Entry) -> None:
    """Both rests, certified, with det J > 0 and no growing pole; a volt apart somewhere."""
    rests = []
    for net in entry.held:
        start, let_go = operating_point(_with_charges(entry, net)), operating_point(_with_charges(entry))
        x = let_go.solved.x.copy()
        known = let_go.plan.unknown >= 0
        x[0, let_go.plan.unknown[known]] = start.v_v[0, np.flatnonzero(known)]
        rest = operating_point(let_go.circuit, near=let_go, x0=x)
        assert all(island.ok.all() for island in rest.islands)
        assert (signs(rest.assembler, rest.solved.x) > 0.0).all()
        assert not _grows(rest)
        rests.append(rest.v_v[0])
    assert len(rests) == entry.rests
    assert np.nanmax(np.abs(rests[0] - rests[1])) > 1.0


@LATCH
def test_the_balance_of_a_latch_is_refused_or_left(entry: Entry) -> None:
    """A plain start finds the point between the rests: its currents balance, its det J < 0 and it grows. What is
    reported is a rest that a supply ramp leads to, or nothing, with the reason."""
    balance = operating_point(_with_charges(entry))
    assert all(island.ok.all() and (island.kcl <= 1e-9).all() for island in balance.islands)
    assert (signs(balance.assembler, balance.solved.x) < 0.0).any()
    assert _grows(balance)
    told = searched(balance)
    (island,) = (each for each in told.islands if each.states > 1)
    if island.ok.all():
        assert not _grows(told)
        assert np.nanmax(np.abs(told.v_v[0] - balance.v_v[0])) > 0.1
    else:
        assert "the balance between them is none" in island.reason
        assert np.isnan(told.v_v[0]).any()


def test_named_kinds_are_all_there() -> None:
    names = {entry.name for entry in SIXTY}
    for kind, members in KINDS.items():
        assert len(members) >= 2 and set(members) <= names, kind


def test_size_of_the_feedback_amplifiers() -> None:
    counts = {entry.name: len(entry.bench().circuit().bipolars.names) for entry in SIXTY}
    assert counts["power_amplifier_of_ten"] == 10
    assert counts["operational_amplifier_of_seventeen"] == 17
    assert counts["amplifier_of_forty"] == 40


def test_table_of_helpers(capsys: pytest.CaptureFixture[str]) -> None:
    """The table has a line a circuit, each with the helper that the circuit states and that was needed."""
    print_table()
    lines = capsys.readouterr().out.splitlines()
    told = {line.split("|")[1].strip(): line.split("|")[4].strip() for line in lines if line.startswith("| ")}
    assert all(told[entry.name] == entry.helper for entry in SIXTY)


@pytest.mark.parametrize("t_c", [-40.0, 125.0])
@EACH
def test_at_the_ends_of_the_temperature_range(entry: Entry, t_c: float) -> None:
    point = operating_point(entry.bench(t_c).circuit())
    assert all(island.ok.all() for island in point.islands)
