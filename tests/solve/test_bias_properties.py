"""What holds for the operating point of any circuit: balances, scaling, independence of stacking and numbering."""

from __future__ import annotations

import numpy as np
from hypothesis import given, settings
from hypothesis import strategies as st

from checker.solve.operating import OperatingPoint, operating_point
from checker.solve.response import Drive, small_signal
from tests.bench import Bench
from tests.solve.random_circuits import Drawn, circuits

KCL = 1e-9
"""The certificate's own bound."""


def _bench(drawn: Drawn, **kw: float) -> Bench:
    b = Bench(27.0)
    drawn.onto(b, **kw)
    return b


def _solved(b: Bench) -> OperatingPoint:
    point = operating_point(b.circuit())
    assert all(island.ok.all() for island in point.islands), point.islands
    return point


def _net_currents(point: OperatingPoint) -> tuple[np.ndarray, np.ndarray]:
    """Sum and largest magnitude of the currents that resistors and transistors take out of each net, (n_net,)."""
    c = point.circuit
    total, largest = np.zeros(len(c.nets)), np.zeros(len(c.nets))
    v = point.v_v[0]
    terms = [(a, b, (v[a] - v[b]) / r) for (a, b), r in zip(c.resistors.nodes, c.resistors.value[0], strict=True)]
    flows = [(a, i) for a, _, i in terms] + [(b, -i) for _, b, i in terms]
    for j, nodes in enumerate(c.bipolars.nodes):
        flows += [(nodes[k], point.bipolar[name][0, j]) for k, name in enumerate(("ic_a", "ib_a", "ie_a"))]
    for node, i in flows:
        total[node] += i
        largest[node] = max(largest[node], abs(i))
    return total, largest


@settings(max_examples=60, deadline=None)
@given(circuits())
def test_currents_balance_at_every_net(drawn: Drawn) -> None:
    point = _solved(_bench(drawn))
    total, largest = _net_currents(point)
    free = [point.circuit.node(n) for n in drawn.nets]
    # A lead resistance of 1 ohm at 12 V resolves 2 fA: leakage-only nets are as good as that.
    assert (np.abs(total[free]) <= KCL * largest[free] + 1e-14).all()


@settings(max_examples=60, deadline=None)
@given(circuits())
def test_power_balances(drawn: Drawn) -> None:
    """What the rails deliver is what resistors and transistors take."""
    point = _solved(_bench(drawn))
    total, _ = _net_currents(point)
    c, v = point.circuit, point.v_v[0]
    delivered = sum(v[c.node(rail)] * total[c.node(rail)] for rail in ("vcc", "vee"))
    drop = v[c.resistors.nodes[:, 0]] - v[c.resistors.nodes[:, 1]]
    taken = float((drop**2 / c.resistors.value[0]).sum() + point.bipolar["power_w"][0].sum())
    np.testing.assert_allclose(taken, delivered, rtol=1e-8, atol=1e-13)


@settings(max_examples=40, deadline=None)
@given(circuits(), st.sampled_from([1e-2, 0.5, 1e3]))
def test_scaling_all_impedances_keeps_all_voltages(drawn: Drawn, ohm: float) -> None:
    one, other = _solved(_bench(drawn)), _solved(_bench(drawn, ohm=ohm))
    n = len(one.circuit.nets)
    np.testing.assert_allclose(other.v_v[:, :n], one.v_v[:, :n], rtol=1e-7, atol=1e-8)
    np.testing.assert_allclose(other.bipolar["ic_a"] * ohm, one.bipolar["ic_a"], rtol=1e-6, atol=1e-13)


@settings(max_examples=40, deadline=None)
@given(circuits(), st.randoms(use_true_random=False))
def test_order_of_parts_and_nets_changes_nothing(drawn: Drawn, random: object) -> None:
    resistors, transistors = list(drawn.resistors), list(drawn.transistors)
    random.shuffle(resistors)  # type: ignore[attr-defined]
    random.shuffle(transistors)  # type: ignore[attr-defined]
    other = Drawn(nets=drawn.nets[::-1], resistors=tuple(resistors), transistors=tuple(transistors))
    one, two = _solved(_bench(drawn)), _solved(_bench(other))
    for net in drawn.nets:
        np.testing.assert_allclose(
            two.v_v[0, two.circuit.node(net)], one.v_v[0, one.circuit.node(net)], rtol=1e-7, atol=1e-8
        )


@settings(max_examples=30, deadline=None)
@given(circuits(), st.lists(st.floats(2.0, 30.0), min_size=2, max_size=5))
def test_stack_equals_one_by_one(drawn: Drawn, supplies: list[float]) -> None:
    stacked = Bench(27.0)
    drawn.onto(stacked, rails={"vcc": supplies, "vee": -9.0})  # type: ignore[dict-item]
    together = operating_point(stacked.circuit())
    for j, volt in enumerate(supplies):
        alone = Bench(27.0)
        drawn.onto(alone, rails={"vcc": volt, "vee": -9.0})
        np.testing.assert_allclose(together.v_v[j], operating_point(alone.circuit()).v_v[0], rtol=1e-8, atol=1e-8)


@settings(max_examples=30, deadline=None)
@given(circuits(), circuits())
def test_circuits_that_share_only_rails_do_not_meet(one: Drawn, other: Drawn) -> None:
    both = Bench(27.0)
    one.onto(both, prefix="a_")
    other.onto(both, prefix="b_")
    together = _solved(both)
    for drawn, prefix in ((one, "a_"), (other, "b_")):
        alone = _solved(_bench(drawn))
        for net in drawn.nets:
            np.testing.assert_allclose(
                together.v_v[0, together.circuit.node(prefix + net)],
                alone.v_v[0, alone.circuit.node(net)],
                rtol=1e-8,
                atol=1e-8,
            )


@settings(max_examples=40, deadline=None)
@given(circuits())
def test_small_signal_is_the_slope_of_two_bias_solves(drawn: Drawn) -> None:
    point = _solved(_bench(drawn))
    c = point.circuit
    slope = small_signal(point, np.array([1e-6])).voltages(Drive(source=0))[0, 0]
    step = 1e-5 / max(1.0, float(np.nanmax(np.abs(slope))))
    moved = Bench(27.0)
    drawn.onto(moved, rails={"vcc": [12.0, 12.0 + step, 12.0 - step], "vee": -9.0})  # type: ignore[dict-item]
    three = operating_point(moved.circuit(), near=point)
    n = len(c.nets)
    measured = (three.v_v[1, :n] - three.v_v[2, :n]) / (2.0 * step)
    # Third-order error of 10 uV at 26 mV: 2e-8; solver noise 1e-13 V over the step.
    np.testing.assert_allclose(slope.real, measured, rtol=1e-5, atol=1e-12 / step)
    np.testing.assert_allclose(slope.imag, 0.0, atol=1e-6 * np.abs(slope).max())
