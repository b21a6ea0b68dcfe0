"""Field-effect transistors against an independent form of their equations at 30 digits: currents, their
derivatives, temperature laws, and symmetry of drain and source (the solver's matrix: `test_complex_step`)."""

from __future__ import annotations

import mpmath as mp
import numpy as np
import pytest

from checker.devices import jfet, mosfet
from tests.devices.evaluated import JFET_SETS, MOSFET_SETS, jfet_params, mosfet_params
from tests.reference.fets import Jfet, Mosfet

mp.mp.dps = 30
JFET_AT = {
    "active": (-0.4, -6.0),
    "ohmic": (-0.4, -0.5),
    "reversed": (-5.0, -0.3),
    "reversed ohmic": (-0.6, -0.4),
    "cut off": (-4.0, -9.0),
    "gate forward": (0.55, -3.0),
    "gate in breakdown": (-0.5, -9.2),
    "reversed, in breakdown": (-9.1, -0.5),
    "one microvolt past pinch-off of the drain": (-0.3, -1.8 - 1e-6),
    "no drain voltage": (-0.2, -0.2 - 1e-6),
}
MOSFET_AT = {
    "active": (4.0, 6.0, 0.0),
    "ohmic": (5.0, 0.4, 0.0),
    "body behind": (4.0, 6.0, -2.0),
    "body ahead": (4.0, 3.0, 0.4),
    "reversed": (3.5, -2.0, -2.5),
    "reversed into the body diode": (0.0, -0.65, 0.0),
    "cut off": (-4.0, 9.0, 0.0),
    "a little under a threshold": (0.6, 2.0, 0.0),
    "under a threshold, no drain voltage": (0.65, 0.01, -0.1),
    "one microvolt of drain": (4.0, 1e-6, -1.0),
}
TEMPERATURES_C = (27.0, -40.0, 125.0)


@pytest.mark.parametrize("t_c", TEMPERATURES_C)
@pytest.mark.parametrize("where", JFET_AT)
@pytest.mark.parametrize("which", JFET_SETS)
def test_junction_fet_currents_and_derivatives(which: str, where: str, t_c: float) -> None:
    p = jfet_params(JFET_SETS[which], 1, t_c)
    vgs, vgd = JFET_AT[where]
    reference = Jfet(JFET_SETS[which], t_c)
    k = jfet.core(p, np.array([[vgs]]), np.array([[vgd]]))
    on = 1.0 if vgs >= vgd else 0.0
    ours = {"d": k.i_d - k.i_gd + on * k.i_ion, "g": k.i_gs + k.i_gd - k.i_ion}
    slopes = {
        "d": (k.a_gs + on * k.ion_gs, k.a_gd - k.g_gd + on * k.ion_gd),
        "g": (k.g_gs - k.ion_gs, k.g_gd - k.ion_gd),
    }
    # Rounding of exp(x) - 1, and of the threshold behind a corner, is all that is allowed for.
    floor = 4e-15 * float(reference.p["beta"]) + 1e-15 * float(reference.p["is"])
    for index, name in enumerate(("d", "g")):
        wanted = reference.terminal(mp.mpf(vgs), mp.mpf(vgd))[index]
        np.testing.assert_allclose(ours[name], float(wanted), rtol=1e-11, atol=floor, err_msg=name)
        for n, got in zip(((1, 0), (0, 1)), slopes[name], strict=True):
            wanted = mp.diff(lambda a, b, i=index: reference.terminal(a, b)[i], (mp.mpf(vgs), mp.mpf(vgd)), n)
            np.testing.assert_allclose(got, float(wanted), rtol=1e-10, atol=100 * floor, err_msg=f"{name} {n}")


