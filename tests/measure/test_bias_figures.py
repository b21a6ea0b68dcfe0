"""Figures of the operating point against closed forms of the ideal transistor, solved by bracketing."""

from __future__ import annotations

import numpy as np
import pytest
from scipy.optimize import brentq

from checker.stages.region import REGIONS
from checker.trouble import CannotTell
from tests.measure.nodal import IDEAL, VT
from tests.whole import board_from, intent_text, mirrored, set_up_from

STAGE = "V1 VCC 0 12\nR1 VCC B 47k\nR2 B 0 10k\nRE E 0 1k\nRC VCC C 4.7k\nQ1 C B E QI\n"
IS = 1e-14
NO_BAND = intent_text(band=None)


def collector_a(beta: float, *, r1: float = 47e3, r2: float = 10e3, re: float = 1e3) -> float:
    """IC of the divider-biased stage, active: VTH = IB RTH + VT ln(IC/IS) + (IC + IB) RE; `beta` may be inf."""
    vth, rth = 12.0 * r2 / (r1 + r2), r1 * r2 / (r1 + r2)
    return brentq(
        lambda ic: vth - ic / beta * rth - VT * np.log(ic / IS) - (ic + ic / beta) * re, 1e-9, 12.0 / re, rtol=1e-13
    )


def ask(netlist: str, key: str, intent: str = NO_BAND) -> float:
    """A figure of Q1, nominal."""
    return float(board_from(netlist, intent).ask(key, "Q1").values[0, 0].real)


@pytest.mark.parametrize("beta", [20.0, 100.0, 500.0])
def test_divider_shift(beta: float) -> None:
    """|IC/IC(IB = 0) - 1|."""
    model = IDEAL.replace("BF=100", f"BF={beta:g}")
    wanted = abs(collector_a(beta) / collector_a(np.inf) - 1.0)
    # A difference of two currents each certified to 1e-9.
    assert ask(STAGE + model, "divider_shift") == pytest.approx(wanted, rel=1e-6)


def test_divider_shift_needs_a_divider() -> None:
    figure = board_from(STAGE.replace("R2 B 0 10k\n", "").replace("47k", "470k") + IDEAL, NO_BAND).ask(
        "divider_shift", "Q1"
    )
    assert figure.reason == "not applicable: no divider feeds the base"


def test_gain_spread() -> None:
    """A model alone has no stated limits: half and twice are taken, which the report's assumptions say."""
    wanted = collector_a(200.0) / collector_a(50.0)
    assert ask(STAGE + IDEAL, "gain_spread_ratio") == pytest.approx(wanted, rel=1e-6)
    assert any("0.5 and 2 times" in words for words in set_up_from(STAGE + IDEAL, NO_BAND).circuit.assumptions)


def test_gain_spread_of_a_base_resistor_is_that_of_the_gain() -> None:
    """Fixed base current: IC goes with beta, four to one."""
    fixed = "V1 VCC 0 12\nI1 0 B 10u\nRC VCC C 1k\nQ1 C B 0 QI\n"
    assert ask(fixed + IDEAL, "gain_spread_ratio") == pytest.approx(4.0, rel=1e-6)


@pytest.mark.parametrize("polarity", [1.0, -1.0])
def test_headroom(polarity: float) -> None:
    """VBC at the edge, where IC/IB = 0.9 of its value at VBC = 0 and the same VBE (transport form), less VBC."""
    text = STAGE if polarity > 0 else mirrored(STAGE.replace("QI", "QN")).replace("QP", "QI")
    board = board_from(text + (IDEAL if polarity > 0 else IDEAL.replace("NPN", "PNP")), NO_BAND)
    vbe, vbc = (float(board.ask(key, "Q1").values[0, 0]) for key in ("vbe_v", "vbc_v"))

    def ratio(at_v: float) -> float:
        forward, backward = np.expm1(vbe / VT), np.expm1(at_v / VT)
        return (forward - backward - backward) / (forward / 100.0 + backward)

    edge = brentq(lambda v: ratio(v) - 0.9 * ratio(0.0), 0.0, vbe, xtol=1e-14)
    # The bracket of the measure is cut to a nanovolt.
    assert float(board.ask("headroom_v", "Q1").values[0, 0]) == pytest.approx(edge - vbc, abs=2e-9)


def test_small_signal_parameters() -> None:
    """gm = IC/VT, r_pi = VT/IB, re' = VT/IE; ro infinite; fT = gm/(2 pi (TF gm + CJE + CJC)), flat junctions."""
    model = ".model QI NPN(IS=1e-14 BF=100 TF=0.5n CJE=10p MJE=0 CJC=4p MJC=0)\n"
    board = board_from(STAGE + model, NO_BAND)
    figures = {
        key: float(board.ask(key, "Q1").values[0, 0]) for key in ("gm_s", "rpi_ohm", "re_ohm", "ft_hz", "ro_ohm")
    }
    ic = collector_a(100.0)
    gm = ic / VT
    assert figures["gm_s"] == pytest.approx(gm, rel=1e-6)
    assert figures["rpi_ohm"] == pytest.approx(100.0 / gm, rel=1e-6)
    assert figures["re_ohm"] == pytest.approx(VT / (1.01 * ic), rel=1e-6)
    assert figures["ft_hz"] == pytest.approx(gm / (2.0 * np.pi * (0.5e-9 * gm + 14e-12)), rel=1e-6)
    assert np.isnan(figures["ro_ohm"])
    assert board.ask("ro_ohm", "Q1").reason == "infinite: the model has no Early voltage"


