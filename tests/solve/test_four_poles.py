"""Controlled sources and lines against closed forms, through the reader: direct current, phasors, stages around."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
import pytest
from scipy.optimize import brentq

from checker.constants import DEFAULT_AMBIENT_C, ZERO_CELSIUS_K, thermal_voltage_v
from checker.setup import Setup
from checker.solve.poles import growing_poles
from checker.solve.response import Drive, small_signal
from tests.whole import intent_text, set_up_from

NO_BAND = intent_text(band=None)
VT = thermal_voltage_v(DEFAULT_AMBIENT_C + ZERO_CELSIUS_K)


def board(text: str) -> Setup:
    return set_up_from(text, NO_BAND)


def volts(setup: Setup, net: str) -> float:
    return float(setup.point.v_v[0, setup.circuit.node(net)])


def phasor(setup: Setup, net: str, f_hz: float, source: str = "V1") -> complex:
    """Voltage of a net for 1 V at a source."""
    drive = Drive(source=setup.circuit.voltages.names.index(source))
    return complex(small_signal(setup.point, np.array([f_hz])).voltages(drive)[0, 0, setup.circuit.node(net)])


@pytest.mark.parametrize(
    ("text", "gain"),
    [
        ("G1 out 0 in 0 2m\nRL out 0 1k\n", -2.0),
        ("G1 0 out in 0 2m\nRL out 0 1k\nRM out 0 3k\n", 1.5),
        ("E1 out 0 in 0 2.5\nRL out 0 1k\n", 2.5),
        ("E1 x 0 in 0 4\nR1 x out 3k\nR2 out 0 1k\n", 1.0),
        ("E1 out in in 0 2\nRL out 0 1k\n", 3.0),
        ("VS in y 0\nRS y 0 1k\nF1 out 0 VS 3\nRL out 0 2k\n", -6.0),
        ("VS in y 0\nRS y 0 1k\nH1 out 0 VS 500\nRL out 0 2k\n", 0.5),
        ("VS in y 0\nRS y 0 1k\nH1 x 0 VS 500\nF1 0 out VS 1\nRL out x 2k\nRX out 0 1meg\n", (2.0 + 0.5) / 1.002),
        ("B1 out 0 V={2*V(in)/4}\nRL out 0 1k\n", 0.5),
        ("B1 0 out I=V(in,0)*1m\nRL out 0 1k\n", 1.0),
        ("E1 out 0 VALUE={-3*v(in)}\nRL out 0 1k\n", -3.0),
        ("VS in y 0\nRS y 0 1k\nG1 0 out VALUE='I(VS)*2'\nRL out 0 500\n", 1.0),
        # An amplifier of gain 1000 with feedback: -R2/R1 / (1 + (1 + R2/R1)/A).
        ("R1 in m 1k\nR2 m out 10k\nE1 out 0 0 m 1000\n", -10.0 / (1.0 + 11.0 / 1000.0)),
        # A gyrator of two transconductances loaded with 2 kohm presents 1/(g^2 R) = 500 ohm.
        ("RS in a 500\nG1 b 0 a 0 1m\nG2 0 a b 0 1m\nRL b 0 2k\nE9 out 0 a 0 1\nR9 out 0 1k\n", 0.5),
    ],
)
def test_linear_networks(text: str, gain: float) -> None:
    """For direct current from 3 V, and for phasors at 1 kHz, where nothing stores charge."""
    setup = board(f"V1 in 0 3\n{text}")
    assert not setup.circuit.unknowns
    assert volts(setup, "out") == pytest.approx(3.0 * gain, rel=1e-12)
    assert phasor(setup, "out", 1e3) == pytest.approx(gain, rel=1e-9)
    assert all(island.ok[0] and not island.exhaustive for island in setup.point.islands if "out" in island.nets)


def test_the_current_of_the_driving_source_itself_may_control() -> None:
    """F senses the e.m.f. of the drive: 1 V over 1 kohm, ten times into 100 ohm."""
    setup = board("V1 in 0 3\nR1 in 0 1k\nF1 0 out V1 10\nRL out 0 100\n")
    # The current counts from + through the source to -, so it is -3 mA.
    assert volts(setup, "out") == pytest.approx(-3.0, rel=1e-12)
    assert phasor(setup, "out", 50.0) == pytest.approx(-1.0, rel=1e-9)


def test_around_a_transistor() -> None:
    """The base is driven by 0.02 of the collector voltage: one equation, solved by bracketing."""
    setup = board(
        "V1 VCC 0 12\nRC VCC C 4.7k\nE1 X 0 C 0 0.1\nRB X B 10k\nQ1 C B 0 QI\n.model QI NPN(IS=1e-14 BF=100 BR=1)\n"
    )

    def off(vbe: float) -> float:
        ic = 1e-14 * np.exp(vbe / VT)
        vc = 12.0 - 4.7e3 * ic
        return 0.1 * vc - ic / 100.0 * 10e3 - vbe

    vbe = brentq(off, 0.3, 0.8, xtol=1e-15)
    # The reverse terms of the model, of some 1e-14 A, are left out of the closed form.
    assert volts(setup, "B") == pytest.approx(vbe, rel=1e-9)
    assert setup.point.islands[0].ok[0]
    assert not len(growing_poles(setup.point))


@pytest.mark.parametrize(
    ("text", "named"),
    [
        ("E1 a 0 in 0 2\nE2 a 0 in 0 3\n", "closes a loop of ideal voltage sources"),
        ("E1 a 0 in 0 2\nV2 a 0 5\nRA a b 1k\nRB b a 1k\nRC a 0 1k\n", "closes a loop of ideal voltage sources"),
        ("E1 a 0 in 0 2\nV2 a 0 5\n", "closes a loop of ideal voltage sources"),
        ("E1 a 0 x 0 2\nC1 x 0 1n\n", "no DC path"),
    ],
)
def test_what_has_no_answer_is_named(text: str, named: str) -> None:
    setup = board(f"V1 in 0 3\nR0 in 0 1k\nRA a b 1k\nRB b 0 1k\n{text}")
    assert named in setup.point.reason("b")


@pytest.mark.parametrize(
    "formula", ["V={V(in)+1}", "V={V(in)*V(in)}", "V={limit(V(in),0,5)}", "V={V(in)+V(b)}", "V={sqrt(V(in))}"]
)
def test_a_formula_that_is_not_proportional_is_not_understood(formula: str) -> None:
    setup = board(f"V1 in 0 3\nB1 out 0 {formula}\nRL out 0 1k\nRB b 0 1k\nRC in b 1k\n")
    assert [unknown.ref for unknown in setup.circuit.unknowns] == ["B1"]


@pytest.mark.parametrize("missing", ["F1 a 0 VX 2", "H1 a 0 VX 2"])
def test_a_control_that_is_not_there(missing: str) -> None:
    setup = board(f"V1 in 0 3\n{missing}\nRA a 0 1k\n")
    (unknown,) = setup.circuit.unknowns
    assert "VX" in unknown.supply


def into(z_load: complex, z0: complex, x: complex) -> complex:
    """Input impedance of a line, Z0 (ZL + Z0 tanh x)/(Z0 + ZL tanh x). Source: D. M. Pozar, Microwave Engineering, 2nd
    ed., eq. 2.44 and 2.91 (from memory)."""
    return z0 * (z_load + z0 * np.tanh(x)) / (z0 + z_load * np.tanh(x))


@pytest.mark.parametrize("f_hz", [1e3, 25e6, 50e6, 73e6, 100e6, 1e9])
@pytest.mark.parametrize("load", [10.0, 75.0, 200.0])
def test_impedance_into_a_lossless_line(f_hz: float, load: float) -> None:
    """75 ohm, 5 ns; a quarter wave at 50 MHz (5625/RL there), a half at 100 MHz."""
    setup = board(f"V1 in 0 1\nRS in a 50\nT1 a 0 b 0 Z0=75 TD=5n\nRL b 0 {load}\n")
    z = into(load, 75.0, 2j * np.pi * f_hz * 5e-9)
    assert phasor(setup, "a", f_hz) == pytest.approx(z / (z + 50.0), rel=1e-9)
    if f_hz == 50e6:
        assert z == pytest.approx(75.0**2 / load, rel=1e-9)
    # For direct current the line is two wires.
    assert volts(setup, "b") == pytest.approx(load / (load + 50.0), rel=1e-12)


def test_delay_and_frequency_say_the_same() -> None:
    one, other = (
        board(f"V1 in 0 1\nRS in a 50\nT1 a 0 b 0 Z0=50 {how}\nRL b 0 20\n") for how in ("TD=2.5n", "F=200MEG NL=0.5")
    )
    assert phasor(one, "a", 31e6) == pytest.approx(phasor(other, "a", 31e6), rel=1e-12)


@pytest.mark.parametrize("f_hz", [1.0, 1e5, 30e6])
def test_a_line_with_losses(f_hz: float) -> None:
    """10 m of 250 nH and 100 pF a metre, with 2 ohm and 10 uS a metre."""
    setup = board(
        "V1 in 0 1\nRS in a 50\nO1 a 0 b 0 COAX\nRL b 0 100\n.model COAX LTRA(R=2 L=250n G=10u C=100p LEN=10)\n"
    )
    s = 2j * np.pi * f_hz
    z, y = 10.0 * (2.0 + s * 250e-9), 10.0 * (10e-6 + s * 100e-12)
    want = into(100.0, np.sqrt(z / y), np.sqrt(z * y))
    assert phasor(setup, "a", f_hz) == pytest.approx(want / (want + 50.0), rel=1e-9)
    direct = into(100.0, np.sqrt(20.0 / 1e-4), np.sqrt(20.0 * 1e-4)).real
    assert volts(setup, "a") == pytest.approx(direct / (direct + 50.0), rel=1e-12)


@pytest.mark.parametrize("turn", [lambda a, b: (a, b), lambda a, b: (b, a)], ids=["forward", "backward"])
def test_both_ends_are_alike(turn: Callable[[str, str], tuple[str, str]]) -> None:
    one, two = turn("a", "b")
    setup = board(f"V1 in 0 1\nRS in a 50\nT1 {one} 0 {two} 0 Z0=75 TD=5n\nRL b 0 10\n")
    assert phasor(setup, "b", 20e6) == pytest.approx(
        phasor(board("V1 in 0 1\nRS in a 50\nT1 a 0 b 0 Z0=75 TD=5n\nRL b 0 10\n"), "b", 20e6), rel=1e-12
    )


def test_a_line_feeds_a_stage() -> None:
    """A common-base input at the end of its cable: the cable is on the way, and the stage keeps its configuration."""
    setup = set_up_from(
        "V1 VCC 0 12\nT1 ANT 0 E1 0 Z0=50 TD=4n\nC1 E1 E 100n\nRE E 0 6.2k\nQ1 C B E QN\nR1 VCC B 27k\nR2 B 0 12k\n"
        "C2 B 0 100n\nRC VCC C 4.7k\nC4 C OUT 100n\n",
        intent_text(("ANT", "input", "50 ohm"), ("OUT", "output", "470 ohm"), band=("3 MHz", "20 MHz")),
    )
    assert not setup.circuit.unknowns
    (stage,) = setup.recognition.stages
    assert stage.configuration == "common-base"