@pytest.mark.parametrize("t_c", TEMPERATURES_C)
@pytest.mark.parametrize("where", MOSFET_AT)
@pytest.mark.parametrize("which", MOSFET_SETS)
def test_mosfet_currents_and_derivatives(which: str, where: str, t_c: float) -> None:
    p = mosfet_params(MOSFET_SETS[which], 1, t_c)
    at = MOSFET_AT[where]
    reference = Mosfet(MOSFET_SETS[which], t_c)
    k = mosfet.core(p, *(np.array([[x]]) for x in at))
    ours = {"d": k.i_d - k.i_bd, "b": k.i_bd + k.i_bs}
    slopes = {"d": (k.d_vgs, k.d_vds + k.g_bd, k.d_vbs - k.g_bd), "b": (0.0, -k.g_bd, k.g_bd + k.g_bs)}
    scale = float(reference.p["kp"] * reference.p["w"] / reference.p["l"])
    floor = 4e-15 * scale + 1e-15 * float(reference.p["iss"])
    for index, name in enumerate(("d", "b")):
        wanted = reference.terminal(*(mp.mpf(x) for x in at))[index]
        np.testing.assert_allclose(ours[name], float(wanted), rtol=1e-11, atol=floor, err_msg=name)
        for axis, got in enumerate(slopes[name]):
            n = tuple(int(axis == j) for j in range(3))
            wanted = mp.diff(lambda a, b, c, i=index: reference.terminal(a, b, c)[i], tuple(mp.mpf(x) for x in at), n)
            np.testing.assert_allclose(got, float(wanted), rtol=1e-10, atol=100 * floor, err_msg=f"{name} {n}")


FAMILIES = [(jfet, jfet_params, s) for s in JFET_SETS.values()] + [
    (mosfet, mosfet_params, s) for s in MOSFET_SETS.values()
]


@pytest.mark.parametrize("case", range(len(FAMILIES)))
def test_currents_and_charges_of_a_device_sum_to_zero(case: int) -> None:
    model, make, given = FAMILIES[case]
    p, sign = make(given, 20), np.array([1.0])
    v = np.random.default_rng(case).uniform(-1.0, 1.0, (20, 1, model.TERMINALS))
    e = model.evaluate(p, sign, v, model.junctions(v, sign), 1e-3)
    for values in (e.i, e.g.swapaxes(-1, -2), model.capacitance(p, sign, v)):
        size = np.abs(values).max()
        np.testing.assert_allclose(values.sum(axis=-1), 0.0, atol=1e-14 * max(size, 1e-30))
    np.testing.assert_allclose(e.g.sum(axis=-1), 0.0, atol=1e-13 * np.abs(e.g).max())


def test_the_plain_square_law() -> None:
    """ID = IDSS (1 - VGS/VP)^2, IDSS = BETA VP^2 (common practice); ID = K (VGS - VTH)^2, K = KP/2."""
    p = jfet_params({"vto": -4.0, "beta": 8e-3 / 16.0}, 1)
    k = jfet.core(p, np.array([[-2.0]]), np.array([[-12.0]]))
    np.testing.assert_allclose(k.i_d, 8e-3 / 4.0, rtol=1e-15)
    q = mosfet_params({"vto": 2.0, "kp": 0.5}, 1)
    m = mosfet.core(q, np.array([[3.0]]), np.array([[10.0]]), np.array([[0.0]]))
    np.testing.assert_allclose(m.i_d, 0.25, rtol=1e-15)


def test_meyer_charges_by_region() -> None:
    """2/3 of the oxide to the source in the active region, half to each end at VDS = 0, all to the body far below
    threshold (Meyer 1971, from memory)."""
    given = {"cox": 3e-12, "vto": 1.0, "phi": 0.6}
    p, sign = mosfet_params(given, 3), np.array([1.0])
    v = np.zeros((3, 1, 6))
    v[:, 0, mosfet.G] = [3.0, 3.0, -1.0]
    v[:, 0, mosfet.DI] = [5.0, 0.0, 5.0]
    c = -mosfet.capacitance(p, sign, v)[:, 0, mosfet.G]
    wanted = {mosfet.SI: [2e-12, 1.5e-12, 0.0], mosfet.DI: [0.0, 1.5e-12, 0.0], mosfet.B: [0.0, 0.0, 3e-12]}
    for terminal, values in wanted.items():
        np.testing.assert_allclose(c[:, terminal], values, rtol=1e-12, atol=1e-24)


