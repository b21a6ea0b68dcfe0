"""Small circuits of known make, NPN as written (`mirrored` turns them round), with what must be recognised.

All values are invented; supplies are ideal sources, ports come from the intent text.
"""

from __future__ import annotations

from dataclasses import dataclass, field

from tests.whole import intent_text

IN_OUT = (("IN", "input", "600 ohm"), ("OUT", "output", "10 kohm"))
DIVIDER = "V1 VCC 0 12\nR1 VCC B 47k\nR2 B 0 10k\n"


@dataclass(frozen=True, slots=True, kw_only=True)
class Case:
    """`stages`: device -> (configuration, entry, exit, role). `links`: device -> (input, output) as "kind part"."""

    name: str
    netlist: str
    stages: dict[str, tuple[str, str | None, str | None, str]]
    groups: dict[str, str] = field(default_factory=dict)
    links: dict[str, tuple[str, str]] = field(default_factory=dict)
    intent: str = intent_text(*IN_OUT)


CE = ("common-emitter", "base", "collector", "signal")
CB = ("common-base", "emitter", "collector", "signal")
CC = ("common-collector", "base", "emitter", "signal")


def quiet(label: str, role: str = "bias") -> tuple[str, str | None, str | None, str]:
    """A device that carries no signal."""
    return (label, None, None, role)


