"""Analytic derivatives of the transistor against differences at 30 digits of an independent form of its equations (of
the program's own currents: `test_complex_step`)."""

from __future__ import annotations

import mpmath as mp
import numpy as np
import pytest

from checker.devices import bipolar
from tests.devices.evaluated import BIPOLAR_SETS, bipolar_params
from tests.reference.physics import Transistor

REGIONS: dict[str, tuple[float, float]] = {
    "active": (0.65, -5.0),
    "active, strong": (0.82, -2.0),
    "at the edge": (0.65, 0.0),
    "saturated": (0.72, 0.66),
    "hard saturated": (0.80, 0.79),
    "reverse active": (-1.5, 0.63),
    "cut off": (-2.0, -8.0),
    "just off": (-1e-6, -3.0),
    "barely on": (1e-6, -3.0),
    "both at one microvolt": (1e-6, 1e-6),
    "both at minus one microvolt": (-1e-6, -1e-6),
    "quarter volt": (0.25, 0.2),
}
CASES = [(s, r) for s in BIPOLAR_SETS for r in REGIONS]


def _at(region: str) -> tuple[np.ndarray, np.ndarray]:
    vbe, vbc = REGIONS[region]
    return np.array([[vbe]]), np.array([[vbc]])


@pytest.mark.parametrize(("which", "region"), CASES)
def test_currents_and_conductances_equal_the_independent_ones(which: str, region: str) -> None:
    p = bipolar_params(BIPOLAR_SETS[which], 1)
    vbe, vbc = REGIONS[region]
    k = bipolar.core(p, *_at(region))
    reference = Transistor(BIPOLAR_SETS[which])
    at = mp.mpf(vbe), mp.mpf(vbc)
    ic, ib, qb, _ = reference._inner(*at)
    wanted = {"ic": ic, "ib": ib, "qb": qb}
    for name, index in (("ic", 0), ("ib", 1), ("qb", 2)):
        for suffix, n in (("vbe", (1, 0)), ("vbc", (0, 1))):
            wanted[f"{name}_{suffix}"] = mp.diff(lambda a, b, i=index: reference._inner(a, b)[i], at, n)
    # Near zero volts exp(x) - 1 leaves 1e-16/x of itself, and terms of IS cancel: allow for rounding of those terms.
    floor = {"i": 4e-16 * float(reference.rough["is"] + reference.rough["ise"] + reference.rough["isc"])}
    for name, value in wanted.items():
        atol = floor["i"] if name in ("ic", "ib") else floor["i"] * 100.0
        np.testing.assert_allclose(getattr(k, name), float(value), rtol=2e-12, atol=atol, err_msg=name)


@pytest.mark.parametrize(("which", "region"), CASES)
def test_base_resistance_and_its_slopes(which: str, region: str) -> None:
    p = bipolar_params(BIPOLAR_SETS[which], 1)
    vbe, vbc = REGIONS[region]
    reference = Transistor(BIPOLAR_SETS[which])
    k = bipolar.core(p, *_at(region))
    got = bipolar.base_resistance(p, k)

    def rb(a: mp.mpf, b: mp.mpf) -> mp.mpf:
        _, ib, qb, _ = reference._inner(a, b)
        return reference._rb(ib, qb)

    at = mp.mpf(vbe), mp.mpf(vbc)
    wanted = [rb(*at), mp.diff(rb, at, (1, 0)), mp.diff(rb, at, (0, 1))]
    # RB - RBM times the rounding of tan z - z, which loses ten times at the smallest z that has the closed form.
    for mine, value in zip(got, wanted, strict=True):
        np.testing.assert_allclose(mine, float(value), rtol=1e-12, atol=1e-13)


@pytest.mark.parametrize(("which", "region"), CASES)
def test_capacitances_equal_the_independent_ones(which: str, region: str) -> None:
    p = bipolar_params(BIPOLAR_SETS[which], 1)
    vbe, vbc = REGIONS[region]
    reference = Transistor(BIPOLAR_SETS[which])
    at = mp.mpf(vbe), mp.mpf(vbc)
    wanted = [
        mp.diff(reference._q_be, at, (1, 0)),
        mp.diff(reference._q_be, at, (0, 1)),
        mp.diff(reference._q_bc, at[1]),
    ]
    for mine, value in zip(bipolar.charges(p, *_at(region)), wanted, strict=True):
        np.testing.assert_allclose(mine, float(value), rtol=1e-11, atol=1e-28)


@pytest.mark.parametrize("which", list(BIPOLAR_SETS))
def test_device_makes_no_current(which: str) -> None:
    """Currents into all terminals sum to zero, and no terminal current moves when all voltages rise together."""
    p = bipolar_params(BIPOLAR_SETS[which], 1)
    v = np.array([[[5.0, 0.9, 0.0, 0.0, 4.9, 0.85, 0.05]]])
    e = bipolar.evaluate(p, np.array([1.0]), v, bipolar.junctions(v, np.array([1.0])), 0.0)
    size = np.abs(e.i).max()
    assert size > 0.0
    np.testing.assert_allclose(e.i.sum(axis=-1), 0.0, atol=1e-15 * size)
    np.testing.assert_allclose(e.g.sum(axis=-1), 0.0, atol=1e-15 * np.abs(e.g).max())
    np.testing.assert_allclose(e.g.sum(axis=-2), 0.0, atol=1e-15 * np.abs(e.g).max())
    c = bipolar.capacitance(p, np.array([1.0]), v)
    np.testing.assert_allclose(c.sum(axis=-1), 0.0, atol=1e-15 * max(np.abs(c).max(), 1e-30))


def test_linearisation_at_other_voltages_is_the_tangent() -> None:
    """`at` apart from `v`: the currents are those of the tangent plane at `at`."""
    p = bipolar_params(BIPOLAR_SETS["no lead resistance"], 1)
    sign = np.array([1.0])
    v = np.array([[[5.0, 0.9, 0.0, 0.0, 5.0, 0.70, 0.0]]])
    at = np.array([[[0.65, -4.0]]])
    k = bipolar.core(p, at[..., 0], at[..., 1])
    e = bipolar.evaluate(p, sign, v, at, 0.0)
    wanted = k.ic + k.ic_vbe * (0.70 - 0.65) + k.ic_vbc * (-4.3 + 4.0)
    np.testing.assert_allclose(e.i[..., bipolar.CI], wanted, rtol=1e-12)


def test_exponential_stays_finite_and_smooth_above_the_knee() -> None:
    p = bipolar_params({}, 2)
    k = bipolar.core(p, np.array([[6.0], [60.0]]), np.zeros((2, 1)))
    assert np.isfinite(k.ic).all()
    assert np.isfinite(k.ic_vbe).all()
    assert (k.ic_vbe > 0.0).all()
    assert k.ic[1, 0] > k.ic[0, 0]
