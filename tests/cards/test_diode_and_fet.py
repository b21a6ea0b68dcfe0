"""Diode, zener, LED and FET cards give back their own figures, by equations written for the tests alone."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

import numpy as np
import pytest
from scipy.optimize import brentq

from checker.cards.load import card_from, families, rows
from tests.cards.gummel_poon import VT

ROWS: dict[str, Mapping[str, Any]] = {row["name"]: row for family in families() for row in rows(family).values()}
DIODES = sorted(name for name, row in ROWS.items() if row["kind"] in ("diode", "zener", "led"))
ZENERS = sorted(name for name, row in ROWS.items() if row["kind"] == "zener")
JFETS = sorted(name for name, row in ROWS.items() if row["kind"] in ("njf", "pjf"))
MOSFETS = sorted(name for name, row in ROWS.items() if row["kind"] in ("nmos", "pmos"))


def forward_voltage(model: Mapping[str, float], current: float) -> float:
    """Of a junction with series resistance."""
    return float(model["n"] * VT * np.log1p(current / model["is"]) + model["rs"] * current)


@pytest.mark.parametrize("name", DIODES)
def test_forward_voltage(name: str) -> None:
    model = card_from(ROWS[name]).model
    for current, volts in ROWS[name]["vf"]:
        # the fit leaves out the -1 of the junction law, which counts where IS is not small
        assert forward_voltage(model, current) == pytest.approx(volts, abs=1e-3 + 2 * VT * model["is"] / current)


@pytest.mark.parametrize("name", DIODES)
def test_diode_parameters_are_possible(name: str) -> None:
    model = card_from(ROWS[name]).model
    assert 0.9 < model["n"] < (5.0 if ROWS[name]["kind"] == "led" else 2.3)
    assert 0 < model["is"] < 1e-4 and 0 <= model["rs"] < 100
    assert model["bv"] > 0 and model["ibv"] > 0


@pytest.mark.parametrize("name", ZENERS)
def test_zener_voltage_and_resistance(name: str) -> None:
    vz, iz, rz, _ = ROWS[name]["zener"]
    model = card_from(ROWS[name]).model

    def voltage(current: float) -> float:
        def excess(v: float) -> float:
            return float(model["ibv"] * np.exp((v - model["bv"]) / (model["nbv"] * VT)) - current)

        junction = brentq(excess, 0.0, 2 * vz, xtol=1e-12)
        return float(junction + current * model["rs"])

    assert voltage(iz) == pytest.approx(vz, rel=1e-9)
    assert (voltage(iz * 1.01) - voltage(iz * 0.99)) / (0.02 * iz) == pytest.approx(rz, rel=0.01)
    assert model["nbv"] > 0


def test_zener_coefficients_change_sign_near_five_volts() -> None:
    """Common practice, no source: negative below about 5 V (tunnelling), positive above (avalanche)."""
    for name in ZENERS:
        vz, _, _, tc = ROWS[name]["zener"]
        if abs(vz - 5.3) > 0.4:
            assert (tc > 0) == (vz > 5.3), name


@pytest.mark.parametrize("name", JFETS)
def test_jfet(name: str) -> None:
    row, model = ROWS[name], card_from(ROWS[name]).model
    low, typical, high = row["idss"]
    assert model["vto"] < 0
    idss = model["beta"] * model["vto"] ** 2
    assert low <= idss <= (high or np.inf) and idss == pytest.approx(typical, rel=1e-12)
    assert min(map(abs, row["vgs_off"])) <= -model["vto"] <= max(map(abs, row["vgs_off"]))
    vds, crss = row["crss"]
    assert model["cgd"] / np.sqrt(1 + vds / model["pb"]) == pytest.approx(crss, rel=1e-12)
    assert model["cgs"] > 0


@pytest.mark.parametrize("name", MOSFETS)
def test_mosfet(name: str) -> None:
    row, model = ROWS[name], card_from(ROWS[name]).model
    assert min(row["vgs_th"]) <= model["vto"] <= max(row["vgs_th"])
    id_a, gfs = row["gfs"]
    assert np.sqrt(2 * model["kp"] * id_a) == pytest.approx(gfs, rel=1e-12)
    assert model["cgso"] > 0 and model["cgdo"] > 0


@pytest.mark.parametrize("name", [name for name in MOSFETS if "rds_on" in ROWS[name]])
def test_resistance_of_a_mosfet_switched_on(name: str) -> None:
    row, model = ROWS[name], card_from(ROWS[name]).model
    vgs, rds = row["rds_on"]
    sign = -1.0 if row["kind"] == "pmos" else 1.0
    overdrive = sign * (vgs - model["vto"])
    assert overdrive > 0 and model["rd"] >= 0
    slope = 1e-6  # ohmic region: ID = KP (VOV - VDS/2) VDS
    channel = slope / (model["kp"] * (overdrive - slope / 2) * slope)
    assert channel + model["rd"] == pytest.approx(rds, rel=1e-5)


@pytest.mark.parametrize("name", sorted(name for name, row in ROWS.items() if not row.get("assumed")))
def test_ratings_agree_among_themselves(name: str) -> None:
    """Dissipation in free air is what the thermal resistance allows; sheets round, or rate by current."""
    card = card_from(ROWS[name])
    ratings = card.ratings
    assert ratings.p_max_w and ratings.tj_max_c and ratings.rth_ja_kpw
    allowed = (ratings.tj_max_c - 25.0) / ratings.rth_ja_kpw
    assert 0.4 * allowed <= ratings.p_max_w <= 1.15 * allowed
    assert (ratings.v_max_v is not None) or card.kind == "zener"
    if card.kind in ("npn", "pnp"):
        assert ratings.i_max_a and ratings.v_control_max_v


@pytest.mark.parametrize("name", sorted(ROWS))
def test_pads_name_the_terminals_of_the_kind(name: str) -> None:
    card = card_from(ROWS[name])
    wanted = {"npn": "BCE", "pnp": "BCE", "diode": "AK", "zener": "AK", "led": "AK"}.get(card.kind, "DGS")
    for package, pads in card.packages.items():
        letters = "".join(pads.values())
        assert {letter for letter in letters if letter.isalpha()} == set(wanted), package
        assert list(pads) == sorted(pads)
    assert card.source
