"""Cold starts: ordinary stages in few passes, hard circuits at all, always with the full certificate."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
import pytest

from checker.constants import FIRST_RUNG, KCL_REL, STEP_ABS_V, STEP_REL
from checker.solve.counters import COUNTERS
from checker.solve.operating import OperatingPoint, operating_point, self_heated
from tests.bench import Bench
from tests.reference.boards import ALL, NPN, PNP, SIGNAL_DIODE, Board
from tests.reference.mixed_boards import NMOS, PMOS, SOFT_ZENER

ORDINARY_PASSES = 15


def _certified(b: Bench) -> OperatingPoint:
    point = operating_point(b.circuit())
    for island in point.islands:
        assert island.ok.all(), island
        assert (island.kcl <= KCL_REL).all()
        assert (island.step_v <= STEP_ABS_V + STEP_REL * 1e4).all()
    return point


@pytest.mark.parametrize("make", ALL, ids=[make.__name__ for make in ALL])
def test_ordinary_stages_need_few_passes(make: Callable[[], Board]) -> None:
    circuit = make().bench.circuit()
    COUNTERS.reset()
    point = operating_point(circuit)
    assert all(island.ok.all() for island in point.islands)
    assert 1 < COUNTERS.newton_passes <= ORDINARY_PASSES


def _darlington_chain() -> Bench:
    b = Bench(27.0)
    b.v("VCC", "vcc", "0", 30.0)
    b.r("RB", "vcc", "n0", 10e6)
    for j in range(5):
        b.q(f"Q{j}", "vcc", f"n{j}", f"n{j + 1}", **NPN)
    b.r("RE", "n5", "0", 100.0)
    return b


def _high_gain_feedback() -> Bench:
    """Three common-emitter stages with direct feedback from the last collector to the first base."""
    b = Bench(27.0)
    b.v("VCC", "vcc", "0", 15.0)
    for j in range(3):
        b.r(f"RC{j}", "vcc", f"c{j}", 10e3)
        b.q(f"Q{j}", f"c{j}", "b0" if j == 0 else f"c{j - 1}", "0", **NPN)
    b.r("RF", "c2", "b0", 1e6)
    b.r("RG", "b0", "0", 1e5)
    return b


def _output_stage() -> Bench:
    """Differential input, current sources, driver, VBE multiplier, Darlington outputs, overall feedback."""
    b = Bench(27.0)
    b.v("VP", "vp", "0", 30.0)
    b.v("VN", "vn", "0", -30.0)
    b.r("RIN", "ip", "0", 22e3)
    b.q("Q1", "a", "ip", "t", pnp=True, **PNP)
    b.q("Q2", "m", "im", "t", pnp=True, **PNP)
    b.r("RT", "vp", "t", 15e3)
    b.q("Q3", "a", "m", "vn", **NPN)
    b.q("Q4", "m", "m", "vn", **NPN)
    b.q("Q5", "lo", "a", "ed", **NPN)
    b.r("RD", "ed", "vn", 100.0)
    b.r("RX", "hi", "xb", 2.2e3)
    b.r("RY", "xb", "lo", 680.0)
    b.q("Q6", "hi", "xb", "lo", **NPN)
    b.r("RI", "vp", "hi", 4.7e3)
    b.q("Q7", "vp", "hi", "d1", **NPN)
    b.q("Q8", "vp", "d1", "e1", **NPN)
    b.q("Q9", "vn", "lo", "d2", pnp=True, **PNP)
    b.q("Q10", "vn", "d2", "e2", pnp=True, **PNP)
    b.r("RDD", "d1", "d2", 220.0)
    b.r("RE1", "e1", "o", 0.33)
    b.r("RE2", "o", "e2", 0.33)
    b.r("RF", "o", "im", 22e3)
    b.r("RG", "im", "g", 1e3)
    b.c("CG", "g", "0", 100e-6)
    b.r("RL", "o", "0", 8.0)
    return b


def _four_hundred_volts() -> Bench:
    b = Bench(27.0)
    b.v("VCC", "vcc", "0", 400.0)
    b.r("RC", "vcc", "c", 150e3)
    b.r("RF", "c", "b", 1.5e6)
    b.r("RB", "b", "0", 10e3)
    b.q("Q1", "c", "b", "0", **{**NPN, "vaf": 800.0})
    return b


def _microvolts() -> Bench:
    b = Bench(27.0)
    b.v("VCC", "vcc", "0", 3e-6)
    b.r("RC", "vcc", "c", 1e3)
    b.r("RB", "vcc", "b", 1e5)
    b.q("Q1", "c", "b", "0", **NPN)
    return b


def _zero_volts() -> Bench:
    b = Bench(27.0)
    b.v("VCC", "vcc", "0", 0.0)
    b.r("RC", "vcc", "c", 1e3)
    b.r("RB", "vcc", "b", 1e5)
    b.q("Q1", "c", "b", "0", **NPN)
    return b


def _straight_across() -> Bench:
    """Base straight on 5 V: only lead resistances and high injection limit tens of amperes."""
    b = Bench(27.0)
    b.v("V", "v", "0", 5.0)
    b.q("Q1", "v", "v", "0", **NPN)
    b.d("D1", "v", "0", rs=0.5, is_=1e-9, n=1.8)
    return b


def _class_b() -> Bench:
    """No bias at all between the bases; off at rest."""
    b = Bench(27.0)
    b.v("VP", "vp", "0", 12.0)
    b.v("VN", "vn", "0", -12.0)
    b.v("VI", "i", "0", 0.0)
    b.q("Q1", "vp", "i", "o", **NPN)
    b.q("Q2", "vn", "i", "o", pnp=True, **PNP)
    b.r("RL", "o", "0", 8.0)
    return b


def _diode_string() -> Bench:
    """Twenty diodes in series, and a rectifier bridge backwards."""
    b = Bench(27.0)
    b.v("V", "n0", "0", 24.0)
    for j in range(20):
        b.d(f"D{j}", f"n{j}", f"n{j + 1}", is_=1e-12, rs=0.1)
    b.r("R", "n20", "0", 1e3)
    b.d("DX", "0", "n10", is_=1e-12, bv=6.0)
    return b


def _reverse_avalanche() -> Bench:
    b = Bench(27.0)
    b.v("V", "v", "0", 300.0)
    b.r("R", "v", "x", 1e3)
    b.d("D1", "0", "x", bv=33.0, ibv=1e-3, rs=2.0)
    b.d("D2", "0", "y", bv=15.0, ibv=1e-3)
    b.r("R2", "x", "y", 1e3)
    return b


def _schmitt() -> Bench:
    """Emitter-coupled pair with positive feedback, well past its threshold."""
    b = Bench(27.0)
    b.v("VCC", "vcc", "0", 9.0)
    b.v("VI", "b1", "0", 4.0)
    b.r("RC1", "vcc", "c1", 3.3e3)
    b.r("RC2", "vcc", "c2", 1e3)
    b.r("RE", "e", "0", 470.0)
    b.r("RX", "c1", "b2", 10e3)
    b.r("RY", "b2", "0", 10e3)
    b.q("Q1", "c1", "b1", "e", **NPN)
    b.q("Q2", "c2", "b2", "e", **NPN)
    return b


HARD = (
    _darlington_chain, _high_gain_feedback, _output_stage, _four_hundred_volts, _microvolts, _zero_volts,
    _straight_across, _class_b, _diode_string, _reverse_avalanche, _schmitt,
)  # fmt: skip


@pytest.mark.parametrize("make", HARD, ids=[make.__name__.strip("_") for make in HARD])
def test_hard_circuits_are_certified(make: Callable[[], Bench]) -> None:
    COUNTERS.reset()
    point = _certified(make())
    assert np.isfinite(point.v_v[:, point.plan.unknown >= 0]).all()
    assert COUNTERS.newton_passes < 400


def test_output_stage_rests_where_feedback_puts_it() -> None:
    point = _certified(_output_stage())
    assert abs(point.v_v[0, point.circuit.node("o")]) < 0.5
    assert (np.abs(point.bipolar["ic_a"][0]) > 1e-6).all()


def test_zero_supply_gives_zero_everywhere() -> None:
    point = _certified(_zero_volts())
    np.testing.assert_allclose(point.v_v, 0.0, atol=1e-12)


@pytest.mark.parametrize("t_c", [-55.0, 27.0, 175.0])
def test_over_temperature(t_c: float) -> None:
    b = Bench(t_c)
    b.v("VCC", "vcc", "0", 10.0)
    b.r("R1", "vcc", "b", 10e3)
    b.r("R2", "b", "0", 2.2e3)
    b.r("RC", "vcc", "c", 3.6e3)
    b.r("RE", "e", "0", 1e3)
    b.q("Q1", "c", "b", "e", tnom_c=27.0, **NPN)
    ic = float(_certified(b).bipolar["ic_a"][0, 0])
    assert 0.8e-3 < ic < 1.6e-3


def test_helpers_reach_the_same_answer_as_the_plain_start() -> None:
    """The ladders themselves, on circuits that do not need them: same voltages, no helper left in."""
    from checker.solve import newton
    from checker.solve.assemble import Assembler
    from checker.solve.settling import settle

    assert 0.0 < FIRST_RUNG < 1.0
    by_conductance = lambda a, x, done: newton.follow(a, x, done, newton.BY_CONDUCTANCE)  # noqa: E731
    by_sources = lambda a, x, done: newton.follow(a, x, done, newton.BY_SOURCES)  # noqa: E731
    for make in ALL:
        point = operating_point(make().bench.circuit())
        a = Assembler(point.circuit, point.plan, point.device_k)
        count = sum(g[1] for g in point.plan.groups)
        none = np.zeros((1, count), dtype=bool)
        for climb in (by_conductance, by_sources, settle):
            x, reached = climb(a, np.zeros((1, point.plan.n_unknown)), none)
            assert reached.all(), make.__name__
            np.testing.assert_allclose(x, point.solved.x, rtol=1e-7, atol=1e-9, err_msg=make.__name__)


def test_self_heating_closes_its_loop() -> None:
    """TJ - TA = P Rth at the solution, to the hundredth of a kelvin at which the rounds stop."""
    b = Bench(25.0)
    b.v("VCC", "vcc", "0", 12.0)
    b.r("RB", "vcc", "b", 56e3)
    b.r("RC", "vcc", "c", 100.0)
    b.r("RE", "e", "0", 22.0)
    b.q("Q1", "c", "b", "e", rth=200.0, **NPN)
    cold = _certified(b)
    hot = self_heated(cold)
    rise = hot.device_k["bipolar"][0, 0] - 298.15
    assert rise > 20.0
    np.testing.assert_allclose(rise, hot.bipolar["power_w"][0, 0] * 200.0, atol=0.05)
    assert hot.bipolar["ic_a"][0, 0] > cold.bipolar["ic_a"][0, 0]


# --- once found wrong ------------------------------------------------------------------------------------------


@pytest.mark.parametrize("device", [NPN, {"bf": 280.0, "vaf": 74.0}], ids=["inner base", "no inner nodes"])
def test_grounded_base_does_not_part_collector_from_emitter(device: dict[str, float]) -> None:
    """With its base at a known voltage a transistor's other nets were once islands of their own."""
    b = Bench(27.0)
    b.v("VP", "vp", "0", 12.0)
    b.v("VN", "vn", "0", -12.0)
    b.r("RC", "vp", "c", 2.2e3)
    b.r("RE", "e", "vn", 5.6e3)
    b.q("Q1", "c", "0", "e", **device)
    point = _certified(b)
    assert len(point.islands) == 1
    np.testing.assert_allclose(point.bipolar["ic_a"], 2.0e-3, rtol=0.02)


