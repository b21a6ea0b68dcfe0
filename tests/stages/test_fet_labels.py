"""Labels, groups, regions and hand figures where field-effect transistors stand, in both polarities."""

from __future__ import annotations

import math

import numpy as np
import pytest

from checker.record import FetBias
from checker.stages.region import REGIONS, region_codes
from checker.summary.ledger import Ledger
from checker.summary.stages import stage_records
from tests.stages.circuits import Case
from tests.stages.fet_circuits import FET_CASES
from tests.stages.test_labels import BOTH, test_labels_groups_and_links
from tests.whole import board_from, intent_text, mirrored, set_up_from

EACH = pytest.mark.parametrize("case", FET_CASES, ids=lambda case: case.name)
VTO, BETA, LAMBDA = -3.0, 1e-3, 0.01
SOURCE_BIASED = "V1 VCC 0 15\nRG IN 0 1meg\nRD VCC OUT 2.2k\nRS S 0 680\nJ1 OUT IN S JN"
OPEN_PORTS = intent_text(("IN", "input", "600 ohm"), ("OUT", "output", ""))


@BOTH
@EACH
def test_fet_labels_groups_and_links(case: Case, polarity: str) -> None:
    test_labels_groups_and_links(case, polarity)


def region(netlist: str, device: str, polarity: str) -> str:
    """Region of a device at rest."""
    setup = set_up_from(netlist if polarity == "as drawn" else mirrored(netlist))
    code = region_codes(setup.point)[0, setup.circuit.transistors.names.index(device)]
    return REGIONS[int(code)]


ON_GATE = "V1 VCC 0 10\nV2 G 0 {v}\nRG G GG 1k\n"


@BOTH
@pytest.mark.parametrize(
    ("netlist", "device", "wanted"),
    [
        (ON_GATE.format(v=2.5) + "RD VCC D 100\nM1 D GG 0 0 MN", "M1", "active"),
        (ON_GATE.format(v=6.0) + "RD VCC D 1k\nM1 D GG 0 0 MN", "M1", "ohmic"),
        (ON_GATE.format(v=1.0) + "RD VCC D 1k\nM1 D GG 0 0 MN", "M1", "cut-off"),
        # Drain and source exchanged: the body diode conducts with the gate at its source.
        (ON_GATE.format(v=0.0) + "RD VCC S 1k\nM1 0 S S S MN", "M1", "body-conducting"),
        (ON_GATE.format(v=0.0) + "RD VCC D 1k\nJ1 D GG 0 JN", "J1", "ohmic"),
        (ON_GATE.format(v=0.0) + "RD VCC D 100\nJ1 D GG 0 JN", "J1", "active"),
        (ON_GATE.format(v=-4.0) + "RD VCC D 1k\nJ1 D GG 0 JN", "J1", "cut-off"),
        (ON_GATE.format(v=5.0) + "RD VCC D 1k\nJ1 D GG 0 JN", "J1", "gate-conducting"),
    ],
)
def test_regions(netlist: str, device: str, wanted: str, polarity: str) -> None:
    assert region(netlist, device, polarity) == wanted


def self_biased(rd: float, rs: float, vdd: float) -> tuple[float, float, float]:
    """ID, VGS and VDS of a junction FET that its own source resistor biases, by bisection (VGS = -ID RS)."""
    low, high = 0.0, -VTO / rs
    for _ in range(200):
        i = 0.5 * (low + high)
        vds = vdd - i * (rd + rs)
        if BETA * (-i * rs - VTO) ** 2 * (1.0 + LAMBDA * vds) > i:
            low = i
        else:
            high = i
    return i, -i * rs, vdd - i * (rd + rs)


