"""What holds for the operating point of any circuit of bipolars, FETs and diodes: balances, scaling, slopes."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from checker.constants import ZERO_CELSIUS_K, thermal_voltage_v
from checker.solve.operating import OperatingPoint, operating_point
from checker.solve.response import Drive, small_signal
from tests.bench import Bench
from tests.solve.random_circuits import steady
from tests.solve.random_mixed import MODELS, Mixed, mixed

KCL = 1e-9
TERMINALS = {
    "bipolar": ("ic_a", "ib_a", "ie_a"),
    "jfet": ("id_a", "ig_a", "is_a"),
    "diode": ("i_a", "-i_a"),
}
LEAD_ROUNDING_A = 1e-14
"""A lead resistance of 1 ohm at 12 V resolves 2 fA."""


def _solved(b: Bench) -> OperatingPoint:
    point = operating_point(b.circuit())
    assert all(island.ok.all() for island in point.islands), point.islands
    return point


def _net_currents(point: OperatingPoint) -> tuple[np.ndarray, np.ndarray]:
    """Sum and largest magnitude of the currents that resistors and devices take out of each net, (n_net,).

    A MOSFET's body and source currents are those of the conductances and channel that its matrix shows (`figures` has
    them together), taken from its own evaluation.
    """
    c, v = point.circuit, point.v_v[0]
    flows = []
    for (a, b), r in zip(c.resistors.nodes.tolist(), c.resistors.value[0].tolist(), strict=True):
        flows += [(a, (v[a] - v[b]) / r), (b, (v[b] - v[a]) / r)]
    for family, names in TERMINALS.items():
        if family in c.devices:
            for j, nodes in enumerate(c.devices[family].nodes.tolist()):
                for node, name in zip(nodes, names, strict=False):
                    value = point.devices[family][name.lstrip("-")][0, j]
                    flows.append((node, -value if name.startswith("-") else value))
    if "mosfet" in c.devices:
        place = list(point.plan.placed).index("mosfet")
        placed = point.plan.placed["mosfet"]
        at = point.assembler.junctions(point.assembler.voltages(point.solved.x))[place]
        i = placed.model.evaluate(
            point.assembler.p["mosfet"], c.devices["mosfet"].polarity, point.v_v[:, placed.nodes], at, 0.0
        ).i[0]
        for row, nodes in zip(i, placed.nodes.tolist(), strict=True):
            flows += list(zip(nodes, row.tolist(), strict=True))
    total, largest = np.zeros(point.v_v.shape[1]), np.zeros(point.v_v.shape[1])
    for node, current in flows:
        total[node] += current
        largest[node] = max(largest[node], abs(current))
    return total, largest


@steady
@given(mixed())
def test_currents_balance_at_every_net(drawn: Mixed) -> None:
    point = _solved(drawn.bench())
    total, largest = _net_currents(point)
    free = [point.circuit.node(n) for n in drawn.nets]
    assert (np.abs(total[free]) <= KCL * largest[free] + LEAD_ROUNDING_A).all()


@steady
@given(mixed())
def test_power_balances(drawn: Mixed) -> None:
    """What the rails deliver is what resistors and devices turn into heat."""
    point = _solved(drawn.bench())
    total, _ = _net_currents(point)
    c, v = point.circuit, point.v_v[0]
    delivered = sum(v[c.node(rail)] * total[c.node(rail)] for rail in ("vcc", "vee"))
    drop = v[c.resistors.nodes[:, 0]] - v[c.resistors.nodes[:, 1]]
    taken = float((drop**2 / c.resistors.value[0]).sum())
    taken += sum(float(table["power_w"][0].sum()) for table in point.devices.values())
    np.testing.assert_allclose(taken, delivered, rtol=1e-8, atol=1e-12)


@steady
@given(mixed(), st.sampled_from([1e-2, 0.5, 1e3]))
def test_scaling_all_impedances_keeps_voltages_and_divides_currents(drawn: Mixed, ohm: float) -> None:
    one, other = _solved(drawn.bench()), _solved(drawn.bench(ohm=ohm))
    n = len(one.circuit.nets)
    np.testing.assert_allclose(other.v_v[:, :n], one.v_v[:, :n], rtol=1e-7, atol=1e-8)
    for family, table in one.devices.items():
        for key in ("ic_a", "ib_a", "id_a", "ig_a", "i_a"):
            if key in table:
                np.testing.assert_allclose(other.devices[family][key] * ohm, table[key], rtol=1e-6, atol=1e-13)


@steady
@given(mixed())
def test_small_signal_is_the_slope_of_two_bias_solves(drawn: Mixed) -> None:
    point = _solved(drawn.bench())
    slope = small_signal(point, np.array([1e-6])).voltages(Drive(source=0))[0, 0]
    step = 1e-5 / max(1.0, float(np.nanmax(np.abs(slope))))
    moved = drawn.bench(rails={"vcc": [12.0, 12.0 + step, 12.0 - step], "vee": -9.0})
    three = operating_point(moved.circuit(), near=point)
    n = len(point.circuit.nets)
    measured = (three.v_v[1, :n] - three.v_v[2, :n]) / (2.0 * step)
    np.testing.assert_allclose(slope.real, measured, rtol=1e-5, atol=1e-12 / step)
    np.testing.assert_allclose(slope.imag, 0.0, atol=1e-6 * np.abs(slope).max())


def test_every_kind_is_drawn() -> None:
    """Each kind of device in the examples that the properties are tried on."""
    seen: set[str] = set()

    @steady
    @given(mixed())
    def look(drawn: Mixed) -> None:
        seen.update(kind for kind, _ in drawn.devices)

    look()
    assert seen == set(MODELS)


def _vbe(ic: float, i_sat: float, t_c: float, pnp: bool) -> float:
    b = Bench(t_c)
    sign = -1.0 if pnp else 1.0
    b.v("VC", "c", "0", sign * 5.0)
    b.i("IE", "e", "0", sign * ic)
    b.q("Q1", "c", "0", "e", pnp=pnp, is_=i_sat, bf=1e9, tnom_c=27.0)
    return float(_solved(b).bipolar["vbe_v"][0, 0])


@steady
@given(st.floats(-7.0, -2.0), st.floats(-17.0, -13.0), st.floats(-40.0, 125.0), st.booleans())
def test_vbe_falls_as_its_closed_form(log_ic: float, log_is: float, t_c: float, pnp: bool) -> None:
    """dVBE/dT = (VBE - EG - XTI VT)/T at constant current; every sample falls, by 1 to 3.4 mV/K."""
    ic, i_sat, t = 10.0**log_ic, 10.0**log_is, t_c + ZERO_CELSIUS_K
    slope = _vbe(ic, i_sat, t_c + 0.05, pnp) - _vbe(ic, i_sat, t_c - 0.05, pnp)
    wanted = (_vbe(ic, i_sat, t_c, pnp) - 1.11 - 3.0 * thermal_voltage_v(t)) / t
    # IS/BR of the blocked collector flows beside IC, and grows as IS does: at 125 degC by up to 3e5 times.
    assert slope / 0.1 == pytest.approx(wanted, rel=1e-3 + 3e5 * i_sat / ic * (1.0 if t_c > 60.0 else 0.0))
    assert -3.4e-3 < slope / 0.1 < -1.0e-3


@steady
@given(st.floats(-5.0, -2.0), st.floats(0.55, 0.7), st.booleans())
def test_vbe_falls_two_millivolts_a_kelvin(log_ic: float, vbe: float, pnp: bool) -> None:
    """-2 mV/K, common practice, no source: within a quarter at 27 degC for whatever has .55 to .7 V there."""
    ic = 10.0**log_ic
    i_sat = ic * np.exp(-vbe / thermal_voltage_v(300.15))
    slope = _vbe(ic, i_sat, 27.5, pnp) - _vbe(ic, i_sat, 26.5, pnp)
    assert slope == pytest.approx(-2e-3, rel=0.25)
