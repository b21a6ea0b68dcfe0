"""Every entry of every family's conductance matrix is the complex-step derivative of that family's currents, to 1e-10.

At random terminal voltages in all regions, and 2 uV to either side of every branch of the equations (at a branch itself
a derivative has two values, and either is right). Currents sum to zero, so an entry is known to rounding of the largest
of its row and column and no better: 1e-13 of that is let pass.
"""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

import mpmath as mp
import numpy as np
import pytest

from checker.devices import bipolar, diode, jfet, mosfet, opamp
from checker.devices.family import FAMILIES
from tests.devices.complex_step import STEP, complex_numpy, slopes
from tests.devices.evaluated import (
    BIPOLAR_SETS,
    DIODE_SETS,
    JFET_SETS,
    MOSFET_SETS,
    bipolar_params,
    diode_params,
    jfet_params,
    mosfet_params,
)
from tests.reference.physics import depletion_charge

REL = 1e-10
CANCELLED = 1e-13
OFF_V = 2e-6
ROWS = 400
OPAMP_SETS = {
    "ordinary": {"gain": 1e5, "gbw": 3e6, "rout": 75.0, "high": 1.5, "low": 1.0},
    "no output resistance": {"gain": 1e6, "gbw": 1e6, "rout": 0.0, "high": 0.05, "low": 0.0},
}


def _opamp_params(given: Mapping[str, float], rows: int, _t_c: float = 27.0) -> dict[str, np.ndarray]:
    return {name: np.full((rows, 1), value) for name, value in given.items()}


MAKERS: dict[str, tuple[Any, Any, Mapping[str, Any]]] = {
    "bipolar": (bipolar, bipolar_params, BIPOLAR_SETS),
    "jfet": (jfet, jfet_params, JFET_SETS),
    "mosfet": (mosfet, mosfet_params, MOSFET_SETS),
    "diode": (diode, diode_params, DIODE_SETS),
    "opamp": (opamp, _opamp_params, OPAMP_SETS),
}
CASES = [(family, name) for family, (_, _, sets) in MAKERS.items() for name in sets]


def test_every_family_is_looked_at() -> None:
    assert set(MAKERS) == set(FAMILIES)


def _bipolar_volts(rng: np.random.Generator, rows: int) -> np.ndarray:
    """Terminals C B E SUB CI BI EI: junctions from -6 to .85 V, and beside their zeros, leads across up to .1 V."""
    beside = [0.0, OFF_V, -OFF_V]
    vbe = np.where(rng.random(rows) < 0.2, rng.choice(beside[1:], rows), rng.uniform(-6.0, 0.85, rows))
    vbc = np.where(rng.random(rows) < 0.2, rng.choice(beside[1:], rows), rng.uniform(-6.0, 0.85, rows))
    inner = np.stack([-vbc, np.zeros(rows), -vbe], axis=-1) + rng.uniform(-3.0, 3.0, (rows, 1))
    outer = inner + rng.uniform(-0.1, 0.1, (rows, 3))
    return np.concatenate([outer, rng.uniform(-9.0, 0.0, (rows, 1)), inner], axis=-1)[:, None]


def _jfet_volts(rng: np.random.Generator, rows: int, p: dict[str, np.ndarray]) -> np.ndarray:
    """Terminals D G S DI SI; beside cut-off, pinch-off and no drain voltage."""
    vto = p["vto"][:, 0]
    vgs, vds = rng.uniform(-5.0, 0.6, rows), rng.uniform(-5.0, 5.0, rows)
    off = rng.choice([OFF_V, -OFF_V], rows)
    kind = rng.integers(0, 6, rows)
    vgs = np.where(kind == 0, vto + off, np.where(kind == 1, rng.uniform(-1.5, 0.4, rows), vgs))
    vds = np.where(kind == 1, np.maximum(vgs - vto, 0.0) + off, np.where(kind == 2, off, vds))
    inner = np.stack([vds, np.zeros(rows)], axis=-1)
    d, s = (inner[:, k] + rng.uniform(-0.1, 0.1, rows) for k in (0, 1))
    return np.stack([d, vgs, s, inner[:, 0], inner[:, 1]], axis=-1)[:, None]


