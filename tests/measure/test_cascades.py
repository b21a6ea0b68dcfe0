"""Corners against closed forms, figures of cascaded stages and of groups against node equations written by hand."""

from __future__ import annotations

from functools import cache

import numpy as np
import pytest
from numpy.testing import assert_allclose

from checker.board import Board
from checker.measure.chain import source_voltage
from checker.measure.chain import transfer as measured
from checker.measure.links import Outer, outer_of
from tests.measure.nodal import IDEAL, VT, Nodal
from tests.whole import board_from, intent_text

RB, RE, RC, RS, RL = 8.2456140350877e3, 1e3, 4.7e3, 600.0, 10e3
"""RB: 47 k beside 10 k."""


def bias(board: Board, stage: str) -> tuple[float, float]:
    """IC and IB [A]."""
    return tuple(float(board.ask(key, stage).values[0, 0]) for key in ("ic_a", "ib_a"))  # type: ignore[return-value]


def amplifier(n: int, before: str, after: str) -> str:
    """Common emitter with a bare emitter resistor: unilateral, since ideal devices have no way back."""
    return (
        f"R1{n} VCC B{n} 47k\nR2{n} B{n} 0 10k\nRE{n} E{n} 0 1k\nRC{n} VCC C{n} 4.7k\n"
        f"C{n} {before} B{n} {{C{n}}}\nQ{n} C{n} B{n} E{n} QI\n" + (f"CO C{n} {after} {{CO}}\n" if after else "")
    )


def one_stage(c1: float, co: float) -> str:
    """A single stage between the ports."""
    return "V1 VCC 0 12\n" + amplifier(1, "IN", "OUT").format(C1=c1, CO=co) + IDEAL


PORTS = (("IN", "input", "600 ohm"), ("OUT", "output", "10 kohm"))


@cache
def input_ohm(netlist: str) -> float:
    """RB beside r_pi + (beta + 1) RE of the first stage, r_pi = VT/IB."""
    ic, ib = bias(board_from(netlist, intent_text(*PORTS)), "Q1")
    return 1.0 / (1.0 / RB + 1.0 / (VT / ib + (ic / ib + 1.0) * RE))


def test_the_lower_corner_of_one_capacitor() -> None:
    """f = 1/(2 pi C (RS + Rin)), the other capacitor 1 F."""
    z = input_ohm(one_stage(1.0, 1.0))
    board = board_from(one_stage(1e-7, 1.0), intent_text(*PORTS, band=("10 kHz", "1 MHz")))
    wanted = 1.0 / (2.0 * np.pi * 1e-7 * (RS + z))
    # The reference lies in the band, where |T| is short of its limit by (f/10 kHz)^2/2 at most; 1 MHz leaves 1e-8.
    assert board.ask("low_corner_hz", "Q1").values[0, 0] == pytest.approx(wanted, rel=1e-5)
    assert board.ask("low_corner_hz", "in->out").values[0, 0] == pytest.approx(wanted, rel=1e-5)


def test_the_upper_corner_of_one_capacitor() -> None:
    """f = 1/(2 pi C (RC beside RL)) for a capacitor across the load."""
    board = board_from(one_stage(1.0, 1.0) + "CP OUT 0 1n\n", intent_text(*PORTS, band=("100 Hz", "1 kHz")))
    wanted = 1.0 / (2.0 * np.pi * 1e-9 * RC * RL / (RC + RL))
    # The reference is at 100 Hz to 1 kHz: (1 kHz/f)^2/2 = 1e-10 short.
    assert board.ask("high_corner_hz", "Q1").values[0, 0] == pytest.approx(wanted, rel=1e-5)


def test_no_corner_is_said_so() -> None:
    figure = board_from(one_stage(1.0, 1.0), intent_text(*PORTS)).ask("high_corner_hz", "Q1")
    assert np.isnan(figure.values[0, 0])
    assert figure.reason == "no crossing of -3 dB between 1 mHz and 100 GHz"


def test_three_equal_corners() -> None:
    """Three capacitors whose corners are all 100 Hz, none loading another: each by itself loses 3.0103 dB at 100 Hz,
    the corner of all is 100 Hz/sqrt(2^(1/3) - 1) = 196.15 Hz, and each stage has its own corner of 100 Hz."""
    v1 = "V1 VCC 0 12\n"
    two = v1 + amplifier(1, "IN", "") + amplifier(2, "C1", "OUT") + IDEAL
    z1 = z2 = input_ohm(one_stage(1.0, 1.0))
    c1, c2, co = (1.0 / (2.0 * np.pi * 100.0 * r) for r in (RS + z1, RC + z2, RC + RL))
    board = board_from(two.format(C1=c1, C2=c2, CO=co), intent_text(*PORTS, band=("100 Hz", "1 MHz")))
    half = 10.0 * np.log10(2.0)
    for part in ("C1", "C2", "CO"):
        assert board.ask("own_loss_db", part).values[0, 0] == pytest.approx(half, rel=1e-5)
    whole = 100.0 / np.sqrt(2.0 ** (1.0 / 3.0) - 1.0)
    assert board.ask("low_corner_hz", "in->out").values[0, 0] == pytest.approx(whole, rel=1e-5)
    # The first stage is loaded by C2 in place: its corner is not that of C1 alone; the last one has C2 and CO.
    last = 100.0 / np.sqrt(np.sqrt(2.0) - 1.0)
    assert board.ask("low_corner_hz", "Q2").values[0, 0] == pytest.approx(last, rel=1e-5)