def test_junction_temperature_is_a_fixed_point() -> None:
    """TJ = TA + P(TJ) RthJA, with P of the same board solved isothermally at TJ."""
    hot = "V1 VCC 0 12\nR1 VCC B 4.7k\nR2 B 0 1k\nRE E 0 22\nRC VCC C 47\nQ1 C B E QI\n" + IDEAL
    part = '[[part]]\nref = "Q1"\nrth_ja_kpw = 200\ntj_max_c = 150\np_max_w = 0.625\n'
    figure = board_from(hot, intent_text(band=None, more='[ambient]\nnominal = "25 degC"\n') + part).ask("tj_c", "Q1")
    tj = float(figure.values[0, 0])
    assert tj > 60.0
    at_tj = intent_text(band=None, more=f'[ambient]\nnominal = "{tj:.9f} degC"\n') + part
    assert tj == pytest.approx(25.0 + 200.0 * ask(hot, "power_w", at_tj), abs=1e-3)


@pytest.mark.parametrize(("ambient_c", "watt"), [(20.0, 0.625), (25.0, 0.625), (75.0, 0.375), (150.0, 0.0)])
def test_the_rated_dissipation_falls_in_a_straight_line(ambient_c: float, watt: float) -> None:
    """Common practice, no source: Ptot (TJmax - TA)/(TJmax - 25), at most Ptot."""
    part = '[[part]]\nref = "Q1"\ntj_max_c = 150\np_max_w = 0.625\n'
    intent = intent_text(band=None, more=f'[ambient]\nnominal = "{ambient_c:g} degC"\n') + part
    assert ask(STAGE + IDEAL, "power_limit_w", intent) == pytest.approx(watt, abs=1e-9)


def test_missing_ratings_cannot_be_told() -> None:
    board = board_from(STAGE + IDEAL, NO_BAND)
    for key, datum in (
        ("power_limit_w", "rated dissipation of Q1"),
        ("tj_max_c", "rated junction temperature of Q1"),
        ("tj_c", "thermal resistance of Q1"),
    ):
        with pytest.raises(CannotTell) as gap:
            board.ask(key, "Q1")
        assert gap.value.datum == datum
        assert 'ref = "Q1"' in gap.value.supply


OPEN_BASE = "V1 VCC 0 12\nRE E 0 1k\nRC VCC C 4.7k\nC1 X B 1u\nRX X 0 1k\nQ1 C B E QI\n"


@pytest.mark.parametrize(
    ("extra", "path"),
    [
        ("", 0.0),
        ("R1 VCC B 100k\n", 1.0),
        ("L1 B Y 1m\nR1 Y 0 100k\n", 1.0),
        ("I1 0 B 1u\n", 1.0),
        ("D1 VCC B DX\n.model DX D(IS=1e-14)\n", 1.0),
        ("Q2 VCC Y B QI\nR1 Y VCC 100k\n", 1.0),
        ("C2 B VCC 1u\n", 0.0),
    ],
)
def test_paths_of_base_current(extra: str, path: float) -> None:
    assert ask(OPEN_BASE + extra + IDEAL, "base_dc_path") == path


def test_a_connector_may_feed_the_base() -> None:
    board = board_from(OPEN_BASE + "RB B J 1k\nXJ1 J 0 CONN_01X02\n" + IDEAL, NO_BAND)
    with pytest.raises(CannotTell) as gap:
        board.ask("base_dc_path", "Q1")
    assert "J1" in gap.value.datum
    assert "[[port]]" in gap.value.supply


def test_a_declared_port_is_known_to_feed_nothing() -> None:
    netlist = OPEN_BASE + "RB B J 1k\nXJ1 J 0 CONN_01X02\n" + IDEAL
    intent = intent_text(("J", "input", ""), band=None)
    assert ask(netlist, "base_dc_path", intent) == 0.0


OFF_BOARD = "V1 VCC 0 12\nR1 VCC X 10k\nR2 X 0 100\nRB X B 1k\nRE E 0 1k\nQ1 C B E QI\nXJ1 C VCC CONN_01X02\n"


def test_a_connector_may_feed_the_collector() -> None:
    """The load is off the board: nothing here tells whether a current flows."""
    with pytest.raises(CannotTell) as gap:
        board_from(OFF_BOARD + IDEAL, NO_BAND).ask("region_code", "Q1")
    assert "J1 pin 1" in gap.value.datum
    assert "collector" in gap.value.datum


@pytest.mark.parametrize("feed", ["RC VCC C 1k\n", "I1 VCC C 1m\nDC C VCC DX\n.model DX D(IS=1e-14)\n"])
def test_a_collector_fed_on_the_board_is_judged(feed: str) -> None:
    assert REGIONS[int(ask(OFF_BOARD + feed + IDEAL, "region_code"))] == "cut-off"


def test_no_current_at_all_is_cut_off_in_every_scenario() -> None:
    """Voltages of picovolts are rounding, and no region follows from their sign."""
    netlist = "V1 VCC 0 12\nRB B 0 10k\nRE E 0 1k\nRC C 0 1k\nQ1 C B E QI\nR9 VCC 0 1k\n"
    codes = board_from(netlist + IDEAL, NO_BAND).ask("region_code", "Q1").values
    assert {REGIONS[int(code)] for code in codes.ravel()} == {"cut-off"}
