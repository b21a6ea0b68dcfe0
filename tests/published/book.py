"""What the textbook examples have in common.

**Constant base-emitter voltage.** Books assume VBE = 0.7 V whatever the current. The program has no such device, so
each example gets a transistor whose saturation current makes VBE the book's value *at the book's current*,
IS = IC exp(-VBE/VT); if the program finds another current, VBE is another too and the comparison fails twice over.

**Thermal voltage.** Books use 25 or 26 mV; the bench is set to the temperature at which kT/q is that.

**Small-signal givens** (hie, hfe, gm, r_pi) fix the collector current, IC = hfe VT/hie = gm VT, and the gain, BF =
hfe = gm r_pi; the supply or IS is then chosen so that this current flows. No Early effect unless given.
"""

from __future__ import annotations

import math

import numpy as np

from checker.circuit.types import Circuit
from checker.constants import BOLTZMANN_JPK, CHARGE_C, ZERO_CELSIUS_K
from checker.solve.operating import OperatingPoint, operating_point
from tests.bench import Bench

VT_25C = BOLTZMANN_JPK * 298.15 / CHARGE_C
NO_BASE_CURRENT = 1e9
"""Current gain for examples that leave the base current out."""
EXACT = 1e-4
"""Agreement with the exact answer of a book's model: VBE moves by VT ln of what is left, far below this."""
SHORT_F = 1.0
"""Coupling and bypass capacitors that the example takes as shorts: 1 F."""


def celsius_of(vt: float) -> float:
    """Temperature [degC] at which kT/q is `vt` [V]."""
    return vt * CHARGE_C / BOLTZMANN_JPK - ZERO_CELSIUS_K


def saturation_for(ic: float, vbe: float = 0.7, vt: float = VT_25C) -> float:
    """IS [A] of the transistor that carries `ic` at `vbe`."""
    return ic * math.exp(-vbe / vt)


def bias(circuit: Circuit) -> OperatingPoint:
    """Certified operating point."""
    point = operating_point(circuit)
    assert all(island.ok.all() for island in point.islands)
    return point


def volts(point: OperatingPoint, net: str) -> float:
    """Voltage of a net in the nominal scenario."""
    return float(point.v_v[0, point.circuit.node(net)])


def divider_stage(
    *, vcc: float, r1: float, r2: float, rc: float, re: float, beta: float, ic: float, vbe: float = 0.7
) -> Bench:
    """Common emitter with base divider at 25 degC, nets vcc b c e."""
    b = Bench(25.0)
    b.v("VCC", "vcc", "0", vcc)
    b.r("R1", "vcc", "b", r1)
    b.r("R2", "b", "0", r2)
    b.r("RC", "vcc", "c", rc)
    b.r("RE", "e", "0", re)
    b.q("Q1", "c", "b", "e", bf=beta, is_=saturation_for(ic, vbe))
    return b


def fixed_bias(vcc: float, rb: float, rc: float, beta: float, ic: float, *, re: float = 0.0, vbe: float = 0.7) -> Bench:
    """Base resistor from the supply; nets vcc b c e; IS for `vbe` at `ic`."""
    b = Bench(25.0)
    b.v("VCC", "vcc", "0", vcc)
    b.r("RB", "vcc", "b", rb)
    b.r("RC", "vcc", "c", rc)
    if re:
        b.r("RE", "e", "0", re)
    b.q("Q1", "c", "b", "e" if re else "0", bf=beta, is_=saturation_for(ic, vbe))
    return b


def parallel(*ohms: float) -> float:
    """Resistors in parallel."""
    return 1.0 / sum(1.0 / r for r in ohms)


def assert_within(got: float, expected: float, rel: float, what: str = "") -> None:
    """Relative agreement, with the quantity named in the failure."""
    np.testing.assert_allclose(got, expected, rtol=rel, err_msg=what)