def _mosfet_volts(rng: np.random.Generator, rows: int, p: dict[str, np.ndarray]) -> np.ndarray:
    """Terminals D G S B DI SI; beside threshold, pinch-off, no drain voltage and no body voltage at either end."""
    vgs, vds, vbs = rng.uniform(-3.0, 6.0, rows), rng.uniform(-5.0, 6.0, rows), rng.uniform(-4.0, 0.5, rows)
    off = rng.choice([OFF_V, -OFF_V], rows)
    kind = rng.integers(0, 7, rows)
    vbs = np.where(kind == 0, off, np.where(kind == 1, vds + off, vbs))
    vds = np.where(kind == 2, off, vds)
    source = vds >= 0.0
    vth, _ = mosfet._threshold(p, np.where(source, vbs, vbs - vds)[:, None])
    vth = vth + p["weak"] * p["vt"]
    at_end = np.where(kind == 3, vth[:, 0] + off, vgs - np.where(source, 0.0, vds))
    at_end = np.where(kind == 4, vth[:, 0] + np.abs(vds) + off, at_end)
    vgs = at_end + np.where(source, 0.0, vds)
    d, s = (x + rng.uniform(-0.1, 0.1, rows) for x in (vds, np.zeros(rows)))
    return np.stack([d, vgs, s, vbs, vds, np.zeros(rows)], axis=-1)[:, None]


def _diode_volts(rng: np.random.Generator, rows: int, p: dict[str, np.ndarray]) -> np.ndarray:
    """Anode, cathode, inner anode: through breakdown where there is one, and beside zero."""
    bv = np.where(p["bv"][:, 0] < 1e3, p["bv"][:, 0], 20.0)
    vd = np.where(rng.random(rows) < 0.3, -bv + rng.uniform(-0.5, 0.5, rows), rng.uniform(-8.0, 0.9, rows))
    vd = np.where(rng.random(rows) < 0.1, rng.choice([OFF_V, -OFF_V], rows), vd)
    return np.stack([vd + rng.uniform(-0.1, 0.1, rows), np.zeros(rows), vd], axis=-1)[:, None]


def _opamp_volts(rng: np.random.Generator, rows: int, p: dict[str, np.ndarray]) -> np.ndarray:
    """From the middle of the output's range to where 1e-4 of it is left at the ends (beyond x = 100, x/sqrt(1 + x^2)
    of the complex step itself has no digits of its slope left); with and without room between the supplies."""
    vd = rng.choice([-1.0, 1.0], rows) * 10.0 ** rng.uniform(-7.0, 2.0, rows) / p["gain"][:, 0]
    common = rng.uniform(-3.0, 3.0, rows)
    top = rng.choice([12.0, 5.0, 1.0], rows)
    out, inner = rng.uniform(-9.0, 9.0, rows), rng.uniform(-9.0, 9.0, rows)
    return np.stack([common + vd, common, out, top, rng.choice([-12.0, 0.0], rows), inner], axis=-1)[:, None]


def _volts(family: str, rng: np.random.Generator, p: dict[str, np.ndarray]) -> np.ndarray:
    if family == "bipolar":
        return _bipolar_volts(rng, ROWS)
    made = {"jfet": _jfet_volts, "mosfet": _mosfet_volts, "diode": _diode_volts, "opamp": _opamp_volts}
    return made[family](rng, ROWS, p)