CASES = [
    Case(
        name="common emitter",
        netlist=DIVIDER + "RC VCC C 4.7k\nRE E 0 1k\nCE E 0 1000u\nC1 IN B 10u\nC2 C OUT 10u\nQ1 C B E QN",
        stages={"Q1": CE},
        links={"Q1": ("capacitor C1", "capacitor C2")},
    ),
    Case(
        name="common emitter with stopper and build-out",
        netlist=DIVIDER + "RC VCC C 4.7k\nRE E 0 1k\nC1 IN X 10u\nRS X B 220\nRO C Y 100\nC2 Y OUT 10u\nQ1 C B E QN",
        stages={"Q1": CE},
        links={"Q1": ("capacitor C1", "capacitor C2")},
    ),
    Case(
        name="common emitter straight at the ports",
        netlist="V1 VCC 0 12\nV2 VEE 0 -12\nRC VCC OUT 4.7k\nRE E VEE 11k\nCE E 0 1000u\nQ1 OUT IN E QN",
        stages={"Q1": CE},
        links={"Q1": ("port", "port")},
        intent=intent_text(("IN", "input", "600 ohm"), ("OUT", "output", "")),
    ),
    Case(
        name="common base",
        netlist=DIVIDER + "RC VCC C 4.7k\nRE E 0 1k\nCB B 0 100u\nC1 IN E 1000u\nC2 C OUT 10u\nQ1 C B E QN",
        stages={"Q1": CB},
        links={"Q1": ("capacitor C1", "capacitor C2")},
    ),
    Case(
        name="common collector",
        netlist=DIVIDER + "RE E 0 2.2k\nC1 IN B 10u\nC2 E OUT 10u\nQ1 VCC B E QN",
        stages={"Q1": CC},
        links={"Q1": ("capacitor C1", "capacitor C2")},
    ),
    Case(
        name="phase splitter",
        netlist=DIVIDER + "RC VCC C 2.2k\nRE E 0 2.2k\nC1 IN B 10u\nC2 C OUT 10u\nC3 E OTHER 10u\nQ1 C B E QN",
        intent=intent_text(*IN_OUT, ("OTHER", "output", "10 kohm")),
        stages={"Q1": ("phase-splitter", "base", "collector", "signal")},
    ),
    Case(
        name="transformer at both ends",
        netlist=DIVIDER
        + "L1 IN 0 100m\nL2 S 0 100m\nK1 L1 L2 0.99\nCS S B 100u\nRE E 0 1k\nCE E 0 1000u\n"
        + "L3 VCC C 500m\nL4 OUT 0 50m\nK2 L3 L4 0.99\nQ1 C B E QN",
        stages={"Q1": CE},
        links={"Q1": ("capacitor CS", "winding L3")},
    ),
    Case(
        name="transformer at the base",
        netlist="V1 VCC 0 12\nR1 VCC BB 47k\nR2 BB 0 10k\nCD BB 0 100u\nL1 IN 0 100m\nL2 B BB 100m\nK1 L1 L2 0.99\n"
        + "RC VCC C 4.7k\nRE E 0 1k\nCE E 0 1000u\nC2 C OUT 10u\nQ1 C B E QN",
        stages={"Q1": CE},
        links={"Q1": ("winding L2", "capacitor C2")},
    ),
    Case(
        name="two stages by a capacitor",
        netlist=DIVIDER
        + "RC VCC C 4.7k\nRE E 0 1k\nCE E 0 1000u\nC1 IN B 10u\nQ1 C B E QN\n"
        + "C2 C B2 10u\nR3 VCC B2 100k\nR4 B2 0 100k\nRE2 E2 0 2.2k\nC3 E2 OUT 10u\nQ2 VCC B2 E2 QN",
        stages={"Q1": CE, "Q2": CC},
        links={"Q1": ("capacitor C1", "capacitor C2"), "Q2": ("capacitor C2", "capacitor C3")},
    ),
    Case(
        name="direct-coupled pair",
        netlist=DIVIDER
        + "RC VCC C 4.7k\nRE E 0 1k\nCE E 0 1000u\nC1 IN B 10u\nQ1 C B E QN\nRE2 E2 0 2.2k\n"
        + "C3 E2 OUT 10u\nQ2 VCC C E2 QN",
        stages={"Q1": CE, "Q2": CC},
        groups={"Q1+Q2": "direct-coupled-pair"},
        links={"Q1": ("capacitor C1", "direct Q2"), "Q2": ("direct Q2", "capacitor C3")},
    ),
    Case(
        name="direct coupling through a stopper",
        netlist=DIVIDER
        + "RC VCC C 4.7k\nRE E 0 1k\nCE E 0 1000u\nC1 IN B 10u\nQ1 C B E QN\nRS C B2 100\nRE2 E2 0 2.2k\n"
        + "C3 E2 OUT 10u\nQ2 VCC B2 E2 QN",
        stages={"Q1": CE, "Q2": CC},
        groups={"Q1+Q2": "direct-coupled-pair"},
    ),
    Case(
        name="cascode",
        netlist="V1 VCC 0 12\nR1 VCC B2 39k\nR2 B2 B1 15k\nR3 B1 0 10k\nCB B2 0 100u\nC1 IN B1 10u\nRE E 0 1k\n"
        + "CE E 0 1000u\nRC VCC C2 3.9k\nCO C2 OUT 10u\nQ1 M B1 E QN\nQ2 C2 B2 M QN",
        stages={"Q1": CE, "Q2": CB},
        groups={"Q1+Q2": "cascode"},
        links={"Q1": ("capacitor C1", "direct Q2"), "Q2": ("direct Q2", "capacitor CO")},
    ),
    Case(
        name="Darlington follower",
        netlist="V1 VCC 0 12\nR1 VCC B 470k\nR2 B 0 470k\nC1 IN B 10u\nRE E2 0 470\nC2 E2 OUT 100u\n"
        + "Q1 VCC B E1 QN\nQ2 VCC E1 E2 QN",
        stages={"Q1": CC, "Q2": CC},
        groups={"Q1+Q2": "darlington"},
    ),
    Case(
        name="Darlington amplifier",
        netlist="V1 VCC 0 12\nR1 VCC B 470k\nR2 B 0 150k\nC1 IN B 10u\nRE E2 0 470\nCE E2 0 4700u\nRC VCC C 1k\n"
        + "C2 C OUT 10u\nQ1 C B E1 QN\nQ2 C E1 E2 QN",
        stages={"Q1": CC, "Q2": CE},
        groups={"Q1+Q2": "darlington"},
    ),
    Case(
        name="complementary feedback pair",
        netlist="V1 VCC 0 12\nR1 VCC B 100k\nR2 B 0 100k\nC1 IN B 10u\nRC VCC C1 1k\nRE E 0 1k\nC2 E OUT 100u\n"
        + "Q1 C1 B E QN\nQ2 E C1 VCC QP",
        stages={"Q1": CE, "Q2": CE},
        groups={"Q1+Q2": "complementary-feedback-pair"},
    ),
    Case(
        name="differential pair on a current source",
        netlist="V1 VCC 0 12\nV2 VEE 0 -12\nRB1 IN 0 10k\nRB2 B2 0 10k\nRC1 VCC C1 10k\nRC2 VCC OUT 10k\n"
        + "Q1 C1 IN T QN\nQ2 OUT B2 T QN\nQ3 T B3 E3 QN\nR5 0 B3 10k\nR6 B3 VEE 2.2k\nR7 E3 VEE 1.2k",
        intent=intent_text(("IN", "input", "600 ohm"), ("OUT", "output", "")),
        stages={"Q1": CC, "Q2": CB, "Q3": quiet("current-source")},
        groups={"Q1+Q2": "differential-pair"},
    ),
    Case(
        name="current mirror loading a follower",
        netlist=DIVIDER + "C1 IN B 10u\nC2 E OUT 10u\nQ1 VCC B E QN\nR5 VCC M 8.2k\nQ2 M M 0 QN\nQ3 E M 0 QN",
        stages={"Q1": CC, "Q2": quiet("diode-connected"), "Q3": quiet("current-source")},
        groups={"Q2+Q3": "current-mirror"},
    ),
    Case(
        name="push-pull followers with Vbe multiplier",
        netlist="V1 VCC 0 12\nV2 VEE 0 -12\nR1 VCC BN 4.7k\nR2 BP VEE 4.7k\nRA BN M 2.2k\nRB M BP 3.3k\nQ3 BN M BP QN\n"
        + "CM BN BP 100u\nC1 IN BN 10u\nR3 EN OUT 4.7\nR4 OUT EP 4.7\nQ1 VCC BN EN QN\nQ2 VEE BP EP QP",
        intent=intent_text(("IN", "input", "50 ohm"), ("OUT", "output", "100 ohm")),
        stages={"Q1": CC, "Q2": CC, "Q3": quiet("vbe-multiplier")},
        groups={"Q1+Q2": "push-pull"},
    ),
    Case(
        name="push-pull collectors joined",
        netlist="V1 VCC 0 5\nV2 VEE 0 -5\nRP BP BN 330k\nRBP VCC BP 56k\nRBN BN VEE 56k\nC1 IN BP 10u\nC2 IN BN 10u\n"
        + "REP VCC EP 47\nREN EN VEE 47\nRF OUT 0 1k\nQ1 OUT BN EN QN\nQ2 OUT BP EP QP",
        intent=intent_text(("IN", "input", "50 ohm"), ("OUT", "output", "1 kohm")),
        stages={"Q1": CE, "Q2": CE},
        groups={"Q1+Q2": "push-pull"},
    ),
    Case(
        name="regulator beside a stage",
        netlist="V1 VIN 0 12\nRZ VIN BZ 4.7k\nRY BZ 0 12k\nCZ BZ 0 100u\nQ2 VIN BZ VREG QN\nCV VREG 0 100u\n"
        + "R1 VREG B 47k\nR2 B 0 10k\nRC VREG C 4.7k\nRE E 0 1k\nCE E 0 1000u\nC1 IN B 10u\nC2 C OUT 10u\nQ1 C B E QN",
        stages={"Q1": CE, "Q2": quiet("regulator")},
    ),
    Case(
        name="between two supplies",
        netlist="V1 VCC 0 5\nRB VCC B 4.7meg\nQ1 VCC B 0 QN",
        intent=intent_text(band=None),
        stages={"Q1": quiet("unclassified")},
    ),
    Case(
        name="switch that rests open",
        netlist="V1 VCC 0 12\nV2 CTRL 0 0\nR1 CTRL B 1k\nR2 B 0 10k\nRL VCC C 400\nQ1 C B 0 QN",
        intent=intent_text(band=None),
        stages={"Q1": quiet("switch", "switch")},
    ),
    Case(
        name="switch that rests closed",
        netlist="V1 VCC 0 12\nR1 VCC B 10k\nRL VCC C 400\nQ1 C B 0 QN",
        intent=intent_text(band=None),
        stages={"Q1": quiet("switch", "switch")},
    ),
]