def test_transistor_that_is_off_is_certified() -> None:
    """Leakage behind 0.9 ohm at 12 V cannot balance better than doubles at 12 V allow; that is no failure."""
    b = Bench(27.0)
    b.v("VCC", "vcc", "0", 12.0)
    b.r("RB", "b", "0", 4.7e3)
    b.r("RC", "vcc", "c", 1e3)
    b.q("Q1", "c", "b", "0", **NPN)
    point = _certified(b)
    assert 0.0 < point.bipolar["ic_a"][0, 0] < 1e-11


def test_transistor_without_any_supply_is_certified() -> None:
    """All currents are zero; a balance of 1e-23 A against nothing is no failure."""
    b = Bench(27.0)
    b.v("VCC", "vcc", "0", 12.0)
    for j in range(3):
        b.r(f"R{j}", f"n{j}", "0", 100.0)
    b.r("R3", "n0", "n2", 50.0)
    b.q("Q1", "n0", "n1", "n2", **NPN)
    np.testing.assert_allclose(_certified(b).bipolar["ic_a"], 0.0, atol=1e-20)


def test_base_current_crowding_is_smooth_at_small_currents() -> None:
    """IRB form once jumped by 2e-6 of RB where its series takes over; here across that place in 1 % steps."""
    from checker.devices import bipolar
    from tests.devices.evaluated import bipolar_params

    rows = 400
    p = bipolar_params(PNP, rows)
    k = bipolar.core(p, np.linspace(0.30, 0.50, rows)[:, None], np.full((rows, 1), -5.0))
    r, slope, _ = bipolar.base_resistance(p, k)
    step = np.diff(r[:, 0])
    predicted = 0.5 * (slope[1:, 0] + slope[:-1, 0]) * (0.20 / (rows - 1))
    # Trapezoid over 0.5 mV of a curve bent on the scale of VT: 3e-5 of each step.
    np.testing.assert_allclose(step, predicted, rtol=1e-3, atol=1e-11)


