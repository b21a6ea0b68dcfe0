"""Corners of field-effect transistors: the ends of the card's range, solved by hand from the square law."""

from __future__ import annotations

import pytest
from scipy.optimize import brentq

from checker.setup import Setup
from tests.whole import intent_text, set_up_from

NO_BAND = intent_text(band=None)


def self_biased(part: str, ohm: float) -> Setup:
    return set_up_from(f"V1 VDD 0 15\nRD VDD D 10\nRG G 0 1meg\nRS S 0 {ohm}\nJ1 D G S {part}\n", NO_BAND)


def currents(setup: Setup, name: str) -> dict[str, float]:
    values = setup.board(setup.scenarios).ask("id_a", name).values[:, 0]
    return {scenario.name: float(value) for scenario, value in zip(setup.scenarios, values, strict=True)}


def drain_a(idss: float, vp: float, ohm: float, lam: float) -> float:
    """ID of the square law with VGS = -ID RS, VDS = 15 V less what both resistors take."""

    def off(i: float) -> float:
        return idss * (1.0 - i * ohm / vp) ** 2 * (1.0 + lam * (15.0 - i * (ohm + 10.0))) - i

    return brentq(off, 0.0, vp / ohm, xtol=1e-18)


@pytest.mark.parametrize(
    ("part", "ohm", "low", "high", "ideal"),
    [
        ("J310", 100.0, (24e-3, 2.0), (60e-3, 6.5), (8.264e-3, 23.94e-3)),
        ("J310", 220.0, (24e-3, 2.0), (60e-3, 6.5), (4.959e-3, 14.85e-3)),
        ("J201", 1e3, (0.2e-3, 0.3), (1e-3, 1.5), (94.2e-6, 470.8e-6)),
    ],
)
def test_self_bias_over_the_range_of_the_type(
    part: str, ohm: float, low: tuple[float, float], high: tuple[float, float], ideal: tuple[float, float]
) -> None:
    """Limits of IDSS and cut-off from the types' data sheets (from memory); `ideal`: without channel-length modulation,
    in closed form, which the hand solution meets at LAMBDA 0."""
    setup = self_biased(part, ohm)
    found = currents(setup, "J1")
    lam = float(setup.circuit.devices["jfet"].params["lambda"][0, 0])
    for name, ends, plain in (("lowest", low, ideal[0]), ("highest", high, ideal[1])):
        assert drain_a(*ends, ohm, 0.0) == pytest.approx(plain, rel=1e-3)
        assert found[f"channel currents {name}"] == pytest.approx(drain_a(*ends, ohm, lam), rel=1e-6)
    assert found["channel currents lowest"] < found["nominal"] < found["channel currents highest"]


def test_a_p_channel_part_has_the_same_ends() -> None:
    setup = set_up_from("V1 VSS 0 15\nRS VSS S 470\nRG G VSS 1meg\nRD D 0 10\nJ1 D G S J176\n", NO_BAND)
    found = currents(setup, "J1")
    assert abs(found["channel currents lowest"]) < abs(found["nominal"]) < abs(found["channel currents highest"])


def test_threshold_of_a_switch() -> None:
    """2N7002 on 2.2 V: the highest threshold of 2.5 V leaves it cut off, the lowest carries the load."""
    setup = set_up_from("V1 VDD 0 12\nVG G 0 2.2\nRL VDD D 1k\nM1 D G 0 0 2N7002\n", NO_BAND)
    found = currents(setup, "M1")
    assert found["channel currents lowest"] < 1e-9
    assert found["channel currents highest"] > 0.01


def test_what_a_model_does_not_say_is_told() -> None:
    setup = set_up_from("V1 VDD 0 15\nRD VDD D 1k\nRG G 0 1meg\nRS S 0 470\nJ1 D G S JN\n", NO_BAND)
    assert not any(scenario.name.startswith("channel") for scenario in setup.scenarios)
    assert any("spread of the cut-off voltage" in line for line in setup.circuit.assumptions)
