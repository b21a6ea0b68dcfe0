"""Switches over states, devices outside every path, oscillators, boards without ports, and what recognition says."""

from __future__ import annotations

import numpy as np
import pytest

from checker.stages.region import REGIONS, region_codes
from tests.stages.circuits import CASES, IN_OUT
from tests.whole import intent_text, mirrored, set_up_from

BY_NAME = {case.name: case for case in CASES}
RELAY = """XJ1 CTRL 0 CONN_01X02
XJ2 VCC 0 CONN_01X02
R1 CTRL B 1k
R2 B 0 10k
RL VCC C 400
Q1 C B 0 QN"""
STATES = """[rails]
"VCC" = "12 V"
[[state]]
name = "on"
pins = { "J1.1" = "3.3 V" }
[[state]]
name = "off"
pins = { "J1.1" = "low" }
"""


def test_a_switch_over_its_states() -> None:
    stage = set_up_from(RELAY, intent_text(band=None, more=STATES)).recognition.stage("Q1")
    assert (stage.configuration, stage.role, stage.confidence) == ("switch", "switch", 0.95)
    assert stage.evidence == ("cut-off in state off, saturated in state on",)


def test_one_state_that_never_saturates_makes_no_switch() -> None:
    """From 330 k the base gets 8 uA, 200 times of which drop under a volt across the load: active, not closed."""
    states = STATES.split('[[state]]\nname = "off"')[0]
    slow = RELAY.replace("R1 CTRL B 1k\nR2 B 0 10k", "R1 CTRL B 330k\nCB B 0 1u")
    stage = set_up_from(slow, intent_text(band=None, more=states)).recognition.stage("Q1")
    assert (stage.configuration, stage.role) == ("unclassified", "bias")
    assert stage.reason == "cut-off and outside every signal path"


def test_an_unbiased_device_says_why() -> None:
    netlist = BY_NAME["common emitter"].netlist.replace("V1 VCC 0 12", "XJ9 +VX 0 CONN_01X02\nRV +VX VCC 10")
    stage = set_up_from(netlist, intent_text(*IN_OUT)).recognition.stage("Q1")
    assert stage.configuration == "unclassified"
    assert stage.confidence == 0.0
    assert "VCC is not known" in stage.reason


def test_without_ports_a_stage_is_not_guessed() -> None:
    """Nets called IN and OUT would be taken as ports; X and Y say nothing."""
    netlist = BY_NAME["common emitter"].netlist.replace("IN", "X").replace("OUT", "Y")
    stage = set_up_from(netlist, intent_text(band=None)).recognition.stage("Q1")
    assert stage.role == "bias"
    assert "no signal path is known on this board" in stage.evidence


COLPITTS = """V1 VCC 0 12
R1 VCC B 47k
R2 B 0 10k
CB B 0 10n
L1 VCC C 1u
RL VCC C 2k
C1 C E 100p
C2 E 0 1n
RE E 0 1k
Q1 C B E QN"""


def colpitts_hz(ic_a: float) -> float:
    """Growing pole of the circuit above by hand, base at ground, junction charges left out: the determinant of
    [[s C1 + 1/(s L) + GL, -(s C1 + gm)], [-s C1, s (C1 + C2) + gm + GE]], times s."""
    coil, c1, c2, gl, ge, gm = 1e-6, 100e-12, 1e-9, 1 / 2e3, 1e-3, ic_a / 0.02585
    left = np.array([c1, gl, 1.0 / coil])
    right = np.array([c1 + c2, gm + ge])
    poles = np.roots(np.polysub(np.polymul(left, right), np.polymul([c1, 0.0, 0.0], [c1, gm])))
    grows = poles[(poles.real > 0.0) & (poles.imag > 0.0)]
    return float(grows[0].imag / (2.0 * np.pi))


def test_a_colpitts_oscillates() -> None:
    setup = set_up_from(COLPITTS, intent_text(band=("10 MHz", "20 MHz")))
    assert setup.growing
    stage = setup.recognition.stage("Q1")
    assert (stage.configuration, stage.role) == ("oscillator", "signal")
    found_hz = float(stage.evidence[0].split("near ")[1].split(" MHz")[0]) * 1e6
    # Junction charges of some pF beside 100 pF, left out by hand: 5 % of frequency.
    assert found_hz == pytest.approx(colpitts_hz(float(setup.point.bipolar["ic_a"][0, 0])), rel=0.05)


def test_the_same_tank_without_feedback_does_not_oscillate() -> None:
    setup = set_up_from(COLPITTS.replace("C1 C E", "C1 C 0"), intent_text(band=("10 MHz", "20 MHz")))
    assert not setup.growing
    assert setup.recognition.stage("Q1").configuration != "oscillator"