@pytest.mark.parametrize("p_channel", [False, True])
@pytest.mark.parametrize("drain", [6.0, -1.0], ids=["as drawn", "drain below source"])
def test_a_body_on_a_rail_of_its_own(p_channel: bool, drain: float) -> None:
    """Voltages that the limiting leaves alone come back to the last digit; else such a stage never counts as settled.

    Many random values, since rounding is what would be wrong.
    """
    rng = np.random.default_rng(11)
    sign = -1.0 if p_channel else 1.0
    for _ in range(25):
        ohms = 10.0 ** rng.uniform(2.0, 5.0, 3)
        b = Bench(27.0)
        b.v("V", "vcc", "0", sign * drain * rng.uniform(0.9, 1.1))
        b.v("VB", "sub", "0", -9.0 * sign)
        b.v("VG", "vg", "0", sign * rng.uniform(-1.0, 5.0))
        b.r("RG", "vg", "g", ohms[0])
        b.r("RD", "vcc", "d", ohms[1])
        b.r("RS", "s", "0", ohms[2])
        b.m("M1", "d", "g", "s", "sub", p=p_channel, **(PMOS if p_channel else NMOS))
        point = _certified(b)
        assert int(point.solved.helper.max()) == 0


def test_settling_leaves_alone_what_is_done() -> None:
    """Two islands, of which the first is said to stand where it does not: only the second is moved."""
    from checker.solve.assemble import Assembler
    from checker.solve.settling import settle

    b = Bench(27.0)
    b.v("VCC", "vcc", "0", 12.0)
    for k in (1, 2):
        b.r(f"RB{k}", "vcc", f"b{k}", 1e6)
        b.r(f"RC{k}", "vcc", f"c{k}", 4.7e3)
        b.q(f"Q{k}", f"c{k}", f"b{k}", "0", **NPN)
    point = operating_point(b.circuit())
    a = Assembler(point.circuit, point.plan, point.device_k)
    x = np.full_like(point.solved.x, 0.1)
    out, reached = settle(a, x, np.array([[True, False]]))
    assert reached.all()
    moved = (out != x)[0]
    stays = a.island_sizes[0]
    assert not moved[:stays].any() and moved[stays:].all()
    np.testing.assert_allclose(out[0, stays:], point.solved.x[0, stays:], rtol=1e-7, atol=1e-9)


def test_a_tangle_that_two_ladders_do_not_climb() -> None:
    """Found among random circuits: an NPN without an emitter resistor feeds the base of a PNP whose emitter is its own
    collector, and two junctions from the supply hold the rest. Needs no sense, but an answer or a reason."""
    b = Bench(27.0)
    b.v("VP", "vcc", "0", 5.0)
    b.v("VN", "vee", "0", -9.0)
    b.r("R1", "n2", "vcc", 4.8e6)
    b.r("R2", "n4", "vee", 8.3e3)
    b.q("Q1", "n4", "n2", "n3", **NPN)
    b.m("M1", "n4", "0", "n2", "vee", **NMOS)
    b.d("D1", "vcc", "n0", **SIGNAL_DIODE)
    b.q("Q2", "n0", "n3", "n4", pnp=True, **PNP)
    b.d("D2", "vcc", "n0", **SOFT_ZENER)
    _certified(b)
