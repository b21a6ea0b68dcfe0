"""Figures of groups against node equations written by hand, and as the report prints them."""

from __future__ import annotations

import numpy as np
from numpy.testing import assert_allclose

from checker.board import Board
from tests.measure.nodal import IDEAL, Nodal
from tests.stages.circuits import CASES
from tests.whole import board_from, intent_text, outcome_from

PNP = ".model QJ PNP(IS=1e-14 BF=100)\n"
PORTS = (("IN", "input", "600 ohm"), ("OUT", "output", "10 kohm"))
BY_NAME = {case.name: case for case in CASES}
F0 = float(np.sqrt(300.0 * 3e3))


def transistor(n: Nodal, board: Board, name: str, c: str, b: str, e: str) -> None:
    """A transistor of either polarity: the small-signal equations are the same."""
    ic, ib = (abs(float(board.ask(key, name).values[0, 0])) for key in ("ic_a", "ib_a"))
    n.q(c, b, e, ic, ib)


def asked(board: Board, group: str, key: str) -> complex:
    """A figure at f0, nominal."""
    return complex(board.ask(key, group).values[0, 1])


def test_complementary_feedback_pair() -> None:
    netlist = BY_NAME["complementary feedback pair"].netlist.replace("QN", "QI").replace("QP", "QJ")
    board = board_from(netlist + "\n" + IDEAL + PNP, intent_text(*PORTS))

    def nodes(*, link: bool) -> Nodal:
        n = Nodal(F0)
        for a, b, ohm in (("IN", "0", 600.0), ("B", "0", 50e3), ("C1", "0", 1e3), ("E", "0", 1e3), ("OUT", "0", 1e4)):
            n.r(a, b, ohm)
        n.c("IN", "B", 1e-5)
        if link:
            n.c("E", "OUT", 1e-4)
        transistor(n, board, "Q1", "C1", "B", "E")
        transistor(n, board, "Q2", "E", "C1", "0")
        return n

    v = nodes(link=True).solve({"IN": 1.0 / 600.0})
    s = 2j * np.pi * F0
    into, out = (v["IN"] - v["B"]) * s * 1e-5, (v["E"] - v["OUT"]) * s * 1e-4
    z_out = nodes(link=False).solve({"E": 1.0})["E"]
    # Feedback of a few hundred times takes two or three of the nine digits of the certificate.
    for key, wanted in (
        ("voltage_gain", v["E"] / v["B"]),
        ("current_gain", out / into),
        ("input_impedance_ohm", v["B"] / into),
        ("output_impedance_ohm", z_out),
    ):
        assert_allclose(asked(board, "Q1+Q2", key), wanted, rtol=1e-5, err_msg=key)
    assert abs(z_out) < 1.0, "far under re' of either device: that is what the pair is for"


def test_differential_pair() -> None:
    netlist = BY_NAME["differential pair on a current source"].netlist.replace("QN", "QI")
    intent = intent_text(("IN", "input", "600 ohm"), ("OUT", "output", ""))
    board = board_from(netlist + "\n" + IDEAL, intent)

    n = Nodal(F0)
    for a, b, ohm in (
        ("IN", "0", 600.0), ("IN", "0", 10e3), ("B2", "0", 10e3), ("C1", "0", 10e3), ("OUT", "0", 10e3),
        ("B3", "0", 10e3), ("B3", "0", 2.2e3), ("E3", "0", 1.2e3),
    ):  # fmt: skip
        n.r(a, b, ohm)
    transistor(n, board, "Q1", "C1", "IN", "T")
    transistor(n, board, "Q2", "OUT", "B2", "T")
    transistor(n, board, "Q3", "T", "B3", "E3")
    v = n.solve({"IN": 1.0 / 600.0})
    # Q3 adds nothing but its blocked collector.
    assert_allclose(asked(board, "Q1+Q2", "voltage_gain"), v["OUT"] / v["IN"], rtol=1e-6)
    into = (1.0 - v["IN"]) / 600.0
    assert_allclose(asked(board, "Q1+Q2", "input_impedance_ohm"), v["IN"] / into, rtol=1e-6)


def test_the_report_prints_what_the_board_answers() -> None:
    case = BY_NAME["cascode"]
    report = outcome_from(case.netlist, case.intent).report
    board = board_from(case.netlist, case.intent)
    (group,) = report.groups
    assert (group.id, group.configuration, group.devices) == ("Q1+Q2", "cascode", ("Q1", "Q2"))
    assert group.entry is not None and (group.entry.device, group.entry.terminal) == ("Q1", "base")
    assert group.exit is not None and (group.exit.device, group.exit.terminal) == ("Q2", "collector")
    assert group.specs is not None
    gain = group.specs.voltage_gain
    assert gain is not None
    assert_allclose(complex(gain.re, gain.im), asked(board, "Q1+Q2", "voltage_gain"), rtol=1e-6)
    assert group.specs.low_corner_hz is not None
    assert_allclose(group.specs.low_corner_hz, board.ask("low_corner_hz", "Q1+Q2").values[0, 0], rtol=1e-6)
