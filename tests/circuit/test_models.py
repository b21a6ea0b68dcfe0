"""Parameter tables. Defaults and spellings: SPICE user guides, from memory (see `checker.circuit.parameters`)."""

from __future__ import annotations

import math

import pytest
from numpy.testing import assert_allclose

from checker.circuit.models import bipolar_parameters, diode_parameters
from tests.whole import set_up_from


def test_bipolar_defaults() -> None:
    values = bipolar_parameters({}).values
    assert (values["is"], values["bf"], values["br"], values["ne"], values["eg"]) == (1e-16, 100.0, 1.0, 1.5, 1.11)
    assert all(math.isinf(values[name]) for name in ("vaf", "var", "ikf", "ikr", "irb", "vtf"))


def test_diode_defaults() -> None:
    values = diode_parameters({}).values
    assert (values["is"], values["n"], values["vj"], values["m"], values["ibv"]) == (1e-14, 1.0, 1.0, 0.5, 1e-3)
    assert math.isinf(values["bv"])


def test_a_written_zero_switches_an_effect_off() -> None:
    values = bipolar_parameters({"vaf": 0.0, "ikf": 0.0, "rb": 0.0}).values
    assert math.isinf(values["vaf"]) and math.isinf(values["ikf"]) and values["rb"] == 0.0


def test_base_resistance_at_high_current_follows_rb() -> None:
    assert bipolar_parameters({"rb": 10.0}).values["rbm"] == 10.0
    assert bipolar_parameters({"rb": 10.0, "rbm": 2.0}).values["rbm"] == 2.0


@pytest.mark.parametrize(
    ("old", "new"), [("va", "vaf"), ("vb", "var"), ("ik", "ikf"), ("pe", "vje"), ("mc", "mjc"), ("ccs", "cjs")]
)
def test_older_spellings(old: str, new: str) -> None:
    assert bipolar_parameters({old: 0.625}).values[new] == 0.625


def test_the_present_spelling_outranks_the_older_one() -> None:
    assert bipolar_parameters({"va": 50.0, "vaf": 80.0}).values["vaf"] == 80.0
    assert bipolar_parameters({"vaf": 80.0, "va": 50.0}).values["vaf"] == 80.0


def test_leakage_as_a_ratio_to_is() -> None:
    values = bipolar_parameters({"is": 2e-15, "c2": 500.0}).values
    assert_allclose(values["ise"], 1e-12, rtol=1e-15)


def test_area_and_parallel_devices_scale_currents_charges_and_resistances() -> None:
    written = {"is": 1e-15, "ikf": 0.1, "cje": 5e-12, "rb": 12.0, "re": 0.6, "vaf": 80.0}
    values = bipolar_parameters(written, area=2.0, count=3.0).values
    assert_allclose(
        [values[name] for name in ("is", "ikf", "cje", "rb", "rbm", "re", "vaf")],
        [6e-15, 0.6, 30e-12, 2.0, 2.0, 0.1, 80.0],
        rtol=1e-14,  # products of a few doubles
    )
    assert math.isinf(bipolar_parameters({}, area=2.0).values["ikf"])
    diode = diode_parameters({"is": 1e-9, "rs": 2.0, "cjo": 1e-12}, area=4.0).values
    assert_allclose([diode["is"], diode["rs"], diode["cjo"]], [4e-9, 0.5, 4e-12], rtol=1e-14)


def test_measurement_temperature() -> None:
    assert bipolar_parameters({}).tnom_k == 300.15
    assert bipolar_parameters({"tnom": 25.0}).tnom_k == 298.15


def test_parameters_written_in_vain_are_named() -> None:
    assert bipolar_parameters({"bf": 100.0, "tre1": 1e-3, "level": 1.0}).unused == ("tre1",)
    assert diode_parameters({"bv": -5.1}).values["bv"] == 5.1


@pytest.mark.parametrize(
    ("written", "named"), [("NF=0", "NF"), ("BF=-1", "BF"), ("IS=1e300", "IS"), ("VJE=0", "VJE"), ("RB=-5", "RB")]
)
def test_an_impossible_figure_leaves_the_part_out(written: str, named: str) -> None:
    """The part is named as unknown with the figure; nothing is computed from it."""
    setup = set_up_from(f"V1 VCC 0 5\nR1 VCC B 10k\nR2 VCC C 1k\nQ1 C B 0 QX\n.model QX NPN({written})\n")
    (unknown,) = setup.circuit.unknowns
    assert (unknown.ref, unknown.datum) == ("Q1", "a sound model of Q1")
    assert unknown.supply.startswith(f"{named} is ")


@pytest.mark.parametrize("size", ["area=0", "m=-1", "m=1e300"])
def test_a_device_of_no_size_is_not_understood(size: str) -> None:
    setup = set_up_from(f"V1 VCC 0 5\nR1 VCC B 10k\nR2 VCC C 1k\nQ1 C B 0 QN {size}\n")
    assert [unknown.ref for unknown in setup.circuit.unknowns] == ["Q1"]