@pytest.mark.parametrize("t_c", [27.0, 110.0])
@pytest.mark.parametrize("sign", [1.0, -1.0])
@pytest.mark.parametrize(("family", "which"), CASES)
def test_the_matrix_is_the_complex_step_of_the_currents(family: str, which: str, sign: float, t_c: float) -> None:
    model, make, sets = MAKERS[family]
    p = make(sets[which], ROWS, t_c)
    if "bv" in p:
        # Complex numbers cannot be divided with an infinite part: no breakdown is one at a megavolt.
        p["bv"] = np.minimum(p["bv"], 1e6)
    polarity = np.array([sign if family not in ("diode", "opamp") else 1.0])
    rng = np.random.default_rng(len(which) + int(t_c))
    v = _volts(family, rng, p) * (polarity if family != "opamp" else 1.0)
    for gmin in (0.0, 1e-6):
        got = model.evaluate(p, polarity, v, model.junctions(v, polarity), gmin).g
        wanted = slopes(model, p, polarity, v, gmin)
        assert np.isfinite(wanted).all()
        size = np.abs(wanted)
        beside = np.maximum(size.max(axis=-1, keepdims=True), size.max(axis=-2, keepdims=True))
        worst = np.abs(got - wanted) / np.maximum(np.maximum(REL * size, CANCELLED * beside), 1e-300)
        at = np.unravel_index(int(worst.argmax()), worst.shape)
        assert worst.max() <= 1.0, (at, v[at[0], 0], got[at], wanted[at])


def _stepped(function: Any, at: tuple[np.ndarray, ...]) -> list[Any]:
    """What `function` returns at `at` with each of its arguments stepped in turn."""
    out = []
    with complex_numpy():
        for place in range(len(at)):
            moved = [x.astype(complex) for x in at]
            moved[place] += 1j * STEP
            out.append(function(*moved))
    return out


CORES: dict[str, dict[str, tuple[str, ...]]] = {
    "bipolar": {"ic": ("ic_vbe", "ic_vbc"), "ib": ("ib_vbe", "ib_vbc"), "qb": ("qb_vbe", "qb_vbc"), "i_f": ("g_f", "")},
    "jfet": {"i_d": ("a_gs", "a_gd"), "i_gs": ("g_gs", ""), "i_gd": ("", "g_gd"), "i_ion": ("ion_gs", "ion_gd")},
    "mosfet": {"i_d": ("d_vgs", "d_vds", "d_vbs"), "i_bs": ("", "", "g_bs"), "i_bd": ("", "-g_bd", "g_bd")},
}
"""Family -> value of its `Core` -> its derivatives to each junction voltage; "" where it does not depend on one."""


@pytest.mark.parametrize(("family", "which"), [case for case in CASES if case[0] in CORES])
def test_every_derivative_of_a_core(family: str, which: str) -> None:
    model, make, sets = MAKERS[family]
    p = make(sets[which], ROWS)
    if "bv" in p:
        p["bv"] = np.minimum(p["bv"], 1e6)
    v = _volts(family, np.random.default_rng(7), p)
    at = model.junctions(v, np.array([1.0]))
    arguments = tuple(at[..., k] for k in range(at.shape[-1]))
    core = model.core(p, *arguments)
    steps = _stepped(lambda *x: model.core(p, *x), arguments)
    for value, names in CORES[family].items():
        for name, stepped in zip(names, steps, strict=True):
            wanted = np.imag(getattr(stepped, value)) / STEP
            field = getattr(core, name.lstrip("-")) if name else np.zeros_like(wanted)
            got = -field if name.startswith("-") else field
            # Of the channel, what is left of an overdrive of 2 uV; of a junction, what is left of exp - 1.
            np.testing.assert_allclose(got, wanted, rtol=REL, atol=1e-25, err_msg=f"{value} {name}")


@pytest.mark.parametrize("which", BIPOLAR_SETS)
def test_base_resistance(which: str) -> None:
    """Both forms: falling with the base charge, and crowded; away from the kink where the base current turns."""
    p = bipolar_params(BIPOLAR_SETS[which], ROWS)
    v = _bipolar_volts(np.random.default_rng(3), ROWS)
    at = bipolar.junctions(v, np.array([1.0]))
    r, *got = bipolar.base_resistance(p, bipolar.core(p, at[..., 0], at[..., 1]))
    steps = _stepped(lambda *x: bipolar.base_resistance(p, bipolar.core(p, *x))[0], (at[..., 0], at[..., 1]))
    for mine, stepped in zip(got, steps, strict=True):
        np.testing.assert_allclose(mine, np.imag(stepped) / STEP, rtol=REL, atol=CANCELLED * float(np.max(r)))