@pytest.mark.parametrize("name", ["common emitter", "common base", "common collector"])
def test_clear_stages_are_certain_and_say_what_is_held(name: str) -> None:
    stage = set_up_from(BY_NAME[name].netlist, BY_NAME[name].intent).recognition.stage("Q1")
    assert stage.confidence >= 0.9
    joined = "; ".join(stage.evidence)
    assert "carries the signal from in to out: participation" in joined
    assert f"signal enters {stage.entry} through C1" in joined.replace("enters at the", "enters")
    assert f"signal leaves at the {stage.exit} through C2" in joined
    held = {"common emitter": "emitter sees", "common base": "base sees"}
    assert held.get(name, "collector at signal ground on VCC") in joined


def test_held_impedances_are_those_of_the_capacitors() -> None:
    """1/(2 pi 948.7 Hz 1000 uF) = 0.168 ohm beside RE of 1 k; of 100 uF beside the divider: 1.68 ohm."""
    for name, ohm, part in (("common emitter", "168 mΩ", "CE"), ("common base", "1.68 Ω", "CB")):
        stage = set_up_from(BY_NAME[name].netlist, BY_NAME[name].intent).recognition.stage("Q1")
        assert any(f"sees {ohm} to signal ground through {part} at 949 Hz" in line for line in stage.evidence)


def test_a_bypass_that_fails_at_the_lower_edge_lowers_confidence() -> None:
    """Base of a common-base stage held by a capacitor that is 159 k at the lower band edge: there the base floats with
    the emitter. The label stays that of mid-band, with less confidence than with a large capacitor."""
    good = BY_NAME["common base"]
    weak = good.netlist.replace("CB B 0 100u", "CB B 0 100p")
    wide = intent_text(*IN_OUT, band=("10 kHz", "1 MHz"))
    certain = set_up_from(good.netlist, wide).recognition.stage("Q1")
    unsure = set_up_from(weak, wide).recognition.stage("Q1")
    assert certain.configuration == unsure.configuration == "common-base"
    assert unsure.confidence <= certain.confidence


def test_recognition_does_not_hang_on_names_or_order() -> None:
    case = BY_NAME["cascode"]
    lines = case.netlist.split("\n")
    turned = "\n".join([lines[0], *reversed(lines[1:])])
    renamed = turned.replace("Q1", "Q9")
    labels = {s.id: s.configuration for s in set_up_from(renamed, case.intent).recognition.stages}
    assert labels == {"Q9": "common-emitter", "Q2": "common-base"}


def test_cut_off_needs_a_limit_and_gets_one_between_supplies() -> None:
    """A collector coil leaves nothing to limit the shorted current; 180 uA of collector current is no cut-off."""
    netlist = "V1 VCC 0 5\nRB VCC B 4.7meg\nL1 VCC C 1m\nQ1 C B 0 QN"
    on = set_up_from(netlist, intent_text(band=None)).point
    assert on.bipolar["ic_a"][0, 0] == pytest.approx(4.3 / 4.7e6 * 200 * (1 + 4.3 / 100), rel=0.03)
    assert REGIONS[int(region_codes(on)[0, 0])] == "active"
    off = set_up_from(netlist.replace("RB VCC B", "RB 0 B"), intent_text(band=None)).point
    assert REGIONS[int(region_codes(off)[0, 0])] == "cut-off"


@pytest.mark.parametrize("polarity", ["NPN", "PNP"])
def test_regions_by_their_definitions(polarity: str) -> None:
    """Collector resistor of 1 k from 10 V: 10 mA with the device shorted. Base current sets where it stands:
    30 uA active (6 mA), 60 uA saturated (12 mA wanted), base grounded cut off, collector under base reverse."""
    cases = {
        "active": "V1 VCC 0 10\nRC VCC C 1k\nI1 0 B 30u\nQ1 C B 0 QN",
        "saturated": "V1 VCC 0 10\nRC VCC C 1k\nI1 0 B 60u\nQ1 C B 0 QN",
        "cut-off": "V1 VCC 0 10\nRC VCC C 1k\nRB B 0 1k\nQ1 C B 0 QN",
        "reverse-active": "V1 VCC 0 10\nRC VCC E 1k\nI1 0 B 1m\nQ1 0 B E QN",
    }
    for region, netlist in cases.items():
        text = netlist if polarity == "NPN" else mirrored(netlist)
        point = set_up_from(text, intent_text(band=None)).point
        assert REGIONS[int(region_codes(point)[0, 0])] == region
