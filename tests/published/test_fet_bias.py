"""Operating points of textbook examples with field-effect transistors.

Books write ID = IDSS (1 - VGS/VP)^2 for junction and depletion types and ID = k (VGS - VTH)^2, or
k' W/(2 L) (VGS - VTH)^2, for enhancement types, without channel-length modulation unless it is given. Quadratic
bias equations have two roots; the program must take the one that a real device has. Values recomputed from the
givens; 0.1 % where the book's model is solved exactly.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import pytest

from checker.solve.operating import OperatingPoint
from checker.solve.response import Drive, small_signal
from checker.solve.states import searched
from checker.stages.region import REGIONS, region_codes
from tests.bench import Bench
from tests.published.book import SHORT_F, assert_within, bias, volts

BOYLESTAD = "Boylestad & Nashelsky, Electronic Devices and Circuit Theory, 10th ed., Pearson (2009)"
SEDRA = "Sedra & Smith, Microelectronic Circuits, 5th ed., Oxford (2004)"
MALVINO = "Malvino & Bates, Electronic Principles, 7th ed. (2006)"
FLOYD = "Floyd, Electronic Devices, 7th ed."
BELL = "Bell, Electronic Devices and Circuits, Oxford (example numbers of the 5th ed.)"
INSULATED = {"is_": 1e-30}
"""A gate junction that takes no current: what the books assume."""


@dataclass(frozen=True, kw_only=True)
class Self:
    """A junction or depletion FET: `vg` at the gate [V], `rs`, `rd` [ohm], supply `vdd`; what the book finds."""

    source: str
    idss: float
    vp: float
    vdd: float
    rd: float
    rs: float
    id_a: float
    vgs: float | None = None
    vds: float | None = None
    vd: float | None = None
    vg: float = 0.0
    vss: float = 0.0
    depletion_mos: bool = False
    where: str = "active"
    rel: float = 1e-3

    def bench(self) -> Bench:
        """Nets vdd d g s."""
        b = Bench(25.0)
        b.v("VDD", "vdd", "0", self.vdd)
        b.v("VSS", "vss", "0", self.vss)
        b.v("VG", "g", "0", self.vg)
        b.r("RD", "vdd", "d", self.rd)
        if self.rs:
            b.r("RS", "s", "vss", self.rs)
        s = "s" if self.rs else "vss"
        if self.depletion_mos:
            b.m("M1", "d", "g", s, vto=self.vp, kp=2.0 * self.idss / self.vp**2)
        else:
            b.j("J1", "d", "g", s, vto=self.vp, beta=self.idss / self.vp**2, **INSULATED)
        return b


CASES = {
    "J1": Self(
        # The print has 5.625 mA and 4.75 V; but 4.75 V is under VGS - VP = 6 V: the device is ohmic, and of
        # ID = IDSS/VP^2 (2 (VGS - VP) VDS - VDS^2), VDS = VDD - ID RD the root is this.
        source=f"{BOYLESTAD}, Ex 7.1 p. 416, in its true region; derived",
        idss=10e-3, vp=-8.0, vdd=16.0, rd=2e3, rs=0.0, vg=-2.0, id_a=5.4806e-3, vgs=-2.0, vds=5.0387, where="ohmic",
    ),
    "J1 as printed": Self(
        source=f"{BOYLESTAD}, Ex 7.1 p. 416, with 1 kilohm so that the device is active as the book takes it",
        idss=10e-3, vp=-8.0, vdd=16.0, rd=1e3, rs=0.0, vg=-2.0, id_a=5.625e-3, vgs=-2.0, vds=16.0 - 5.625,
    ),
    "J2": Self(
        source=f"{BOYLESTAD}, Ex 7.2 p. 419; exact, where the print has the graph's 2.6 mA and 8.82 V",
        idss=8e-3, vp=-6.0, vdd=20.0, rd=3.3e3, rs=1e3, id_a=2.5876e-3, vgs=-2.5876, vds=8.873,
    ),
    "J3 small": Self(
        source="the same with 100 ohm; derived", idss=8e-3, vp=-6.0, vdd=40.0, rd=3.3e3, rs=100.0, id_a=6.387e-3
    ),
    "J3 large": Self(
        source="the same with 10 kilohm; derived", idss=8e-3, vp=-6.0, vdd=20.0, rd=3.3e3, rs=10e3, id_a=0.4566e-3
    ),
    "J4": Self(
        source=f"{BOYLESTAD}, Ex 7.5 p. 424: 2.1M/270k; graph 2.4 mA, 10.24 V",
        idss=8e-3, vp=-4.0, vdd=16.0, rd=2.4e3, rs=1.5e3, vg=16.0 * 270.0 / 2370.0,
        id_a=2.4163e-3, vgs=-1.8017, vd=10.201,
    ),
    "J5": Self(
        source=f"{BOYLESTAD}, Ex 7.6 p. 427, common gate; graph 3.8 mA, 3.72 V",
        idss=12e-3, vp=-6.0, vdd=12.0, rd=1.5e3, rs=680.0, id_a=3.8353e-3, vgs=-2.6080, vds=3.639,
    ),
    "J6": Self(
        source=f"{BOYLESTAD}, Ex 7.7 p. 430, depletion MOSFET",
        idss=6e-3, vp=-3.0, vdd=18.0, rd=1.8e3, rs=750.0, vg=1.5, id_a=3.1170e-3, vgs=-0.8377, vds=10.052,
        depletion_mos=True,
    ),
    "J7": Self(
        # VDS is .1 V under VGS - VP: ohmic by a hair, derived; the book's 7.556 mA, .3666 V, 3.266 V take it as active.
        source=f"{BOYLESTAD}, Ex 7.8 p. 431, the same with 150 ohm: the gate goes positive",
        idss=6e-3, vp=-3.0, vdd=18.0, rd=1.8e3, rs=150.0, vg=1.5, id_a=7.5525e-3, vgs=0.36713, vds=3.2727,
        depletion_mos=True, where="ohmic",
    ),
    "J8": Self(
        source=f"{BOYLESTAD}, Ex 7.9 p. 432",
        idss=8e-3, vp=-8.0, vdd=20.0, rd=6.2e3, rs=2.4e3, id_a=1.7668e-3, vgs=-4.2404, vd=9.046,
    ),
    "J10 at 0": Self(source=f"{FLOYD}, Ex 7-3 p. 219", idss=9e-3, vp=-8.0, vdd=20.0, rd=100.0, rs=0.0, id_a=9e-3),
    "J10 at -1": Self(
        source=f"{FLOYD}, Ex 7-3 p. 219", idss=9e-3, vp=-8.0, vdd=20.0, rd=100.0, rs=0.0, vg=-1.0, id_a=6.891e-3
    ),
    "J10 at -4": Self(
        source=f"{FLOYD}, Ex 7-3 p. 219", idss=9e-3, vp=-8.0, vdd=20.0, rd=100.0, rs=0.0, vg=-4.0, id_a=2.25e-3
    ),
    "J11": Self(
        source=f"{FLOYD}, Ex 8-4 p. 257",
        idss=12e-3, vp=-3.0, vdd=12.0, rd=3.3e3, rs=910.0, id_a=1.9633e-3, vgs=-1.7866, vd=5.521, rel=3e-3,
    ),
    "J12 low": Self(
        source=f"{MALVINO}, Ex 13-7 p. 436, the least device; graph 2.8 mA",
        idss=8e-3, vp=-2.0, vdd=30.0, rd=100.0, rs=270.0, id_a=2.927e-3, rel=2e-3,
    ),
    "J12 high": Self(
        source=f"{MALVINO}, Ex 13-7 p. 436, the largest; graph 8.0 mA",
        idss=20e-3, vp=-6.0, vdd=30.0, rd=100.0, rs=270.0, id_a=8.089e-3, rel=2e-3,
    ),
    "J13 low": Self(
        source=f"{MALVINO}, Ex 13-9 p. 441, the same two devices on a divider",
        idss=8e-3, vp=-2.0, vdd=40.0, rd=100.0, rs=2e3, vg=10.0, id_a=5.194e-3, vgs=-0.388, rel=2e-3,
    ),
    "J13 high": Self(
        source=f"{MALVINO}, Ex 13-9 p. 441",
        idss=20e-3, vp=-6.0, vdd=40.0, rd=100.0, rs=2e3, vg=10.0, id_a=6.314e-3, vgs=-2.629, rel=2e-3,
    ),
    "J14 low, 100": Self(
        source="J310 data limits; derived", idss=24e-3, vp=-2.0, vdd=25.0, rd=10.0, rs=100.0, id_a=8.264e-3
    ),
    "J14 high, 100": Self(
        source="J310 data limits; derived", idss=60e-3, vp=-6.5, vdd=25.0, rd=10.0, rs=100.0, id_a=23.94e-3
    ),
    "J14 low, 220": Self(
        source="J310 data limits; derived", idss=24e-3, vp=-2.0, vdd=25.0, rd=10.0, rs=220.0, id_a=4.959e-3
    ),
    "J14 high, 220": Self(
        source="J310 data limits; derived", idss=60e-3, vp=-6.5, vdd=25.0, rd=10.0, rs=220.0, id_a=14.85e-3
    ),
    "J15 low": Self(
        source="2N5457 data limits; derived", idss=1e-3, vp=-0.5, vdd=15.0, rd=10.0, rs=1e3, id_a=0.250e-3
    ),
    "J15 high": Self(
        source="2N5457 data limits; derived", idss=5e-3, vp=-6.0, vdd=15.0, rd=10.0, rs=1e3, id_a=2.106e-3
    ),
    "J16 low": Self(
        source="J201 data limits; derived", idss=0.2e-3, vp=-0.3, vdd=15.0, rd=10.0, rs=1e3, id_a=94.2e-6
    ),
    "J16 high": Self(
        source="J201 data limits; derived", idss=1e-3, vp=-1.5, vdd=15.0, rd=10.0, rs=1e3, id_a=470.8e-6
    ),
    "J17 high": Self(
        source=f"{BELL}, Ex 10.4", idss=8e-3, vp=-6.0, vdd=20.0, rd=100.0, rs=0.0, vg=-2.3, id_a=3.042e-3
    ),
    "J17 low": Self(
        source=f"{BELL}, Ex 10.4", idss=4e-3, vp=-3.0, vdd=20.0, rd=100.0, rs=0.0, vg=-2.3, id_a=0.2178e-3
    ),
}  # fmt: skip


def current(point: OperatingPoint) -> float:
    """ID of the first field-effect transistor."""
    return float(point.transistor["i_out_a"][0, 0])


def region(point: OperatingPoint) -> str:
    """Region of the first transistor."""
    return REGIONS[int(region_codes(point)[0, 0])]


@pytest.mark.parametrize("name", CASES)
def test_bias_of_a_square_law_device(name: str) -> None:
    case = CASES[name]
    point = bias(case.bench().circuit())
    assert_within(current(point), case.id_a, case.rel, case.source)
    assert region(point) == case.where
    if case.vgs is not None:
        assert_within(float(point.transistor["v_control_v"][0, 0]), case.vgs, case.rel, case.source)
    if case.vds is not None:
        assert_within(float(point.transistor["v_out_v"][0, 0]), case.vds, case.rel, case.source)
    if case.vd is not None:
        assert_within(volts(point, "d"), case.vd, case.rel, case.source)


@pytest.mark.parametrize("name", CASES)
def test_the_other_polarity_is_its_mirror_image(name: str) -> None:
    case = CASES[name]
    mirrored = Self(**{**{f: getattr(case, f) for f in case.__dataclass_fields__}, "vdd": -case.vdd, "vg": -case.vg})
    b = mirrored.bench()
    for letter in "jm":
        b._tables[letter].polarity[:] = [-1.0] * len(b._tables[letter].names)
    one, other = bias(case.bench().circuit()), bias(b.circuit())
    np.testing.assert_allclose(other.v_v, -one.v_v, rtol=1e-9, atol=1e-12)
    assert_within(current(other), -current(one), 1e-9)


def _drain_feedback() -> Bench:
    b = Bench(25.0)
    b.v("VDD", "vdd", "0", 12.0)
    b.r("RD", "vdd", "d", 2e3)
    b.r("RG", "d", "g", 10e6)
    b.m("M1", "d", "g", "0", vto=3.0, kp=0.48e-3)
    return b


def test_drain_feedback() -> None:
    """J9, Boylestad & Nashelsky 10th ed., Ex 7.11 and its kind: k .24 mA/V2, VT 3; the 7.25 mA root is no solution
    of the device. Recomputed, .2 %."""
    point = bias(_drain_feedback().circuit())
    assert_within(current(point), 2.794e-3, 2e-3)
    assert_within(volts(point, "g"), 6.412, 2e-3)


def test_source_and_drain_resistors_of_an_nmos() -> None:
    """J18, Sedra & Smith 5th ed. Ex 4.2 p. 263: k' 100 uA/V2, W/L 32, VT .7, +-2.5 V, ID .4 mA, VD .5 V."""
    b = Bench(25.0)
    b.v("VDD", "vdd", "0", 2.5)
    b.v("VSS", "vss", "0", -2.5)
    b.r("RD", "vdd", "d", 5e3)
    b.r("RS", "s", "vss", 3.25e3)
    b.m("M1", "d", "0", "s", vto=0.7, kp=100e-6, w=32e-6, l=1e-6)
    point = bias(b.circuit())
    assert_within(current(point), 0.4e-3, 1e-3)
    assert_within(volts(point, "d"), 0.5, 1e-3)
    assert_within(float(point.devices["mosfet"]["vov_v"][0, 0]), 0.5, 1e-3)