@pytest.mark.parametrize("which", DIODE_SETS)
def test_diode_conductance(which: str) -> None:
    p = diode_params(DIODE_SETS[which], ROWS)
    p["bv"] = np.minimum(p["bv"], 1e6)
    vd = _diode_volts(np.random.default_rng(5), ROWS, p)[..., 2] - 0.0
    _, got = diode.current(p, vd)
    (stepped,) = _stepped(lambda x: diode.current(p, x)[0], (vd,))
    np.testing.assert_allclose(got, np.imag(stepped) / STEP, rtol=REL, atol=1e-30)


@pytest.mark.parametrize("which", MOSFET_SETS)
def test_threshold(which: str) -> None:
    p = mosfet_params(MOSFET_SETS[which], ROWS)
    vb = np.random.default_rng(6).uniform(-5.0, 0.5, (ROWS, 1))
    vb[:2, 0] = OFF_V, -OFF_V
    _, got = mosfet._threshold(p, vb)
    (stepped,) = _stepped(lambda x: mosfet._threshold(p, x)[0], (vb,))
    np.testing.assert_allclose(got, np.imag(stepped) / STEP, rtol=REL, atol=1e-30)


@pytest.mark.parametrize("which", OPAMP_SETS)
def test_output_of_an_amplifier(which: str) -> None:
    """F by the input voltage and by both supplies."""
    p = _opamp_params(OPAMP_SETS[which], ROWS)
    v = _opamp_volts(np.random.default_rng(8), ROWS, p)
    vd = v[..., opamp.PLUS] - v[..., opamp.MINUS]
    _, *got = opamp._output(p, v, vd)

    def output(x: np.ndarray, top: np.ndarray, bottom: np.ndarray) -> np.ndarray:
        moved = v.astype(complex)
        moved[..., opamp.TOP], moved[..., opamp.BOTTOM] = top, bottom
        return opamp._output(p, moved, x)[0]

    steps = _stepped(output, (vd, v[..., opamp.TOP], v[..., opamp.BOTTOM]))
    for mine, stepped in zip(got, steps, strict=True):
        np.testing.assert_allclose(mine, np.imag(stepped) / STEP, rtol=REL, atol=1e-12)


@pytest.mark.parametrize("t_c", [27.0, 110.0])
@pytest.mark.parametrize("family", ["jfet", "mosfet"])
def test_junction_capacitances_are_slopes_of_depletion_charge(family: str, t_c: float) -> None:
    """Gate junctions of the JFET, body junctions of the MOSFET, against the charge integral at 30 digits."""
    model, make, sets = MAKERS[family]
    p = make(sets["full"], 1, t_c)
    pairs = {
        "jfet": ((jfet.G, jfet.SI, "cgs", "m"), (jfet.G, jfet.DI, "cgd", "m")),
        "mosfet": ((mosfet.B, mosfet.SI, "cbs", "mj"), (mosfet.B, mosfet.DI, "cbd", "mj")),
    }[family]
    for volts in (-6.0, -1e-3, 0.1, 0.399, 0.401, 0.6):
        for one, other, name, grading in pairs:
            v = np.zeros((1, 1, model.TERMINALS))
            v[..., one], v[..., other] = volts, 0.0
            got = -model.capacitance(p, np.array([1.0]), v)[0, 0, one, other]
            args = (mp.mpf(float(p[key][0, 0])) for key in (name, "pb", grading, "fc"))
            wanted = mp.diff(lambda x, a=tuple(args): depletion_charge(x, *a), mp.mpf(volts))
            np.testing.assert_allclose(got, float(wanted), rtol=REL)