def test_stages_multiply_to_the_whole() -> None:
    """Voltage gains from reference to reference times what links and pads lose give the gain from port to port."""
    v1 = "V1 VCC 0 12\n"
    netlist = (v1 + amplifier(1, "IN", "") + amplifier(2, "C1", "OUT") + IDEAL).format(C1=1.0, C2=1.0, CO=1.0)
    board = board_from(netlist, intent_text(*PORTS))
    gains = [board.ask("voltage_gain", s).values[0] for s in ("Q1", "Q2")]
    # Links of 1 F lose 1e-7 at 300 Hz.
    assert_allclose(board.ask("voltage_gain", "in->out").values[0], gains[0] * gains[1], rtol=1e-6)


CASCODE = """V1 VCC 0 12
R1 VCC B2 39k
R2 B2 B1 15k
R3 B1 0 10k
CB B2 0 100u
C1 IN B1 10u
RE E 0 1k
CE E 0 100u
RC VCC C2 3.9k
CO C2 OUT 10u
CM C2 B2 3p
CN M B1 5p
Q1 M B1 E QI
Q2 C2 B2 M QI
"""


def cascode_nodes(board: Board, f_hz: float, *, out: bool = True) -> Nodal:
    """The cascode by hand."""
    n = Nodal(f_hz)
    for a, b, ohm in (
        ("IN", "0", 600.0), ("0", "B2", 39e3), ("B2", "B1", 15e3), ("B1", "0", 10e3), ("E", "0", 1e3),
        ("0", "C2", 3.9e3), ("OUT", "0", 10e3),
    ):  # fmt: skip
        n.r(a, b, ohm)
    for a, b, farad in (
        ("B2", "0", 1e-4), ("IN", "B1", 1e-5), ("E", "0", 1e-4), ("C2", "B2", 3e-12), ("M", "B1", 5e-12)
    ):  # fmt: skip
        n.c(a, b, farad)
    if out:
        n.c("C2", "OUT", 1e-5)
    n.q("M", "B1", "E", *bias(board, "Q1"))
    n.q("C2", "B2", "M", *bias(board, "Q2"))
    return n


def test_a_group_is_measured_from_its_first_to_its_last_link() -> None:
    board = board_from(CASCODE + IDEAL, intent_text(*PORTS, band=("1 kHz", "1 MHz")))
    assert [(g.id, g.configuration) for g in board.recognition.groups] == [("Q1+Q2", "cascode")]
    for k, f in enumerate((1e3, np.sqrt(1e9), 1e6)):
        v = cascode_nodes(board, f).solve({"IN": 1.0 / 600.0})
        s = 2j * np.pi * f
        into, out = (v["IN"] - v["B1"]) * s * 1e-5, (v["C2"] - v["OUT"]) * s * 1e-5
        z_out = cascode_nodes(board, f, out=False).solve({"C2": 1.0})["C2"]
        power = (v["C2"] * out.conjugate()).real / (v["B1"] * into.conjugate()).real
        for key, wanted in (
            ("voltage_gain", v["C2"] / v["B1"]),
            ("current_gain", out / into),
            ("input_impedance_ohm", v["B1"] / into),
            ("output_impedance_ohm", z_out),
            ("power_gain_db", 10.0 * np.log10(power)),
        ):
            # Divided figures keep six digits.
            assert_allclose(board.ask(key, "Q1+Q2").values[0, k], wanted, rtol=1e-6, err_msg=key)