def test_diode_connected_nmos() -> None:
    """J19, Sedra & Smith 5th ed. Ex 4.3 p. 264: 80 uA, k' 200 uA/V2, W/L 5, VT .6, 3 V: VD 1.0 V with 25 kilohm."""
    b = Bench(25.0)
    b.v("VDD", "vdd", "0", 3.0)
    b.r("R", "vdd", "d", 25e3)
    b.m("M1", "d", "d", "0", vto=0.6, kp=200e-6, w=5e-6, l=1e-6)
    point = bias(b.circuit())
    assert_within(current(point), 80e-6, 1e-3)
    assert_within(volts(point, "d"), 1.0, 1e-3)


def test_triode_region() -> None:
    """J20, Sedra & Smith 5th ed. Ex 4.4 p. 265: gate at 5 V, VT 1, k'W/L 1 mA/V2, RD 12.405k: VD .1 V, ID .395 mA, and
    .1 V/.395 mA = 253.2 ohm."""
    b = Bench(25.0)
    b.v("VDD", "vdd", "0", 5.0)
    b.r("RD", "vdd", "d", 12.405e3)
    b.m("M1", "d", "vdd", "0", vto=1.0, kp=1e-3)
    point = bias(b.circuit())
    assert_within(current(point), 0.395e-3, 1e-3)
    assert_within(volts(point, "d") / current(point), 253.2, 1e-3)
    assert region(point) == "ohmic"


