"""Operational amplifiers among other parts: closed-loop figures by hand, limits, triggers that have no rest between."""

from __future__ import annotations

import math

import numpy as np
import pytest

from checker.circuit.types import Circuit
from checker.netlist.types import Part
from checker.solve.operating import OperatingPoint, operating_point
from checker.solve.poles import growing_poles
from checker.solve.response import Drive, small_signal
from checker.solve.states import NO_REST, searched, settled
from tests.circuit.make import spice, spice_part, volts


def amplifier(plus: str, minus: str, out: str) -> Part:
    """A TL071 between +12 V and -12 V; typical 3 MHz, its outputs 1.5 V short of either."""
    return spice_part("X1", f"{plus} {minus} vp vn {out}", text="TL071", model="TL071")


def board(*parts: Part) -> Circuit:
    return spice(*parts, volts("VP", "vp 0", 12.0), volts("VN", "vn 0", -12.0))


def solved(circuit: Circuit) -> OperatingPoint:
    point = searched(operating_point(circuit))
    return settled(point, growing_poles(point))


def at(point: OperatingPoint, net: str) -> float:
    return float(point.v_v[0, point.circuit.node(net)])


def r(ref: str, nets: str, ohm: float) -> Part:
    return spice_part(ref, nets, ohm)


def test_inverting_amplifier() -> None:
    """-R2/R1 less the error of a gain of 1e5: the textbook formula -R2/R1 / (1 + (1 + R2/R1)/A)."""
    point = solved(
        board(volts("V1", "in 0", 0.5), r("R1", "in m", 10e3), r("R2", "m out", 100e3), amplifier("0", "m", "out"))
    )
    wanted = -5.0 / (1.0 + 11.0 / 1e5)
    # The bend of the output towards its limit at 10.5 V costs some of the gain; that is below 1e-4 of the output here.
    assert at(point, "out") == pytest.approx(wanted, rel=1e-4)


def test_it_stops_at_its_limit() -> None:
    point = solved(
        board(volts("V1", "in 0", -3.0), r("R1", "in m", 10e3), r("R2", "m out", 100e3), amplifier("0", "m", "out"))
    )
    load = 10.5 - 75.0 / 110e3 * (10.5 + 3.0)  # the output resistance before it
    assert at(point, "out") == pytest.approx(load, abs=2e-3)


@pytest.mark.parametrize("gain", [1, 10, 100])
def test_bandwidth_is_gbw_over_gain(gain: int) -> None:
    """Non-inverting amplifier: corner at GBW/gain (any textbook on feedback amplifiers)."""
    point = solved(
        board(
            volts("V1", "in 0", 0.0, ac=1.0),
            amplifier("in", "m", "out"),
            r("R1", "m 0", 1e3),
            r("R2", "m out", max(1e3 * (gain - 1), 1e-3)),
        )
    )
    corner = 3e6 / gain
    f = np.array([1.0, corner])
    source = point.circuit.voltages.names.index("V1")
    h = np.abs(small_signal(point, f).voltages(Drive(source=source))[0, :, point.circuit.node("out")])
    # The resistance of 75 ohm in the output shifts the corner by what it loads: 75/1000 at a gain of one.
    assert h[0] == pytest.approx(gain, rel=1e-2)
    assert h[1] / h[0] == pytest.approx(1.0 / math.sqrt(2.0), rel=0.06)


def test_a_trigger_balanced_between_its_limits_is_no_rest() -> None:
    point = solved(
        board(r("R1", "p 0", 10e3), r("R2", "p out", 10e3), amplifier("p", "0", "out"), r("R3", "out 0", 1e4))
    )
    assert not np.isfinite(at(point, "out"))
    assert point.reason("out") == NO_REST


def test_a_trigger_that_its_input_holds_has_a_rest() -> None:
    point = solved(
        board(
            volts("V1", "in 0", -8.0),
            r("R1", "p 0", 10e3),
            r("R2", "p out", 10e3),
            amplifier("p", "in", "out"),
            r("R3", "out 0", 1e4),
        )
    )
    assert at(point, "out") == pytest.approx(10.5, abs=0.2)


def test_the_load_current_comes_from_the_supply() -> None:
    point = solved(board(volts("V1", "in 0", 2.0), amplifier("in", "out", "out"), r("RL", "out 0", 1e3)))
    assert at(point, "out") == pytest.approx(2.0, rel=1e-4)
    figures = point.devices["opamp"]
    assert figures["i_a"][0, 0] == pytest.approx(2e-3, rel=1e-3)


def test_a_transistor_inside_the_loop() -> None:
    """A current sink: the amplifier sets 1 V across 1 kohm in the emitter, whatever VBE is."""
    point = solved(
        board(
            volts("V1", "in 0", 1.0),
            amplifier("in", "e", "b"),
            spice_part("Q1", "vp b e", text="2N3904", model="2N3904"),
            r("RE", "e 0", 1e3),
        )
    )
    assert at(point, "e") == pytest.approx(1.0, rel=1e-4)
    assert at(point, "b") == pytest.approx(1.64, abs=0.04)
