"""Whole checks of decks with absurd figures: a report without faults, or one message, and no warning of arithmetic."""

from __future__ import annotations

import random
import re
import warnings
from pathlib import Path

import pytest

from checker.pipeline import check_board
from checker.report.forms import form
from checker.trouble import InputTrouble

DECK = """* every device
V1 VCC 0 12
R1 VCC B 100k
R2 B 0 15k
RE E 0 1k
RC VCC C 4.7k
C1 IN B 1u
VS IN 0 AC 1
Q1 C B E QN
J1 VCC E O JN
RJ O 0 1k
M1 C2 O 0 0 MN W=10u L=1u
RD VCC C2 10k
D1 C2 Z DZ
RZ Z 0 1k
L1 Z Y 1m
L2 Y 0 2m
K1 L1 L2 0.9
CX Y 0 1n
.model QN NPN(IS=1e-14 BF=200 VAF=100 TF=0.4n CJE=8p CJC=4p RB=10 NF=1 NE=1.5 ISE=1e-13 IKF=.1)
.model JN NJF(VTO=-3 BETA=1m LAMBDA=0.01)
.model MN NMOS(VTO=2 KP=50m LAMBDA=0.01 GAMMA=.5 PHI=.6)
.model DZ D(IS=1e-14 BV=5.1 IBV=1m N=1.1 CJO=10p)
.end
"""
ABSURD = ("0", "-1", "1e-30", "1e30", "1e-300", "1e300", "nan", "1", "-0", "1e12", "1e-12", "1000", "0.5", "")
NUMBER = re.compile(r"(?<![A-Za-z0-9_.])[0-9][0-9.]*(?:e-?\d+)?[a-zA-Z%]*")


@pytest.mark.parametrize("seed", range(40))
def test_absurd_figures(seed: int, tmp_path: Path) -> None:
    chance = random.Random(f"stageproof {seed}")  # noqa: S311 - no secret
    text = DECK
    for _ in range(chance.choice((1, 1, 2, 3))):
        number = chance.choice(list(NUMBER.finditer(text)))
        text = text[: number.start()] + chance.choice(ABSURD) + text[number.end() :]
    path = tmp_path / "board.cir"
    path.write_text(text, "utf-8")
    with warnings.catch_warnings():
        warnings.simplefilter("error")
        try:
            report = check_board(path, None).report
        except InputTrouble:
            return
        form("text")(report, width=80, colour=False)
    assert report.faults == ()


LOOSE = """* a ladder of transistors of which hardly one is fed
Q4 n18 n13 n10 n00 BC557B
Q11 n10 n16 n08 n01 BC557B
Q7 n11 n16 n09 n02 BC557B
Q10 n08 n15 n06 n03 BC557B
Q6 n09 n15 n07 n04 BC557B
R11 n15 n16 150
R12 n16 n13 150
R13 n13 n19 150
R14 n19 VEE 220
R6 n17 n15 150
Q9 n06 n14 n12 n05 BC557B
R15 n17 n14 470
V2 0 VEE 5
.end
"""


def test_a_ladder_that_hangs_in_the_air(tmp_path: Path) -> None:
    """Once an overflow, told on standard error, in the proof of a point whose last step was without measure."""
    path = tmp_path / "board.cir"
    path.write_text(LOOSE, "utf-8")
    with warnings.catch_warnings():
        warnings.simplefilter("error")
        report = check_board(path, None).report
    assert report.faults == () and len(report.stages) == 6