def test_divider_and_source_resistor() -> None:
    """J21, Sedra & Smith 5th ed. Ex 4.5 p. 266: 10 V, 10M/10M, RS = RD = 6k, VT 1, 1 mA/V2: .500 mA, not .889."""
    b = Bench(25.0)
    b.v("VDD", "vdd", "0", 10.0)
    b.r("R1", "vdd", "g", 10e6)
    b.r("R2", "g", "0", 10e6)
    b.r("RD", "vdd", "d", 6e3)
    b.r("RS", "s", "0", 6e3)
    b.m("M1", "d", "g", "s", vto=1.0, kp=1e-3)
    point = bias(b.circuit())
    assert_within(current(point), 0.5e-3, 1e-3)
    for net, wanted in (("s", 3.0), ("d", 7.0)):
        assert_within(volts(point, net), wanted, 1e-3, net)


def test_source_resistor_holds_the_current_over_threshold_spread() -> None:
    """J22, Sedra & Smith 5th ed. Ex 4.9 p. 283: VG 7, RS 10k; VT 1 to 1.5: .500 to .4546 mA (-9 %); .2 %. With the gate
    held at a fixed VGS of 2 V it would fall by 75 % (derived)."""
    b = Bench(25.0)
    b.v("VDD", "vdd", "0", 15.0)
    b.v("VG", "g", "0", 7.0)
    b.v("V2", "g2", "0", 2.0)
    b.r("RD", "vdd", "d", 10e3)
    b.r("RS", "s", "0", 10e3)
    b.m("M1", "d", "g", "s", vto=[1.0, 1.5], kp=1e-3)
    b.m("M2", "vdd", "g2", "0", vto=[1.0, 1.5], kp=1e-3)
    i = bias(b.circuit()).transistor["i_out_a"]
    assert_within(float(i[0, 0]), 0.5e-3, 2e-3)
    assert_within(float(i[1, 0]), 0.4546e-3, 2e-3)
    assert_within(float(i[1, 1] / i[0, 1]), 0.25, 1e-6)


