"""Figures at the links of a stage against node equations written by hand, by the definitions of the figures.

The stage: e.m.f. behind 600 ohm, C1, a stopper, a divided bias, an emitter resistor of which a part is bypassed, a
capacitor from collector to base, a build-out resistor, C2, a load. Input reference X, output reference Y.
"""

from __future__ import annotations

import numpy as np
import pytest
from numpy.testing import assert_allclose
from scipy.optimize import brentq

from checker.board import Board
from tests.measure.nodal import IDEAL, Nodal
from tests.whole import board_from, intent_text

NETLIST = """V1 VCC 0 12
C1 IN X 2.2u
RS X B 220
R1 VCC B 47k
R2 B 0 10k
CF C B 47p
RE E EB 100
RF EB 0 910
CE EB 0 47u
RC VCC C 4.7k
RO C Y 330
C2 Y OUT 1u
Q1 C B E QI
"""
PORTS = (("IN", "input", "600 ohm"), ("OUT", "output", "10 kohm"))
BAND = (100.0, 100e3)
RTOL = 1e-6
"""The solver's certificate allows 1e-9 of a current; the divided figures keep three digits less."""


@pytest.fixture(scope="module")
def board() -> Board:
    """The nominal board."""
    return board_from(NETLIST + IDEAL, intent_text(*PORTS, band=("100 Hz", "100 kHz")))


def by_hand(board: Board, f_hz: float, *, c1: bool = True, c2: bool = True, shorted: str = "") -> Nodal:
    """The node equations; `c1`, `c2`: whether the link stands; `shorted`: a capacitor replaced by a short."""
    ic, ib = (float(board.ask(key, "Q1").values[0, 0]) for key in ("ic_a", "ib_a"))
    ends = {"C1": {"X": "IN"}, "C2": {"OUT": "Y"}, "CE": {"EB": "0"}}
    n = Nodal(f_hz, ends.get(shorted))
    n.r("IN", "0", 600.0)
    if c1:
        n.c("IN", "X", 2.2e-6)
    n.r("X", "B", 220.0)
    n.r("B", "0", 47e3)
    n.r("B", "0", 10e3)
    n.c("C", "B", 47e-12)
    n.r("E", "EB", 100.0)
    n.r("EB", "0", 910.0)
    n.c("EB", "0", 47e-6)
    n.r("C", "0", 4.7e3)
    n.r("C", "Y", 330.0)
    if c2:
        n.c("Y", "OUT", 1e-6)
    n.r("OUT", "0", 10e3)
    n.q("C", "B", "E", ic, ib)
    return n


def driven(board: Board, f_hz: float, shorted: str = "") -> dict[str, complex]:
    """Voltages for an e.m.f. of 1 V behind the 600 ohm, which is 1/600 A into IN."""
    return by_hand(board, f_hz, shorted=shorted).solve({"IN": 1.0 / 600.0})


def currents(v: dict[str, complex], f_hz: float) -> tuple[complex, complex]:
    """Through the input link into the stage, and through the output link out of it [A]."""
    s = 2j * np.pi * f_hz
    return (v["IN"] - v["X"]) * s * 2.2e-6, (v["Y"] - v["OUT"]) * s * 1e-6


def edges() -> list[float]:
    """Low edge, f0, high edge [Hz]."""
    return [BAND[0], float(np.sqrt(BAND[0] * BAND[1])), BAND[1]]


def test_the_links(board: Board) -> None:
    stage = board.recognition.stage("Q1")
    assert (stage.input_link and stage.input_link.part, stage.output_link and stage.output_link.part) == ("C1", "C2")


def test_input_impedance_gains_and_powers(board: Board) -> None:
    wanted: dict[str, list[complex]] = {}
    for f in edges():
        v = driven(board, f)
        into, out = currents(v, f)
        power = (v["Y"] * out.conjugate()).real / (v["X"] * into.conjugate()).real
        for key, value in (
            ("input_impedance_ohm", v["X"] / into),
            ("voltage_gain", v["Y"] / v["X"]),
            ("voltage_gain_db", 20.0 * np.log10(abs(v["Y"] / v["X"]))),
            ("current_gain", out / into),
            ("power_gain_db", 10.0 * np.log10(power)),
            ("terminal_voltage_gain", v["C"] / v["B"]),
        ):
            wanted.setdefault(key, []).append(value)
    for key, values in wanted.items():
        assert_allclose(board.ask(key, "Q1").values[0], values, rtol=RTOL, err_msg=key)


def test_output_impedance_looks_back_with_the_link_open(board: Board) -> None:
    wanted = [by_hand(board, f, c2=False).solve({"Y": 1.0})["Y"] for f in edges()]
    assert_allclose(board.ask("output_impedance_ohm", "Q1").values[0], wanted, rtol=RTOL)