def test_below_threshold_a_decade_takes_n_times_sixty_millivolts() -> None:
    """ID falls by ten over n VT ln 10 of VGS, and meets the square law at VTH + n VT without a jump."""
    p = mosfet_params({"vto": 0.8, "kp": 1e-4, "weak": 1.5}, 4)
    n_vt = 1.5 * float(p["vt"][0, 0])
    meets = 0.8 + n_vt
    vgs = np.array([[0.4], [0.4 - n_vt * np.log(10.0)], [meets - 1e-9], [meets + 1e-9]])
    i = mosfet.core(p, vgs, np.full((4, 1), 3.0), np.zeros((4, 1))).i_d[:, 0]
    np.testing.assert_allclose(i[0] / i[1], 10.0, rtol=1e-12)
    np.testing.assert_allclose(i[2] / i[3], 1.0, rtol=1e-6)
    np.testing.assert_allclose(i[3], 0.5e-4 * n_vt**2, rtol=1e-6)


def test_without_being_asked_there_is_no_current_below_threshold() -> None:
    p = mosfet_params({"vto": 0.8, "kp": 1e-4}, 1)
    assert mosfet.core(p, np.array([[0.8 - 1e-9]]), np.array([[3.0]]), np.array([[0.0]])).i_d[0, 0] == 0.0


def test_body_junction_has_area_and_sidewall() -> None:
    """CJ AD (1 + V/PB)^-MJ + CJSW PD (1 + V/PB)^-MJSW at 3 V reverse, worked out by hand: 8 fF/2 + 6 fF (1/4)^0.3."""
    given = {"cbd": 8e-15, "cbdsw": 6e-15, "mj": 0.5, "mjsw": 0.3, "pb": 1.0}
    v = np.zeros((1, 1, 6))
    v[..., mosfet.DI] = 3.0
    c = -mosfet.capacitance(mosfet_params(given, 1), np.array([1.0]), v)[0, 0, mosfet.B]
    np.testing.assert_allclose(c[mosfet.DI], 4e-15 + 6e-15 * 0.25**0.3, rtol=1e-12)
    assert c[mosfet.SI] == 0.0


def test_gate_breaks_down_and_leaks() -> None:
    """IBV at -BV beside the leakage; ISR ((1 + V/PB)^2 + .005)^(M/2) of recombination at V reverse, by hand."""
    broken = jfet_params({"bv": 25.0, "ibv": 1e-6}, 1)
    k = jfet.core(broken, np.array([[0.0]]), np.array([[-25.0]]))
    np.testing.assert_allclose(k.i_gd, -1e-6, rtol=1e-6)
    leaking = jfet_params({"isr": 1e-12, "pb": 1.0, "m": 0.5}, 1)
    k = jfet.core(leaking, np.array([[-1.0]]), np.array([[-8.0]]))
    np.testing.assert_allclose(k.i_gd, -1e-14 - 1e-12 * (81.005) ** 0.25, rtol=1e-9)


def test_ionisation_takes_its_share_out_of_the_gate() -> None:
    """ALPHA w exp(-VK/w) of ID, w = VDS - VOV: at VGS -1, VTO -2, VDS 11: 1 mA, w 10 V, 1e-4 times 10 times e^-5."""
    p = jfet_params({"vto": -2.0, "beta": 1e-3, "alpha": 1e-4, "vk": 50.0, "is": 1e-30}, 1)
    v = np.zeros((1, 1, 5))
    v[..., jfet.D] = v[..., jfet.DI] = 11.0
    v[..., jfet.G] = -1.0
    i = jfet.figures(p, np.array([1.0]), v)
    wanted = 1e-3 * 1e-4 * 10.0 * np.exp(-5.0)
    np.testing.assert_allclose(i["ig_a"], -wanted, rtol=1e-12)
    np.testing.assert_allclose(i["id_a"], 1e-3 + wanted, rtol=1e-12)