@pytest.mark.parametrize(("rd", "wanted"), [(6e3, "active"), (7.9e3, "active"), (8.1e3, "ohmic")])
def test_pmos_at_the_edge_of_its_region(rd: float, wanted: str) -> None:
    """J22b, Sedra & Smith 5th ed. Ex 4.6 p. 268: 5 V, VD 3 V, ID .5 mA, VT -1, 1 mA/V2; active up to RD 8k."""
    b = Bench(25.0)
    b.v("VDD", "vdd", "0", 5.0)
    b.v("VG", "g", "0", 3.0)
    b.r("RD", "d", "0", rd)
    b.m("M1", "d", "g", "vdd", p=True, vto=1.0, kp=1e-3)
    point = bias(b.circuit())
    assert region(point) == wanted
    if rd == 6e3:
        assert_within(current(point), -0.5e-3, 1e-3)
        assert_within(volts(point, "d"), 3.0, 1e-3)


def test_drain_feedback_amplifier() -> None:
    """J23, Sedra & Smith 5th ed. Ex 4.10 p. 293: VT 1.5, .25 mA/V2, VA 50, RD = RL = 10k, RG 10M, 15 V. ID 1.0589 mA,
    VD 4.411 V, gm .7276 mS, gain -3.290, input 2.331 megohm; print 1.06/4.4/-3.3/2.33.

    The book leaves VA out of the bias; the program does not, so LAMBDA and KP are those that give the book's current
    and its ro = VA/ID at the book's VDS: 1 % is left for the gate's own current of the ratio.
    """
    vds, i_d = 4.411, 1.0589e-3
    slope = i_d / 50.0
    lam = slope / (i_d - slope * vds)
    b = Bench(25.0)
    b.v("VDD", "vdd", "0", 15.0)
    b.r("RD", "vdd", "d", 10e3)
    b.r("RG", "d", "g", 10e6)
    b.c("C1", "in", "g", SHORT_F)
    b.c("C2", "d", "out", SHORT_F)
    b.r("RL", "out", "0", 10e3)
    b.r("RIN", "in", "0", 1e12)
    b.m("M1", "d", "g", "0", vto=1.5, kp=0.25e-3 / (1.0 + lam * vds), lambda_=lam)
    point = bias(b.circuit())
    assert_within(current(point), i_d, 3e-3)
    assert_within(volts(point, "d"), vds, 3e-3)
    r = small_signal(point, np.array([1e3]))
    c = r.circuit
    v = r.voltages(Drive(node=c.node("in")))[0, 0]
    assert_within(float((v[c.node("out")] / v[c.node("in")]).real), -3.290, 3e-3)
    assert_within(float(abs(r.impedance(c.node("in"))[0, 0])), 2.331e6, 3e-3)


def test_the_second_root_of_the_square_is_no_rest() -> None:
    point = searched(bias(_drain_feedback().circuit()))
    assert all(island.states == 1 and island.exhaustive for island in point.islands)