def test_terminal_impedances(board: Board) -> None:
    """Into the base itself: current of g_pi alone. Of the collector itself: infinite but for what CF and the loop do,
    1/(1/Z in place - 1/Z without device)."""
    ic, ib = (float(board.ask(key, "Q1").values[0, 0]) for key in ("ic_a", "ib_a"))
    z_in, z_out = [], []
    for f in edges():
        v = driven(board, f)
        z_in.append(v["B"] / ((v["B"] - v["E"]) * ib / 0.025864925))
        whole = by_hand(board, f).solve({"C": 1.0})["C"]
        empty = by_hand(board, f)
        empty._gm.clear()
        empty._y = [row for row in empty._y if row[:2] != ("B", "E")]
        z_out.append(1.0 / (1.0 / whole - 1.0 / empty.solve({"C": 1.0})["C"]))
    assert ic > 0.0
    assert_allclose(board.ask("terminal_input_impedance_ohm", "Q1").values[0], z_in, rtol=RTOL)
    # A difference of two nearly equal admittances: four digits fewer.
    assert_allclose(board.ask("terminal_output_impedance_ohm", "Q1").values[0], z_out, rtol=1e4 * RTOL)


def transfer(board: Board, f_hz: float, shorted: str = "") -> float:
    """|T|: v at the port (last stage) over the e.m.f., which is what stands before C1 with C1 cut."""
    return abs(driven(board, f_hz, shorted)["OUT"])


def reference(board: Board) -> float:
    """Largest |T| in the band."""
    return max(transfer(board, f) for f in np.geomspace(*BAND, 2001))


@pytest.mark.parametrize(("key", "inside", "outside"), [("low_corner_hz", 3e3, 1.0), ("high_corner_hz", 3e3, 1e8)])
def test_corners(board: Board, key: str, inside: float, outside: float) -> None:
    level = reference(board) / np.sqrt(2.0)
    wanted = brentq(lambda f: transfer(board, f) - level, inside, outside, xtol=1e-9, rtol=1e-12)
    # The reference is the best of a grid over the band, not of the continuum: 1e-4 of |T| at most on this flat top.
    assert board.ask(key, "Q1").values[0, 0] == pytest.approx(wanted, rel=2e-4)


def test_droops(board: Board) -> None:
    for key, f in (("droop_low_db", BAND[0]), ("droop_high_db", BAND[1])):
        wanted = 20.0 * np.log10(reference(board) / transfer(board, f))
        # 1e-4 of |T| is 1e-3 dB.
        assert board.ask(key, "Q1").values[0, 0] == pytest.approx(wanted, abs=1e-3)


@pytest.mark.parametrize("part", ["C1", "C2", "CE"])
def test_own_loss(board: Board, part: str) -> None:
    wanted = [20.0 * np.log10(transfer(board, f, part) / transfer(board, f)) for f in BAND]
    # A loss of 1e-3 dB is the ratio of two voltages that differ by 1e-4.
    assert_allclose(board.ask("own_loss_db", part).values[0], wanted, rtol=RTOL, atol=1e-9)


def test_port_figures(board: Board) -> None:
    z, gains, transducer = [], [], []
    for f in edges():
        v = driven(board, f)
        z.append(v["IN"] / ((1.0 - v["IN"]) / 600.0))
        gains.append(v["OUT"] / v["IN"])
        transducer.append(10.0 * np.log10(abs(v["OUT"]) ** 2 / 10e3 * 4.0 * 600.0))
    assert_allclose(board.ask("impedance_ohm", "in").values[0], z, rtol=RTOL)
    assert_allclose(board.ask("voltage_gain", "in->out").values[0], gains, rtol=RTOL)
    assert_allclose(board.ask("transducer_gain_db", "in->out").values[0], transducer, rtol=RTOL)
    emf = [20.0 * np.log10(transfer(board, f)) for f in edges()]
    assert_allclose(board.ask("emf_gain_db", "in->out").values[0], emf, rtol=RTOL)


def test_the_output_port_looks_back_without_its_load(board: Board) -> None:
    for k, f in enumerate(edges()):
        n = by_hand(board, f)
        n._y.remove(("OUT", "0", 1.0 / 10e3))
        wanted = n.solve({"OUT": 1.0})["OUT"]
        assert_allclose(board.ask("impedance_ohm", "out").values[0, k], wanted, rtol=RTOL)


def test_match_over_the_band(board: Board) -> None:
    figure = board.ask("return_loss_db", "in")
    assert figure.f_hz is not None
    assert (figure.f_hz[0], figure.f_hz[-1]) == pytest.approx(BAND)
    lost = board.ask("mismatch_loss_db", "in").values[0]
    for f, loss_db, mismatch_db in zip(figure.f_hz, figure.values[0], lost, strict=True):
        v = driven(board, float(f))
        z = v["IN"] / ((1.0 - v["IN"]) / 600.0)
        gamma = abs((z - 600.0) / (z + 600.0))
        assert_allclose([loss_db, mismatch_db], [-20 * np.log10(gamma), -10 * np.log10(1 - gamma**2)], rtol=1e-5)
