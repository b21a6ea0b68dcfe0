"""Circuits twice: once for the program, once as hand-written equations of the reference.

`dc(x)` takes the named unknowns and returns the residuals: currents into each net, then two (transistor) or one
(diode) voltage equations a device. `ac(x, s)` is the same for phasors with a unit drive; it is linear in x.
Unknowns are net names, or inner junction voltages counted forward: `be1`, `bc1` of Q1, `d1` of D1, `gsj1`, `gdj1` of
J1, `gsm1`, `dsm1`, `bsm1` of M1 (the small signal keeps no inner unknown for diodes). A PNP is written as an NPN with
its voltages negated, a P channel as an N channel.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from types import SimpleNamespace
from typing import Any

import mpmath as mp

from tests.bench import Bench
from tests.reference.fets import Jfet, Mosfet
from tests.reference.physics import Bias, Diode, Phasors, Transistor

NPN: dict[str, float] = {
    "is_": 2.1e-14, "bf": 280.0, "nf": 1.002, "vaf": 74.0, "ikf": 0.08, "ise": 6e-14, "ne": 1.55,
    "br": 4.2, "nr": 1.01, "var": 22.0, "ikr": 0.05, "isc": 3e-13, "nc": 1.7,
    "rb": 180.0, "rbm": 12.0, "re": 0.35, "rc": 0.9,
    "cje": 12e-12, "vje": 0.72, "mje": 0.36, "tf": 4.2e-10, "xtf": 4.0, "vtf": 3.0, "itf": 0.12,
    "cjc": 4.1e-12, "vjc": 0.55, "mjc": 0.31, "xcjc": 0.62, "tr": 1.1e-7,
    "cjs": 2e-12, "vjs": 0.6, "mjs": 0.4, "xtb": 1.4, "eg": 1.11, "xti": 3.2, "fc": 0.55,
}  # fmt: skip
PNP: dict[str, float] = {
    "is_": 1.4e-14, "bf": 190.0, "nf": 1.01, "vaf": 32.0, "ikf": 0.06, "ise": 9e-14, "ne": 1.7,
    "br": 3.0, "nr": 1.0, "var": 14.0, "ikr": 0.02, "isc": 2e-13, "nc": 1.9,
    "rb": 90.0, "rbm": 8.0, "irb": 4e-5, "re": 0.5, "rc": 1.3,
    "cje": 15e-12, "vje": 0.7, "mje": 0.35, "tf": 6e-10, "xtf": 2.0, "vtf": 5.0, "itf": 0.08,
    "cjc": 6e-12, "vjc": 0.6, "mjc": 0.38, "xcjc": 0.7, "tr": 9e-8, "xtb": 1.6, "eg": 1.11, "xti": 3.0, "fc": 0.5,
}  # fmt: skip
SIGNAL_DIODE: dict[str, float] = {
    "is_": 2.5e-9, "n": 1.75, "rs": 0.6, "cjo": 2e-12, "vj": 0.7, "m": 0.4, "tt": 5e-9,
    "ikf": 0.15, "isr": 1e-10, "nr": 2.1, "bv": 100.0, "ibv": 1e-4,
}  # fmt: skip
ZENER: dict[str, float] = {
    "is_": 1e-14, "n": 1.1, "rs": 4.0, "cjo": 1.5e-10, "vj": 0.8, "m": 0.35, "bv": 5.6, "ibv": 2e-3, "isr": 2e-10,
}  # fmt: skip

Unknowns = SimpleNamespace
Residuals = list[Any]
Small = dict[str, Any]
"""Linearised devices: `Linear` under 1, 2; `DiodeLinear` under d1, d2."""


@dataclass(frozen=True, kw_only=True)
class Board:
    """`guess`: unknown -> rough DC value; `drive`: index of the source of `ac`; `bench`: for the program."""

    name: str
    bench: Bench
    guess: dict[str, float]
    devices: Mapping[str, Transistor | Diode | Jfet | Mosfet]
    dc: Callable[[Unknowns], Residuals]
    pnp: tuple[str, ...] = ()
    ac: Callable[[Unknowns, Any, Small], Residuals] | None = None
    drive: int = 0
    f_hz: tuple[float, float, float] = (50.0, 20e3, 8e6)
    open_at_dc: tuple[str, ...] = ()


def joined(q: Bias | Phasors, x_b: Any, x_c: Any, x_e: Any) -> Residuals:
    """The two voltage equations of an NPN between its nets (for a PNP give the nets' voltages negated)."""
    return [q.be - (x_b - x_e), q.bc - (x_b - x_c)]


def divider() -> Board:
    """Common emitter with base divider, bypassed emitter, 600 ohm source, 10 kohm load."""
    b = Bench(27.0)
    b.v("VCC", "vcc", "0", 12.0)
    b.v("VS", "s", "0", 0.0)
    b.r("RS", "s", "in", 600.0)
    b.c("C1", "in", "b", 4.7e-6)
    b.r("R1", "vcc", "b", 47e3)
    b.r("R2", "b", "0", 10e3)
    b.r("RC", "vcc", "c", 4.7e3)
    b.r("RE", "e", "0", 1e3)
    b.c("CE", "e", "0", 47e-6)
    b.c("C2", "c", "out", 1e-6)
    b.r("RL", "out", "0", 10e3)
    b.q("Q1", "c", "b", "e", **NPN)
    t = Transistor(NPN)

    def dc(x: Unknowns) -> Residuals:
        q = t.at(x.be1, x.bc1)
        return [
            (12 - x.b) / 47e3 - x.b / 10e3 - q.ib,
            (12 - x.c) / 4.7e3 - q.ic,
            q.ie - x.e / 1e3,
            *joined(q, x.b, x.c, x.e),
        ]

    def ac(x: Unknowns, s: Any, small: Small) -> Residuals:
        q = small["1"].at(s, x.b, x.be1, x.bc1)
        return [
            (1 - x.in_) / 600 - s * 4.7e-6 * (x.in_ - x.b),
            s * 4.7e-6 * (x.in_ - x.b) - x.b / 47e3 - x.b / 10e3 - q.ib,
            -x.c / 4.7e3 - q.ic - s * 1e-6 * (x.c - x.out),
            q.ie - x.e / 1e3 - s * 47e-6 * x.e,
            s * 1e-6 * (x.c - x.out) - x.out / 10e3,
            *joined(q, x.b, x.c, x.e),
        ]

    return Board(
        name="common emitter with divider",
        bench=b,
        guess={"b": 1.9, "c": 6.0, "e": 1.3, "be1": 0.65, "bc1": -4.0},
        devices={"1": t},
        dc=dc,
        ac=ac,
        drive=1,
        open_at_dc=("in_", "out"),
    )


def common_base() -> Board:
    """Common base on two supplies, base straight to ground, coupled from 50 ohm, at 60 degC (tnom 27)."""
    b = Bench(60.0)
    b.v("VP", "vp", "0", 12.0)
    b.v("VN", "vn", "0", -12.0)
    b.v("VS", "s", "0", 0.0)
    b.r("RS", "s", "in", 50.0)
    b.c("C1", "in", "e", 100e-9)
    b.r("RE", "e", "vn", 22e3)
    b.r("RC", "vp", "c", 3.3e3)
    b.c("C2", "c", "out", 10e-9)
    b.r("RL", "out", "0", 1e3)
    b.q("Q1", "c", "0", "e", tnom_c=27.0, **NPN)
    t = Transistor(NPN, 60.0)

    def dc(x: Unknowns) -> Residuals:
        q = t.at(x.be1, x.bc1)
        return [(12 - x.c) / 3.3e3 - q.ic, q.ie - (x.e + 12) / 22e3, *joined(q, 0, x.c, x.e)]

    def ac(x: Unknowns, s: Any, small: Small) -> Residuals:
        q = small["1"].at(s, 0, x.be1, x.bc1)
        return [
            (1 - x.in_) / 50 - s * 100e-9 * (x.in_ - x.e),
            q.ie + s * 100e-9 * (x.in_ - x.e) - x.e / 22e3,
            -x.c / 3.3e3 - q.ic - s * 10e-9 * (x.c - x.out),
            s * 10e-9 * (x.c - x.out) - x.out / 1e3,
            *joined(q, 0, x.c, x.e),
        ]

    return Board(
        name="common base at 60 degC",
        bench=b,
        guess={"c": 10.0, "e": -0.6, "be1": 0.58, "bc1": -10.0},
        devices={"1": t},
        dc=dc,
        ac=ac,
        drive=2,
        f_hz=(10e3, 3e6, 80e6),
        open_at_dc=("in_", "out"),
    )


def follower() -> Board:
    """Emitter follower with a base resistor, driving a capacitive load."""
    b = Bench(27.0)
    b.v("VCC", "vcc", "0", 15.0)
    b.v("VS", "s", "0", 0.0)
    b.r("RS", "s", "in", 10e3)
    b.c("C1", "in", "b", 100e-9)
    b.r("RB", "vcc", "b", 220e3)
    b.r("RE", "e", "0", 3.3e3)
    b.c("CL", "e", "0", 100e-12)
    b.q("Q1", "vcc", "b", "e", **NPN)
    t = Transistor(NPN)

    def dc(x: Unknowns) -> Residuals:
        q = t.at(x.be1, x.bc1)
        return [(15 - x.b) / 220e3 - q.ib, q.ie - x.e / 3.3e3, *joined(q, x.b, 15, x.e)]

    def ac(x: Unknowns, s: Any, small: Small) -> Residuals:
        q = small["1"].at(s, x.b, x.be1, x.bc1)
        return [
            (1 - x.in_) / 10e3 - s * 100e-9 * (x.in_ - x.b),
            s * 100e-9 * (x.in_ - x.b) - x.b / 220e3 - q.ib,
            q.ie - x.e / 3.3e3 - s * 100e-12 * x.e,
            *joined(q, x.b, 0, x.e),
        ]

    return Board(
        name="emitter follower",
        bench=b,
        guess={"b": 12.0, "e": 11.3, "be1": 0.68, "bc1": -3.0},
        devices={"1": t},
        dc=dc,
        ac=ac,
        drive=1,
        open_at_dc=("in_",),
    )


def pnp_stage() -> Board:
    """PNP common emitter hung from the supply; base current crowding; at -20 degC."""
    b = Bench(-20.0)
    b.v("VCC", "vcc", "0", 9.0)
    b.v("VS", "s", "0", 0.0)
    b.c("C1", "s", "b", 1e-6)
    b.r("R1", "vcc", "b", 10e3)
    b.r("R2", "b", "0", 33e3)
    b.r("RE", "vcc", "e", 470.0)
    b.r("RC", "c", "0", 1e3)
    b.q("Q1", "c", "b", "e", pnp=True, sub="vcc", tnom_c=27.0, **PNP)
    t = Transistor(PNP, -20.0)

    def dc(x: Unknowns) -> Residuals:
        q = t.at(x.be1, x.bc1)
        return [
            (9 - x.b) / 10e3 + q.ib - x.b / 33e3,
            q.ic - x.c / 1e3,
            (9 - x.e) / 470 - q.ie,
            *joined(q, -x.b, -x.c, -x.e),
        ]

    def ac(x: Unknowns, s: Any, small: Small) -> Residuals:
        q = small["1"].at(s, -x.b, x.be1, x.bc1)
        return [
            s * 1e-6 * (1 - x.b) - x.b / 10e3 - x.b / 33e3 + q.ib,
            q.ic - x.c / 1e3,
            -x.e / 470 - q.ie,
            *joined(q, -x.b, -x.c, -x.e),
        ]

    return Board(
        name="PNP stage at -20 degC",
        bench=b,
        guess={"b": 6.8, "c": 2.8, "e": 7.6, "be1": 0.75, "bc1": -4.0},
        devices={"1": t},
        dc=dc,
        pnp=("1",),
        ac=ac,
        drive=1,
    )


def differential_pair() -> Board:
    """Differential pair with unequal collector resistors and a resistive tail; driven at one base."""
    b = Bench(27.0)
    b.v("VP", "vp", "0", 15.0)
    b.v("VN", "vn", "0", -15.0)
    b.v("VS", "s", "0", 0.0)
    b.r("RB1", "s", "b1", 1e3)
    b.r("RB2", "b2", "0", 2.2e3)
    b.r("RC1", "vp", "c1", 10e3)
    b.r("RC2", "vp", "c2", 9.1e3)
    b.r("RT", "e", "vn", 15e3)
    b.q("Q1", "c1", "b1", "e", **NPN)
    b.q("Q2", "c2", "b2", "e", **NPN)
    t = Transistor(NPN)

    def dc(x: Unknowns) -> Residuals:
        q, r = t.at(x.be1, x.bc1), t.at(x.be2, x.bc2)
        return [
            -x.b1 / 1e3 - q.ib,
            -x.b2 / 2.2e3 - r.ib,
            (15 - x.c1) / 10e3 - q.ic,
            (15 - x.c2) / 9.1e3 - r.ic,
            q.ie + r.ie - (x.e + 15) / 15e3,
            *joined(q, x.b1, x.c1, x.e),
            *joined(r, x.b2, x.c2, x.e),
        ]

    def ac(x: Unknowns, s: Any, small: Small) -> Residuals:
        q, r = small["1"].at(s, x.b1, x.be1, x.bc1), small["2"].at(s, x.b2, x.be2, x.bc2)
        return [
            (1 - x.b1) / 1e3 - q.ib,
            -x.b2 / 2.2e3 - r.ib,
            -x.c1 / 10e3 - q.ic,
            -x.c2 / 9.1e3 - r.ic,
            q.ie + r.ie - x.e / 15e3,
            *joined(q, x.b1, x.c1, x.e),
            *joined(r, x.b2, x.c2, x.e),
        ]

    return Board(
        name="differential pair",
        bench=b,
        guess={
            "b1": 0.0, "b2": 0.0, "c1": 10.0, "c2": 10.5, "e": -0.63,
            "be1": 0.63, "bc1": -10.0, "be2": 0.63, "bc2": -10.5,
        },
        devices={"1": t, "2": t},
        dc=dc,
        ac=ac,
        drive=2,
    )  # fmt: skip


def current_mirror() -> Board:
    """Mirror with emitter resistors of 1 : 2, output at another voltage than the input."""
    b = Bench(85.0)
    b.v("VP", "vp", "0", 10.0)
    b.r("R", "vp", "d", 8.2e3)
    b.r("RL", "vp", "o", 1.5e3)
    b.r("RE1", "e1", "0", 220.0)
    b.r("RE2", "e2", "0", 110.0)
    b.q("Q1", "d", "d", "e1", tnom_c=27.0, **NPN)
    b.q("Q2", "o", "d", "e2", tnom_c=27.0, **NPN)
    t = Transistor(NPN, 85.0)

    def dc(x: Unknowns) -> Residuals:
        q, r = t.at(x.be1, x.bc1), t.at(x.be2, x.bc2)
        return [
            (10 - x.d) / 8.2e3 - q.ic - q.ib - r.ib,
            (10 - x.o) / 1.5e3 - r.ic,
            q.ie - x.e1 / 220,
            r.ie - x.e2 / 110,
            *joined(q, x.d, x.d, x.e1),
            *joined(r, x.d, x.o, x.e2),
        ]

    return Board(
        name="current mirror at 85 degC",
        bench=b,
        guess={
            "d": 0.8, "o": 6.7, "e1": 0.25, "e2": 0.24, "be1": 0.55, "bc1": 0.0, "be2": 0.56, "bc2": -6.0,
        },
        devices={"1": t, "2": t},
        dc=dc,
    )  # fmt: skip


def darlington() -> Board:
    """Darlington follower with a bleeder between the bases."""
    b = Bench(27.0)
    b.v("VCC", "vcc", "0", 18.0)
    b.v("VS", "s", "0", 0.0)
    b.c("C1", "s", "b", 220e-9)
    b.r("RB", "vcc", "b", 1e6)
    b.r("RX", "m", "e", 10e3)
    b.r("RE", "e", "0", 390.0)
    b.q("Q1", "vcc", "b", "m", **NPN)
    b.q("Q2", "vcc", "m", "e", **NPN)
    t = Transistor(NPN)

    def dc(x: Unknowns) -> Residuals:
        q, r = t.at(x.be1, x.bc1), t.at(x.be2, x.bc2)
        return [
            (18 - x.b) / 1e6 - q.ib,
            q.ie - r.ib - (x.m - x.e) / 10e3,
            r.ie + (x.m - x.e) / 10e3 - x.e / 390,
            *joined(q, x.b, 18, x.m),
            *joined(r, x.m, 18, x.e),
        ]

    def ac(x: Unknowns, s: Any, small: Small) -> Residuals:
        q, r = small["1"].at(s, x.b, x.be1, x.bc1), small["2"].at(s, x.m, x.be2, x.bc2)
        return [
            s * 220e-9 * (1 - x.b) - x.b / 1e6 - q.ib,
            q.ie - r.ib - (x.m - x.e) / 10e3,
            r.ie + (x.m - x.e) / 10e3 - x.e / 390,
            *joined(q, x.b, 0, x.m),
            *joined(r, x.m, 0, x.e),
        ]

    return Board(
        name="Darlington follower",
        bench=b,
        guess={"b": 14.0, "m": 13.4, "e": 12.7, "be1": 0.62, "bc1": -4.0, "be2": 0.75, "bc2": -4.6},
        devices={"1": t, "2": t},
        dc=dc,
        ac=ac,
        drive=1,
    )


def complementary_feedback_pair() -> Board:
    """PNP whose collector drives an NPN that carries the output current; follower action at the output."""
    b = Bench(27.0)
    b.v("VCC", "vcc", "0", 18.0)
    b.v("VS", "s", "0", 0.0)
    b.c("C1", "s", "b", 1e-6)
    b.r("RB", "b", "0", 2e6)
    b.r("RC", "vcc", "o", 75.0)
    b.r("RX", "m", "0", 1e3)
    b.q("Q1", "m", "b", "o", pnp=True, **PNP)
    b.q("Q2", "o", "m", "0", **NPN)
    t, u = Transistor(PNP), Transistor(NPN)

    def dc(x: Unknowns) -> Residuals:
        q, r = t.at(x.be1, x.bc1), u.at(x.be2, x.bc2)
        return [
            q.ib - x.b / 2e6,
            (18 - x.o) / 75 - q.ie - r.ic,
            q.ic - x.m / 1e3 - r.ib,
            *joined(q, -x.b, -x.m, -x.o),
            *joined(r, x.m, x.o, 0),
        ]

    def ac(x: Unknowns, s: Any, small: Small) -> Residuals:
        q, r = small["1"].at(s, -x.b, x.be1, x.bc1), small["2"].at(s, x.m, x.be2, x.bc2)
        return [
            s * 1e-6 * (1 - x.b) - x.b / 2e6 + q.ib,
            -x.o / 75 - q.ie - r.ic,
            q.ic - x.m / 1e3 - r.ib,
            *joined(q, -x.b, -x.m, -x.o),
            *joined(r, x.m, x.o, 0),
        ]

    return Board(
        name="complementary feedback pair",
        bench=b,
        guess={"b": 11.0, "o": 11.7, "m": 0.8, "be1": 0.65, "bc1": -10.0, "be2": 0.75, "bc2": -10.0},
        devices={"1": t, "2": u},
        dc=dc,
        pnp=("1",),
        ac=ac,
        drive=1,
    )


def cascode() -> Board:
    """Common emitter into common base from one divider string."""
    b = Bench(27.0)
    b.v("VCC", "vcc", "0", 20.0)
    b.v("VS", "s", "0", 0.0)
    b.r("RS", "s", "in", 75.0)
    b.c("C1", "in", "b1", 1e-6)
    b.r("R1", "vcc", "b2", 15e3)
    b.r("R2", "b2", "b1", 5.6e3)
    b.r("R3", "b1", "0", 3.3e3)
    b.c("CB", "b2", "0", 1e-6)
    b.r("RE", "e", "0", 560.0)
    b.c("CE", "e", "0", 10e-6)
    b.r("RC", "vcc", "c2", 1.2e3)
    b.q("Q1", "m", "b1", "e", **NPN)
    b.q("Q2", "c2", "b2", "m", **NPN)
    t = Transistor(NPN)

    def dc(x: Unknowns) -> Residuals:
        q, r = t.at(x.be1, x.bc1), t.at(x.be2, x.bc2)
        return [
            (20 - x.b2) / 15e3 - (x.b2 - x.b1) / 5.6e3 - r.ib,
            (x.b2 - x.b1) / 5.6e3 - x.b1 / 3.3e3 - q.ib,
            q.ie - x.e / 560,
            r.ie - q.ic,
            (20 - x.c2) / 1.2e3 - r.ic,
            *joined(q, x.b1, x.m, x.e),
            *joined(r, x.b2, x.c2, x.m),
        ]

    def ac(x: Unknowns, s: Any, small: Small) -> Residuals:
        q, r = small["1"].at(s, x.b1, x.be1, x.bc1), small["2"].at(s, x.b2, x.be2, x.bc2)
        return [
            (1 - x.in_) / 75 - s * 1e-6 * (x.in_ - x.b1),
            s * 1e-6 * (x.in_ - x.b1) + (x.b2 - x.b1) / 5.6e3 - x.b1 / 3.3e3 - q.ib,
            -x.b2 / 15e3 - (x.b2 - x.b1) / 5.6e3 - s * 1e-6 * x.b2 - r.ib,
            q.ie - x.e / 560 - s * 10e-6 * x.e,
            r.ie - q.ic,
            -x.c2 / 1.2e3 - r.ic,
            *joined(q, x.b1, x.m, x.e),
            *joined(r, x.b2, x.c2, x.m),
        ]

    return Board(
        name="cascode",
        bench=b,
        guess={
            "b1": 2.7, "b2": 7.3, "e": 2.0, "m": 6.6, "c2": 15.0,
            "be1": 0.68, "bc1": -4.0, "be2": 0.68, "bc2": -8.0,
        },
        devices={"1": t, "2": t},
        dc=dc,
        ac=ac,
        drive=1,
        open_at_dc=("in_",),
    )  # fmt: skip


def saturated_switch() -> Board:
    """Relay driver: a switch hard on through a diode-clamped coil's resistance."""
    b = Bench(27.0)
    b.v("VCC", "vcc", "0", 12.0)
    b.v("VI", "i", "0", 5.0)
    b.r("RB", "i", "b", 2.2e3)
    b.r("RX", "b", "0", 10e3)
    b.r("RC", "vcc", "c", 400.0)
    b.d("D1", "c", "vcc", **SIGNAL_DIODE)
    b.q("Q1", "c", "b", "0", **NPN)
    t, d = Transistor(NPN), Diode(SIGNAL_DIODE)

    def dc(x: Unknowns) -> Residuals:
        q = t.at(x.be1, x.bc1)
        return [
            (5 - x.b) / 2.2e3 - x.b / 10e3 - q.ib,
            (12 - x.c) / 400 - d.current(x.d1) - q.ic,
            *joined(q, x.b, x.c, 0),
            d.outer(x.d1) - (x.c - 12),
        ]

    def ac(x: Unknowns, s: Any, small: Small) -> Residuals:
        q = small["1"].at(s, x.b, x.be1, x.bc1)
        return [
            (1 - x.b) / 2.2e3 - x.b / 10e3 - q.ib,
            -x.c / 400 - small["d1"].admittance(s) * x.c - q.ic,
            *joined(q, x.b, x.c, 0),
        ]

    return Board(
        name="saturated switch",
        bench=b,
        guess={"b": 0.85, "c": 0.1, "be1": 0.75, "bc1": 0.65, "d1": -11.9},
        devices={"1": t, "d1": d},
        dc=dc,
        ac=ac,
        drive=1,
    )


def push_pull() -> Board:
    """Complementary followers with two bias diodes and emitter resistors into 100 ohm, at 70 degC."""
    b = Bench(70.0)
    b.v("VP", "vp", "0", 15.0)
    b.v("VN", "vn", "0", -14.0)
    b.r("R1", "vp", "b1", 4.7e3)
    b.v("VS", "s", "0", 0.0)
    b.d("D1", "b1", "m", tnom_c=27.0, **SIGNAL_DIODE)
    b.d("D2", "m", "b2", tnom_c=27.0, **SIGNAL_DIODE)
    b.r("R2", "b2", "vn", 4.7e3)
    b.r("RI", "m", "s", 1e3)
    b.q("Q1", "vp", "b1", "e1", tnom_c=27.0, **NPN)
    b.q("Q2", "vn", "b2", "e2", pnp=True, tnom_c=27.0, **PNP)
    b.r("RE1", "e1", "o", 2.2)
    b.r("RE2", "o", "e2", 2.2)
    b.r("RL", "o", "0", 100.0)
    t, u, d, g = Transistor(NPN, 70.0), Transistor(PNP, 70.0), Diode(SIGNAL_DIODE, 70.0), Diode(SIGNAL_DIODE, 70.0)

    def dc(x: Unknowns) -> Residuals:
        q, r = t.at(x.be1, x.bc1), u.at(x.be2, x.bc2)
        i1, i2 = d.current(x.d1), g.current(x.d2)
        return [
            (15 - x.b1) / 4.7e3 - i1 - q.ib,
            i1 - i2 - x.m / 1e3,
            i2 + r.ib - (x.b2 + 14) / 4.7e3,
            q.ie - (x.e1 - x.o) / 2.2,
            (x.e1 - x.o) / 2.2 - (x.o - x.e2) / 2.2 - x.o / 100,
            (x.o - x.e2) / 2.2 - r.ie,
            *joined(q, x.b1, 15, x.e1),
            *joined(r, -x.b2, 14, -x.e2),
            d.outer(x.d1) - (x.b1 - x.m),
            g.outer(x.d2) - (x.m - x.b2),
        ]

    def ac(x: Unknowns, s: Any, small: Small) -> Residuals:
        q, r = small["1"].at(s, x.b1, x.be1, x.bc1), small["2"].at(s, -x.b2, x.be2, x.bc2)
        i1, i2 = small["d1"].admittance(s) * (x.b1 - x.m), small["d2"].admittance(s) * (x.m - x.b2)
        return [
            -x.b1 / 4.7e3 - i1 - q.ib,
            i1 - i2 + (1 - x.m) / 1e3,
            i2 + r.ib - x.b2 / 4.7e3,
            q.ie - (x.e1 - x.o) / 2.2,
            (x.e1 - x.o) / 2.2 - (x.o - x.e2) / 2.2 - x.o / 100,
            (x.o - x.e2) / 2.2 - r.ie,
            *joined(q, x.b1, 0, x.e1),
            *joined(r, -x.b2, 0, -x.e2),
        ]

    return Board(
        name="push-pull with bias diodes",
        bench=b,
        guess={
            "b1": 0.75, "m": 0.1, "b2": -0.55, "e1": 0.1, "o": 0.1, "e2": 0.1,
            "be1": 0.65, "bc1": -14.3, "be2": 0.65, "bc2": -13.4, "d1": 0.65, "d2": 0.65,
        },
        devices={"1": t, "2": u, "d1": d, "d2": g},
        dc=dc,
        pnp=("2",),
        ac=ac,
        drive=2,
    )  # fmt: skip


def feedback_pair() -> Board:
    """Direct-coupled two-stage amplifier: base current from the second emitter, signal feedback from the output."""
    b = Bench(27.0)
    b.v("VCC", "vcc", "0", 24.0)
    b.v("VS", "s", "0", 0.0)
    b.c("C1", "s", "b1", 1e-6)
    b.r("RC1", "vcc", "c1", 33e3)
    b.r("RE1", "e1", "0", 220.0)
    b.r("RF", "c2", "e1", 10e3)
    b.r("RC2", "vcc", "c2", 4.7e3)
    b.r("RE2", "e2", "0", 1e3)
    b.c("CE2", "e2", "0", 100e-6)
    b.r("RB", "e2", "b1", 100e3)
    b.q("Q1", "c1", "b1", "e1", **NPN)
    b.q("Q2", "c2", "c1", "e2", **NPN)
    t = Transistor(NPN)

    def dc(x: Unknowns) -> Residuals:
        q, r = t.at(x.be1, x.bc1), t.at(x.be2, x.bc2)
        return [
            (x.e2 - x.b1) / 100e3 - q.ib,
            (24 - x.c1) / 33e3 - q.ic - r.ib,
            q.ie + (x.c2 - x.e1) / 10e3 - x.e1 / 220,
            (24 - x.c2) / 4.7e3 - (x.c2 - x.e1) / 10e3 - r.ic,
            r.ie - x.e2 / 1e3 - (x.e2 - x.b1) / 100e3,
            *joined(q, x.b1, x.c1, x.e1),
            *joined(r, x.c1, x.c2, x.e2),
        ]

    def ac(x: Unknowns, s: Any, small: Small) -> Residuals:
        q, r = small["1"].at(s, x.b1, x.be1, x.bc1), small["2"].at(s, x.c1, x.be2, x.bc2)
        return [
            s * 1e-6 * (1 - x.b1) + (x.e2 - x.b1) / 100e3 - q.ib,
            -x.c1 / 33e3 - q.ic - r.ib,
            q.ie + (x.c2 - x.e1) / 10e3 - x.e1 / 220,
            -x.c2 / 4.7e3 - (x.c2 - x.e1) / 10e3 - r.ic,
            r.ie - x.e2 / 1e3 - (x.e2 - x.b1) / 100e3 - s * 100e-6 * x.e2,
            *joined(q, x.b1, x.c1, x.e1),
            *joined(r, x.c1, x.c2, x.e2),
        ]

    return Board(
        name="direct-coupled feedback pair",
        bench=b,
        guess={
            "b1": 1.2, "c1": 2.1, "e1": 0.55, "c2": 17.0, "e2": 1.4,
            "be1": 0.64, "bc1": -1.0, "be2": 0.65, "bc2": -15.0,
        },
        devices={"1": t, "2": t},
        dc=dc,
        ac=ac,
        drive=1,
    )  # fmt: skip


def zener_regulator() -> Board:
    """Breakdown diode and follower."""
    b = Bench(40.0)
    b.v("VP", "vp", "0", 12.0)
    b.r("R", "vp", "z", 680.0)
    b.d("D1", "0", "z", tnom_c=27.0, **ZENER)
    b.q("Q1", "vp", "z", "o", tnom_c=27.0, **NPN)
    b.r("RL", "o", "0", 220.0)
    t, d = Transistor(NPN, 40.0), Diode(ZENER, 40.0)

    def dc(x: Unknowns) -> Residuals:
        q = t.at(x.be1, x.bc1)
        return [
            (12 - x.z) / 680 + d.current(x.d1) - q.ib,
            q.ie - x.o / 220,
            *joined(q, x.z, 12, x.o),
            d.outer(x.d1) - (0 - x.z),
        ]

    return Board(
        name="regulator with breakdown diode",
        bench=b,
        guess={"z": 5.63, "o": 4.9, "be1": 0.72, "bc1": -6.3, "d1": -5.6},
        devices={"1": t, "d1": d},
        dc=dc,
    )


def collector_feedback() -> Board:
    """Base resistor from the collector; inductor and resistor as collector load."""
    b = Bench(27.0)
    b.v("VCC", "vcc", "0", 9.0)
    b.v("VS", "s", "0", 0.0)
    b.c("C1", "s", "b", 10e-9)
    b.r("RF", "c", "b", 100e3)
    b.l("LC", "k", "c", 22e-6)
    b.r("RC", "vcc", "k", 1.8e3)
    b.c("CL", "c", "0", 22e-12)
    b.q("Q1", "c", "b", "0", **NPN)
    t = Transistor(NPN)

    def dc(x: Unknowns) -> Residuals:
        q = t.at(x.be1, x.bc1)
        return [
            (x.c - x.b) / 100e3 - q.ib,
            (9 - x.k) / 1.8e3 - q.ic - q.ib,
            x.k - x.c,
            *joined(q, x.b, x.c, 0),
        ]

    def ac(x: Unknowns, s: Any, small: Small) -> Residuals:
        q = small["1"].at(s, x.b, x.be1, x.bc1)
        i_l = -x.k / 1.8e3
        return [
            s * 10e-9 * (1 - x.b) + (x.c - x.b) / 100e3 - q.ib,
            i_l - (x.c - x.b) / 100e3 - s * 22e-12 * x.c - q.ic,
            (x.k - x.c) - s * 22e-6 * i_l,
            *joined(q, x.b, x.c, 0),
        ]

    return Board(
        name="collector feedback with shunt peaking",
        bench=b,
        guess={"b": 0.66, "c": 3.5, "k": 3.5, "be1": 0.65, "bc1": -2.8},
        devices={"1": t},
        dc=dc,
        ac=ac,
        drive=1,
        f_hz=(1e3, 500e3, 20e6),
    )


ALL: tuple[Callable[[], Board], ...] = (
    divider,
    common_base,
    follower,
    pnp_stage,
    differential_pair,
    current_mirror,
    darlington,
    complementary_feedback_pair,
    cascode,
    saturated_switch,
    push_pull,
    feedback_pair,
    zener_regulator,
    collector_feedback,
)
WITH_SIGNAL = tuple(make for make in ALL if make().ac is not None)
mp.mp.dps = 30
