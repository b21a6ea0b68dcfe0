"""Corners of field-effect transistors: the ends of the card's range, solved by hand from the square law."""

from __future__ import annotations

import pytest
from scipy.optimize import brentq

from checker.setup import Setup
from tests.whole import intent_text, outcome_from, set_up_from

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


@pytest.mark.parametrize(("name", "threshold"), [("lowest", 1.5), ("highest", 0.8)])
def test_a_source_resistor_holds_the_current_over_the_threshold(name: str, threshold: float) -> None:
    """BSS138 with VG 4 V and 470 ohm below: threshold .8 to 1.5 V (data sheet, from memory), solved by hand from
    VG - ID RS = VTH + sqrt(2 ID/(KP (1 + LAMBDA VDS))), VDS of the channel less both leads."""
    setup = set_up_from("V1 VDD 0 12\nVG G 0 4\nRD VDD D 100\nRS S 0 470\nM1 D G S S BSS138\n", NO_BAND)
    p = {key: float(value[0, 0]) for key, value in setup.circuit.devices["mosfet"].params.items()}
    kp = p["kp"] * p["w"] / p["l"]
    # The card is for 27 degC, as the board is.
    assert p["vto"] == pytest.approx(1.2)

    def off(i: float) -> float:
        vds = 12.0 - i * (570.0 + p["rd"] + p["rs"])
        return threshold + (2.0 * i / (kp * (1.0 + p["lambda"] * vds))) ** 0.5 - (4.0 - i * (470.0 + p["rs"]))

    wanted = brentq(off, 1e-9, 4.0 / 470.0, xtol=1e-18)
    assert currents(setup, "M1")[f"channel currents {name}"] == pytest.approx(wanted, rel=1e-6)


@pytest.mark.parametrize(
    ("drain_ohm", "outcome", "scenario"),
    [(220, None, None), (560, "may-violate", "channel currents highest"), (2200, "violates", None)],
    ids=["clean at both ends", "ohmic at one end", "ohmic at rest"],
)
def test_a_rule_over_the_range_of_the_type(drain_ohm: int, outcome: str | None, scenario: str | None) -> None:
    """J310, 100 ohm below: 8.3 to 21 mA with its resistors; what is left over the channel decides.

    By hand: 15 V - 21 mA (100 + 220 ohm) = 8.3 V over an overdrive of 4.4 V; with 560 ohm 1.1 V is under it, and at the
    nominal 13.6 mA 6.0 V over 1.9 V is not; with 2.2 kilohm not even that is left.
    """
    text = (
        "V1 VDD 0 15\nRG G 0 1meg\nRS S 0 100\nC1 IN G 100n\nC2 D OUT 1u\nCS S 0 100u\nJ1 D G S J310\n"
        f"RD VDD D {drain_ohm}\n"
    )
    ports = intent_text(("IN", "input", ""), ("OUT", "output", "100 kohm"))
    found = [f for f in outcome_from(text, ports).report.findings if f.rule == "saturated-at-rest"]
    assert [(f.outcome, f.scenario) for f in found] == ([] if outcome is None else [(outcome, scenario)])


def test_the_range_of_a_stage_shows_both_ends() -> None:
    """`spread` of the report: the least and the largest current of the type, with the resistors on their side."""
    setup = self_biased("J310", 100.0)
    outcome = outcome_from("V1 VDD 0 15\nRD VDD D 10\nRG G 0 1meg\nRS S 0 100\nJ1 D G S J310\n", NO_BAND)
    (stage,) = outcome.report.stages
    span = stage.spread["id_a"]
    found = currents(setup, "J1")
    assert span.min == pytest.approx(found["current of J1 lowest"], rel=1e-6)
    assert span.max == pytest.approx(found["current of J1 highest"], rel=1e-6)
    assert span.min < found["channel currents lowest"] and span.max > found["channel currents highest"]
