"""Small circuits with field-effect transistors, alone and mixed with bipolars, with what must be recognised.

All values are invented; N channel as written (`mirrored` turns them round).
"""

from __future__ import annotations

from tests.stages.circuits import CB, CC, CE, IN_OUT, Case, quiet
from tests.whole import intent_text

CS = ("common-source", "gate", "drain", "signal")
CG = ("common-gate", "source", "drain", "signal")
CD = ("common-drain", "gate", "source", "signal")
BIAS = "V1 VCC 0 12\nRG G 0 1meg\nC1 IN G 100n\n"
RF = intent_text(("IN", "input", "600 ohm"), ("OUT", "output", "10 kohm"), band=("300 Hz", "3 kHz"))

FET_CASES = [
    Case(
        name="common source, junction FET",
        netlist=BIAS + "RD VCC D 2.2k\nRS S 0 680\nCS S 0 1000u\nC2 D OUT 10u\nJ1 D G S JN",
        stages={"J1": CS},
        links={"J1": ("capacitor C1", "capacitor C2")},
    ),
    Case(
        name="common source, MOSFET",
        netlist="V1 VCC 0 12\nR1 VCC G 1meg\nR2 G 0 270k\nC1 IN G 1u\nRD VCC D 2.2k\nRS S 0 100\nC2 D OUT 10u\n"
        "M1 D G S S MN",
        stages={"M1": CS},
        links={"M1": ("capacitor C1", "capacitor C2")},
    ),
    Case(
        name="common gate",
        netlist="V1 VCC 0 12\nRD VCC D 1.5k\nRS S 0 680\nC1 IN S 1000u\nC2 D OUT 10u\nJ1 D 0 S JN",
        stages={"J1": CG},
        links={"J1": ("capacitor C1", "capacitor C2")},
    ),
    Case(
        name="source follower",
        netlist=BIAS + "RS S 0 2.2k\nC2 S OUT 10u\nJ1 VCC G S JN",
        stages={"J1": CD},
        links={"J1": ("capacitor C1", "capacitor C2")},
    ),
    Case(
        name="phase splitter",
        netlist=BIAS + "RD VCC D 1k\nRS S 0 1k\nC2 D OUT 10u\nC3 S OUT2 10u\nJ1 D G S JN",
        stages={"J1": ("phase-splitter", "gate", "drain", "signal")},
        intent=intent_text(*IN_OUT, ("OUT2", "output", "10 kohm")),
    ),
    Case(
        name="junction FET into bipolar follower",
        netlist=BIAS + "RD VCC D 2.2k\nRS S 0 680\nCS S 0 1000u\nQ1 VCC D E QN\nRE E 0 2.2k\nC2 E OUT 10u\nJ1 D G S JN",
        stages={"J1": CS, "Q1": CC},
        groups={"J1+Q1": "direct-coupled-pair"},
    ),
    Case(
        name="mixed cascode",
        netlist=BIAS + "RD VCC C 2.2k\nRS S 0 680\nCS S 0 1000u\nR1 VCC B 100k\nR2 B 0 100k\nCB B 0 100u\n"
        "Q1 C B D QN\nC2 C OUT 10u\nJ1 D G S JN",
        stages={"J1": CS, "Q1": CB},
        groups={"J1+Q1": "cascode"},
    ),
    Case(
        name="differential pair of junction FETs on a bipolar current source",
        netlist="V1 VCC 0 12\nV2 VEE 0 -12\nRG IN 0 1meg\nRG2 G2 0 1meg\nCG G2 0 1u\nRD1 VCC D1 3.3k\nRD2 VCC D2 3.3k\n"
        "C2 D2 OUT 10u\nJ1 D1 IN T JN\nJ2 D2 G2 T JN\nQ1 T B E QN\nR1 0 B 10k\nR2 B VEE 3.3k\nRE E VEE 1k",
        stages={"J1": CD, "J2": CG, "Q1": quiet("current-source")},
        groups={"J1+J2": "differential-pair"},
        intent=RF,
    ),
    Case(
        name="junction FET as current source under a follower",
        netlist="V1 VCC 0 12\nV2 VEE 0 -12\nRG IN 0 1meg\nJ1 VCC IN S JN\nJ2 S VEE VEE JN\nC2 S OUT 10u",
        stages={"J1": CD, "J2": quiet("current-source")},
    ),
    Case(
        name="two-terminal current source from the supply",
        netlist="V1 VCC 0 15\nJ1 VCC X S JN\nRS S X 1k\nRL X 0 1k\n"
        + BIAS.replace("V1 VCC 0 12\n", "")
        + "RD VCC D 2.2k\nRX Y 0 680\nCX Y 0 1000u\nC2 D OUT 10u\nJ2 D G Y JN",
        stages={"J1": quiet("current-source"), "J2": CS},
    ),
    Case(
        name="diode-connected MOSFET and its mirror",
        netlist="V1 VCC 0 12\nRR VCC A 10k\nM1 A A 0 0 MN\nM2 D A 0 0 MN\nRG IN 0 1meg\nJ1 VCC IN D JN\nC2 D OUT 10u",
        stages={"M1": quiet("diode-connected"), "M2": quiet("current-source"), "J1": CD},
        groups={"M1+M2": "current-mirror"},
    ),
    Case(
        name="bipolar amplifier with a MOSFET load switch",
        netlist="V1 VCC 0 12\nM1 LOAD GA 0 0 MN\nRP GA 0 100k\nRL VCC LOAD 100\n"
        "R1 VCC B 47k\nR2 B 0 10k\nRC VCC C 4.7k\nRE E 0 1k\nCE E 0 1000u\nC1 IN B 10u\nC2 C OUT 10u\nQ1 C B E QN",
        stages={"M1": quiet("switch", "switch"), "Q1": CE},
    ),
    Case(
        name="load switch held on",
        netlist="V1 VCC 0 12\nM1 LOAD GA 0 0 MN\nRP GA VCC 100k\nRL VCC LOAD 100\n"
        + BIAS.replace("V1 VCC 0 12\n", "")
        + "RD VCC D 2.2k\nRS S 0 680\nC2 D OUT 10u\nJ1 D G S JN",
        stages={"M1": quiet("switch", "switch"), "J1": CS},
    ),
]