@BOTH
def test_rest_and_small_signal_figures(polarity: str) -> None:
    """Against the square law written out; the gate's leakage through 1 megohm shifts VGS by 20 nV."""
    netlist = SOURCE_BIASED if polarity == "as drawn" else mirrored(SOURCE_BIASED)
    setup = set_up_from(netlist, OPEN_PORTS)
    board = setup.board(setup.scenarios[:1])
    i, vgs, vds = self_biased(2.2e3, 680.0, 15.0)
    (stage,) = stage_records(setup, Ledger(board))
    bias = stage.bias
    assert isinstance(bias, FetBias)
    assert bias.region == "active" and not bias.reversed
    sign = 1.0 if polarity == "as drawn" else -1.0
    assert bias.id_a == pytest.approx(i, rel=1e-6)
    assert board.ask("id_a", "J1").values[0, 0] == pytest.approx(sign * i, rel=1e-6)
    assert (bias.vgs_v, bias.vds_v) == (pytest.approx(vgs, rel=1e-6), pytest.approx(vds, rel=1e-6))
    assert bias.headroom_v == pytest.approx(vds - (vgs - VTO), rel=1e-6)
    assert bias.power_w == pytest.approx(i * vds, rel=1e-6)
    assert bias.ig_a == pytest.approx(-2e-14, rel=1e-3)
    gm = 2.0 * BETA * (vgs - VTO) * (1.0 + LAMBDA * vds)
    go = LAMBDA * BETA * (vgs - VTO) ** 2
    assert board.ask("gm_s", "J1").values[0, 0] == pytest.approx(gm, rel=1e-6)
    assert board.ask("ro_ohm", "J1").values[0, 0] == pytest.approx(1.0 / go, rel=1e-6)
    c = 4e-12 / math.sqrt(1.0 - vgs) + 3e-12 / math.sqrt(1.0 - (vgs - vds))
    assert board.ask("ft_hz", "J1").values[0, 0] == pytest.approx(gm / (2.0 * math.pi * c), rel=1e-6)
    for absent in ("ic_a", "vce_v", "re_ohm", "gain_spread_ratio", "divider_shift"):
        figure = board.ask(absent, "J1")
        assert np.isnan(figure.values).all() and figure.reason.startswith("not applicable")


def test_gain_of_a_source_resistor_stage() -> None:
    """-gm RD / (1 + gm RS + (RD + RS)/ro), the exact one-device form at mid-band (derived)."""
    board = board_from(SOURCE_BIASED, OPEN_PORTS)
    gm, ro = (float(board.ask(key, "J1").values[0, 0]) for key in ("gm_s", "ro_ohm"))
    wanted = -gm * 2.2e3 / (1.0 + gm * 680.0 + (2.2e3 + 680.0) / ro)
    got = board.ask("voltage_gain", "J1").values[0, 1]
    assert got.real == pytest.approx(wanted, rel=1e-4)
    hand = board.rule_of_thumb("J1")["voltage_gain"].values[0, 0]
    assert hand == pytest.approx(-2.2e3 / (1.0 / gm + 680.0), rel=1e-9)


def test_a_drain_without_a_resistor_has_no_hand_figure_for_its_output() -> None:
    """The lower half of a cascode: nothing but a transistor stands at its drain, so RD does not exist."""
    netlist = "V1 VCC 0 15\nVG2 G2 0 3\nCIN IN G 100n\nRG G 0 1Meg\nJ1 X G S JN\nRS S 0 680\nCS S 0 100u\n"
    netlist += "J2 D G2 X JN\nRD VCC D 2.2k\nCO D OUT 100n"
    hand = board_from(netlist, OPEN_PORTS).rule_of_thumb("J1")
    assert "voltage_gain" in hand and "output_impedance_ohm" not in hand


def test_a_reversed_channel_is_told_and_turned() -> None:
    """Drain at the lower end: VDS is counted from the more negative terminal, and `reversed` says so."""
    netlist = "V1 VCC 0 10\nV2 G 0 6\nRD VCC S 1k\nM1 0 G S 0 MN"
    setup = set_up_from(netlist)
    (stage,) = stage_records(setup, Ledger(setup.board(setup.scenarios[:1])))
    bias = stage.bias
    assert isinstance(bias, FetBias) and bias.reversed and bias.region == "ohmic"
    assert bias.vds_v is not None and bias.id_a is not None and bias.vgs_v == pytest.approx(6.0)
    assert 0.0 < bias.vds_v < 0.1 and bias.id_a == pytest.approx((10.0 - bias.vds_v) / 1e3, rel=1e-9)


def test_words_of_the_terminals_are_those_of_the_device() -> None:
    recognition = set_up_from(SOURCE_BIASED, OPEN_PORTS).recognition
    text = " ".join(recognition.stage("J1").evidence)
    assert "enters at the gate" in text and "leaves at the drain" in text and "base" not in text