def test_a_direct_link_is_the_receiving_terminal() -> None:
    """Q1's output link is Q2's emitter: its current is the link current, its voltage the output reference. The
    emitter looks in with gm + g_pi, so that Q1 feeds VT/IE of Q2; the link current is gm of Q1 but for CN."""
    board = board_from((CASCODE + IDEAL).replace("CN M B1 5p\n", ""), intent_text(*PORTS, band=("1 kHz", "1 MHz")))
    (ic1, ib1), (ic2, ib2) = bias(board, "Q1"), bias(board, "Q2")
    f = float(np.sqrt(1e9))
    n = cascode_nodes(board, f)
    n._y = [row for row in n._y if row[:2] != ("M", "B1")]
    v = n.solve({"IN": 1.0 / 600.0})
    link = (v["M"] - v["B2"]) * (ic2 + ib2) / VT
    into = (v["IN"] - v["B1"]) * n.s * 1e-5
    q1 = {key: complex(board.ask(key, "Q1").values[0, 1]) for key in ("voltage_gain", "current_gain")}
    assert q1["voltage_gain"] == pytest.approx(v["M"] / v["B1"], rel=1e-6)
    # Out of Q1's side into the emitter.
    assert q1["current_gain"] == pytest.approx(link / into, rel=1e-6)
    q2 = {key: complex(board.ask(key, "Q2").values[0, 1]) for key in ("voltage_gain", "input_impedance_ohm")}
    assert q2["voltage_gain"] == pytest.approx(v["C2"] / v["M"], rel=1e-6)
    assert q2["input_impedance_ohm"] == pytest.approx(v["M"] / link, rel=1e-6)
    assert ic1 / ib1 == pytest.approx(100.0, rel=1e-9)


def test_hand_figures_agree_where_they_hold() -> None:
    """Common practice, no source: common base gain rc/re', input re' beside RE, output RC, current gain rc/RL."""
    netlist = "V1 VCC 0 12\nR1 VCC B 47k\nR2 B 0 10k\nCB B 0 1\nRE E 0 1k\nRC VCC C 4.7k\n"
    netlist += "C1 IN E 1\nC2 C OUT 1\nQ1 C B E QI\n"
    board = board_from(netlist + IDEAL, intent_text(*PORTS))
    ic, ib = bias(board, "Q1")
    re = VT / (ic + ib)
    rc = RC * RL / (RC + RL)
    hand = {key: float(figure.values[0, 0]) for key, figure in board.rule_of_thumb("Q1").items()}
    wanted = {
        "voltage_gain": rc / re,
        "input_impedance_ohm": 1.0 / (1.0 / re + 1.0 / RE),
        "output_impedance_ohm": RC,
        "current_gain": rc / RL,
    }
    assert hand == pytest.approx(wanted, rel=1e-6)
    # The formulas take alpha for 1 (1 % at a gain of 100); the one of current gain leaves out RE beside re' too (2 %).
    for key, value in wanted.items():
        allowed = 0.032 if key == "current_gain" else 0.011
        assert abs(board.ask(key, "Q1").values[0, 1]) == pytest.approx(value, rel=allowed)


WOUND = """V1 VCC 0 12
R1 VCC BB 47k
R2 BB 0 10k
CD BB 0 1
LP IN 0 100m
LS {ends} 400m
K1 LP LS 0.95
RE E 0 1k
RC VCC C 4.7k
C2 C OUT 1
Q1 C B E QI
"""


@pytest.mark.parametrize(("ends", "way"), [("B BB", 1.0), ("BB B", -1.0)])
def test_a_winding_feeds_a_stage(ends: str, way: float) -> None:
    """Cut, it shows e = s M/(RS + s LP) of the port's e.m.f.; T = v(OUT)/e has no corner of the transformer's first
    winding in it, only those of its leakage against the stage."""
    netlist = WOUND.format(ends=ends) + IDEAL
    board = board_from(netlist, intent_text(*PORTS, band=("300 Hz", "30 kHz")))
    stage = board.recognition.stage("Q1")
    assert stage.input_link is not None
    assert (stage.input_link.kind, stage.input_link.part) == ("winding", "LS")
    ic, ib = bias(board, "Q1")
    rc = RC * RL / (RC + RL)
    z_in = VT / ib + (ic / ib + 1.0) * RE
    gain = rc * ic / (VT + (ic + ib) * RE)

    def transfer(f_hz: float) -> float:
        """|v(OUT)|/|e| with the winding's own impedance, as seen from the base, before the stage's input."""
        s = 2j * np.pi * f_hz
        m = 0.95 * np.sqrt(0.1 * 0.4)
        z_source = s * 0.4 - (s * m) ** 2 / (RS + s * 0.1)
        return abs(gain * z_in / (z_in + z_source))

    outer = outer_of(board.bench, "Q1")
    assert isinstance(outer, Outer)
    f = np.array([300.0, 3e3, 30e3])
    response = board.bench.nominal_response(f)
    s = 2j * np.pi * f
    e = way * s * 0.95 * np.sqrt(0.1 * 0.4) / (RS + s * 0.1)
    # The far end is held by 1 F: 5e-4 ohm beside kilohms.
    assert_allclose(source_voltage(board.bench, response, outer)[0], e, rtol=1e-6)
    assert_allclose(np.abs(measured(board.bench, response, outer)[0]), [transfer(x) for x in f], rtol=1e-5)
