"""Boards with field-effect transistors, diodes and mixtures, once for the program and once as node equations by hand.

See `tests.reference.boards` for how a board is written. Parameters are invented.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

from tests.bench import Bench
from tests.reference.boards import NPN, PNP, SIGNAL_DIODE, Board, Residuals, Unknowns, joined
from tests.reference.fets import Flow, Jfet, Mosfet
from tests.reference.physics import Diode, Transistor

NJF: dict[str, float] = {
    "vto": -2.8, "beta": 1.28e-3, "lambda_": 0.012, "is_": 3e-14, "n": 1.1, "rd": 12.0, "rs": 8.0,
    "pb": 0.8, "b": 0.9, "vtotc": -2.2e-3, "betatce": -0.5, "isr": 1.5e-13, "nr": 2.1, "alpha": 3e-4, "vk": 60.0,
    "bv": 40.0, "ibv": 1e-6, "nbv": 1.4,
}  # fmt: skip
PJF: dict[str, float] = {"vto": -2.2, "beta": 9e-4, "lambda_": 0.02, "is_": 5e-14, "rd": 20.0, "rs": 20.0}
NMOS: dict[str, float] = {
    "vto": 0.9, "kp": 5e-5, "lambda_": 0.02, "gamma": 0.55, "phi": 0.65, "w": 400e-6, "l": 4e-6, "rd": 9.0, "rs": 6.0,
    "is_": 2e-14, "n": 1.1,
}  # fmt: skip
PMOS: dict[str, float] = {
    "vto": 1.1, "kp": 2e-5, "lambda_": 0.03, "gamma": 0.4, "phi": 0.7, "w": 800e-6, "l": 4e-6, "rd": 12.0, "rs": 10.0,
    "is_": 1e-14,
}  # fmt: skip
POWER: dict[str, float] = {"vto": 2.9, "kp": 12.0, "lambda_": 0.005, "rd": 0.05, "rs": 0.004, "is_": 1e-13, "n": 1.2}
SCHOTTKY: dict[str, float] = {"is_": 5e-6, "n": 1.1, "rs": 0.15, "eg": 0.69, "xti": 2.0, "bv": 40.0, "ibv": 1e-3}
LED: dict[str, float] = {"is_": 1e-20, "n": 1.8, "rs": 2.0, "eg": 1.95}
SOFT_ZENER: dict[str, float] = {
    "is_": 1e-14, "n": 1.2, "rs": 0.6, "bv": 5.1, "ibv": 5e-3, "nbv": 7.0, "tbv1": -1.6e-4, "isr": 1e-11,
}  # fmt: skip


def at_jfet(j: Flow, g: Any, d: Any, s: Any) -> Residuals:
    """The two voltage equations of an N channel junction FET between its nets."""
    return [j.outer[0] - (g - s), j.outer[1] - (g - d)]


def at_mosfet(m: Flow, g: Any, d: Any, s: Any, b: Any) -> Residuals:
    """The three voltage equations of an N channel MOSFET between its nets."""
    return [m.outer[0] - (g - s), m.outer[1] - (d - s), m.outer[2] - (b - s)]


def jfet_stage() -> Board:
    """Self-biased junction FET with a gate resistor that the leakage shows on, at 60 degC."""
    b = Bench(60.0)
    b.v("VCC", "vcc", "0", 15.0)
    b.r("RG", "g", "0", 10e6)
    b.r("RD", "vcc", "d", 2.2e3)
    b.r("RS", "s", "0", 680.0)
    b.j("J1", "d", "g", "s", tnom_c=27.0, **NJF)
    j = Jfet(NJF, 60.0)

    def dc(x: Unknowns) -> Residuals:
        f = j.at(x.gsj1, x.gdj1)
        return [
            (15 - x.d) / 2.2e3 - f.id,
            -x.g / 10e6 - f.ig,
            f.out - x.s / 680,
            *at_jfet(f, x.g, x.d, x.s),
        ]

    return Board(
        name="self-biased junction FET at 60 degC",
        bench=b,
        guess={"d": 10.0, "g": 0.0, "s": 1.2, "gsj1": -1.2, "gdj1": -10.0},
        devices={"j1": j},
        dc=dc,
    )


def jfet_follower() -> Board:
    """Source follower on a current source of the same kind, into a load."""
    b = Bench(27.0)
    b.v("VP", "vp", "0", 12.0)
    b.v("VN", "vn", "0", -12.0)
    b.r("RG", "g", "0", 1e9)
    b.j("J1", "vp", "g", "s", **NJF)
    b.r("R1", "s", "o", 470.0)
    b.j("J2", "o", "vn", "t", **NJF)
    b.r("R2", "t", "vn", 470.0)
    b.r("RL", "o", "0", 4.7e3)
    j = Jfet(NJF)

    def dc(x: Unknowns) -> Residuals:
        f, k = j.at(x.gsj1, x.gdj1), j.at(x.gsj2, x.gdj2)
        return [
            -x.g / 1e9 - f.ig,
            f.out - (x.s - x.o) / 470,
            (x.s - x.o) / 470 - k.id - x.o / 4.7e3,
            k.out - (x.t + 12) / 470,
            *at_jfet(f, x.g, 12, x.s),
            *at_jfet(k, -12, x.o, x.t),
        ]

    return Board(
        name="JFET follower on a JFET current source",
        bench=b,
        guess={"g": 0.0, "s": 0.9, "o": 0.1, "t": -11.1, "gsj1": -0.9, "gdj1": -12.0, "gsj2": -0.9, "gdj2": -12.0},
        devices={"j1": j, "j2": j},
        dc=dc,
    )


def pjfet_into_zener() -> Board:
    """P channel junction FET as the current source of a soft breakdown diode, at -10 degC."""
    b = Bench(-10.0)
    b.v("VCC", "vcc", "0", 15.0)
    b.r("RS", "vcc", "s", 330.0)
    b.j("J1", "z", "vcc", "s", p=True, tnom_c=27.0, **PJF)
    b.d("D1", "0", "z", tnom_c=27.0, **SOFT_ZENER)
    b.r("RL", "z", "0", 33e3)
    j, d = Jfet(PJF, -10.0), Diode(SOFT_ZENER, -10.0)

    def dc(x: Unknowns) -> Residuals:
        f = j.at(x.gsj1, x.gdj1)
        return [
            (15 - x.s) / 330 - f.out,
            f.id + d.current(x.d1) - x.z / 33e3,
            *at_jfet(f, -15, -x.z, -x.s),
            d.outer(x.d1) + x.z,
        ]

    return Board(
        name="P channel JFET into a breakdown diode",
        bench=b,
        guess={"s": 14.4, "z": 4.9, "gsj1": -0.6, "gdj1": -10.0, "d1": -4.9},
        devices={"j1": j, "d1": d},
        dc=dc,
        pnp=("j1",),
    )


def body_effect() -> Board:
    """N channel MOSFET whose body stands at ground and its source does not, at 70 degC."""
    b = Bench(70.0)
    b.v("VCC", "vcc", "0", 9.0)
    b.r("R1", "vcc", "g", 100e3)
    b.r("R2", "g", "0", 100e3)
    b.r("RD", "vcc", "d", 3.3e3)
    b.r("RS", "s", "0", 2.7e3)
    b.m("M1", "d", "g", "s", "0", tnom_c=27.0, **NMOS)
    m = Mosfet(NMOS, 70.0)

    def dc(x: Unknowns) -> Residuals:
        f = m.at(x.gsm1, x.dsm1, x.bsm1)
        return [
            (9 - x.g) / 100e3 - x.g / 100e3 - f.ig,
            (9 - x.d) / 3.3e3 - f.id,
            f.out - x.s / 2.7e3,
            *at_mosfet(f, x.g, x.d, x.s, 0),
        ]

    return Board(
        name="MOSFET with body effect at 70 degC",
        bench=b,
        guess={"g": 4.5, "d": 6.2, "s": 2.3, "gsm1": 2.2, "dsm1": 3.9, "bsm1": -2.3},
        devices={"m1": m},
        dc=dc,
    )


def inverter() -> Board:
    """Complementary pair held in the middle by its own feedback, loaded on one side."""
    b = Bench(27.0)
    b.v("VCC", "vcc", "0", 5.0)
    b.r("RF", "o", "i", 1e6)
    b.r("RI", "i", "0", 10e6)
    b.r("RL", "o", "0", 22e3)
    b.m("M1", "o", "i", "0", **NMOS)
    b.m("M2", "o", "i", "vcc", p=True, **PMOS)
    m, p = Mosfet(NMOS), Mosfet({**PMOS, "channel": -1.0})

    def dc(x: Unknowns) -> Residuals:
        f, k = m.at(x.gsm1, x.dsm1, x.bsm1), p.at(x.gsm2, x.dsm2, x.bsm2)
        return [
            (x.o - x.i) / 1e6 - x.i / 10e6,
            k.id - f.id - x.o / 22e3 - (x.o - x.i) / 1e6,
            *at_mosfet(f, x.i, x.o, 0, 0),
            *at_mosfet(k, -x.i, -x.o, -5, -5),
        ]

    return Board(
        name="complementary inverter biased by itself",
        bench=b,
        guess={
            "i": 2.0, "o": 2.2, "gsm1": 2.0, "dsm1": 2.2, "bsm1": 0.0, "gsm2": 3.0, "dsm2": 2.8, "bsm2": 0.0,
        },
        devices={"m1": m, "m2": p},
        dc=dc,
        pnp=("m2",),
    )  # fmt: skip


def load_switch() -> Board:
    """P channel MOSFET on a supply's high side, turned on by an NPN from a logic level, ohmic at 1 A."""
    b = Bench(27.0)
    b.v("VCC", "vcc", "0", 12.0)
    b.v("VI", "i", "0", 3.3)
    b.r("RB", "i", "b", 10e3)
    b.q("Q1", "c", "b", "0", **NPN)
    b.r("RX", "c", "g", 1e3)
    b.r("RG", "g", "vcc", 10e3)
    b.m("M1", "o", "g", "vcc", p=True, **POWER)
    b.r("RL", "o", "0", 12.0)
    b.d("D1", "0", "o", **SCHOTTKY)
    t, m, d = Transistor(NPN), Mosfet({**POWER, "channel": -1.0}), Diode(SCHOTTKY)

    def dc(x: Unknowns) -> Residuals:
        q, k = t.at(x.be1, x.bc1), m.at(x.gsm1, x.dsm1, x.bsm1)
        return [
            (3.3 - x.b) / 10e3 - q.ib,
            (x.g - x.c) / 1e3 - q.ic,
            (12 - x.g) / 10e3 - (x.g - x.c) / 1e3,
            k.id + d.current(x.d1) - x.o / 12,
            *joined(q, x.b, x.c, 0),
            *at_mosfet(k, -x.g, -x.o, -12, -12),
            d.outer(x.d1) + x.o,
        ]

    return Board(
        name="load switch with its driver",
        bench=b,
        guess={
            "b": 0.69, "c": 0.05, "g": 1.13, "o": 11.935, "be1": 0.65, "bc1": 0.6,
            "gsm1": 10.86, "dsm1": 0.0105, "bsm1": -0.004, "d1": -11.935,
        },
        devices={"1": t, "m1": m, "d1": d},
        dc=dc,
        pnp=("m1",),
    )  # fmt: skip


def mixed_cascode() -> Board:
    """Junction FET under a bipolar whose base stands on two LEDs."""
    b = Bench(45.0)
    b.v("VCC", "vcc", "0", 18.0)
    b.r("RB", "vcc", "b", 8.2e3)
    b.d("D1", "b", "k", tnom_c=27.0, **LED)
    b.d("D2", "k", "0", tnom_c=27.0, **LED)
    b.r("RC", "vcc", "c", 1.5e3)
    b.q("Q1", "c", "b", "m", tnom_c=27.0, **NPN)
    b.j("J1", "m", "g", "s", tnom_c=27.0, **NJF)
    b.r("RG", "g", "0", 1e6)
    b.r("RS", "s", "0", 390.0)
    t, j, d = Transistor(NPN, 45.0), Jfet(NJF, 45.0), Diode(LED, 45.0)

    def dc(x: Unknowns) -> Residuals:
        q, f = t.at(x.be1, x.bc1), j.at(x.gsj1, x.gdj1)
        return [
            (18 - x.b) / 8.2e3 - d.current(x.d1) - q.ib,
            d.current(x.d1) - d.current(x.d2),
            (18 - x.c) / 1.5e3 - q.ic,
            q.ie - f.id,
            -x.g / 1e6 - f.ig,
            f.out - x.s / 390,
            *joined(q, x.b, x.c, x.m),
            *at_jfet(f, x.g, x.m, x.s),
            d.outer(x.d1) - (x.b - x.k),
            d.outer(x.d2) - x.k,
        ]

    return Board(
        name="JFET and bipolar cascode on LEDs",
        bench=b,
        guess={
            "b": 3.2, "k": 1.6, "c": 14.0, "m": 2.5, "g": 0.0, "s": 1.0, "be1": 0.65, "bc1": -10.0,
            "gsj1": -1.0, "gdj1": -2.5, "d1": 1.6, "d2": 1.6,
        },
        devices={"1": t, "j1": j, "d1": d, "d2": d},
        dc=dc,
    )  # fmt: skip


def two_supplies() -> Board:
    """Two supplies into one load through Schottky diodes, the stronger leaking into the weaker, at 85 degC."""
    b = Bench(85.0)
    b.v("V1", "p", "0", 5.0)
    b.v("V2", "q", "0", 4.7)
    b.r("R1", "p", "a", 0.2)
    b.r("R2", "q", "b", 0.5)
    b.d("D1", "a", "o", tnom_c=27.0, **SCHOTTKY)
    b.d("D2", "b", "o", tnom_c=27.0, **SCHOTTKY)
    b.r("RL", "o", "0", 15.0)
    d = Diode(SCHOTTKY, 85.0)

    def dc(x: Unknowns) -> Residuals:
        i, k = d.current(x.d1), d.current(x.d2)
        return [
            (5 - x.a) / 0.2 - i,
            (4.7 - x.b) / 0.5 - k,
            i + k - x.o / 15,
            d.outer(x.d1) - (x.a - x.o),
            d.outer(x.d2) - (x.b - x.o),
        ]

    return Board(
        name="two supplies through Schottky diodes",
        bench=b,
        guess={"a": 4.95, "b": 4.7, "o": 4.7, "d1": 0.25, "d2": 0.05},
        devices={"d1": d, "d2": d},
        dc=dc,
    )


def series_regulator() -> Board:
    """Darlington pass pair, error amplifier on a soft breakdown diode, at 50 degC."""
    b = Bench(50.0)
    b.v("VP", "vp", "0", 18.0)
    b.r("RB", "vp", "c", 4.7e3)
    b.q("Q1", "vp", "c", "m", tnom_c=27.0, **NPN)
    b.q("Q2", "vp", "m", "o", tnom_c=27.0, **NPN)
    b.r("RM", "m", "o", 4.7e3)
    b.q("Q3", "c", "f", "z", tnom_c=27.0, **NPN)
    b.d("D1", "0", "z", tnom_c=27.0, **SOFT_ZENER)
    b.r("RZ", "o", "z", 2.2e3)
    b.r("R1", "o", "f", 10e3)
    b.r("R2", "f", "0", 10e3)
    b.r("RL", "o", "0", 330.0)
    t, d = Transistor(NPN, 50.0), Diode(SOFT_ZENER, 50.0)

    def dc(x: Unknowns) -> Residuals:
        q, r, w = t.at(x.be1, x.bc1), t.at(x.be2, x.bc2), t.at(x.be3, x.bc3)
        return [
            (18 - x.c) / 4.7e3 - q.ib - w.ic,
            q.ie - r.ib - (x.m - x.o) / 4.7e3,
            r.ie + (x.m - x.o) / 4.7e3 - (x.o - x.z) / 2.2e3 - (x.o - x.f) / 10e3 - x.o / 330,
            (x.o - x.f) / 10e3 - x.f / 10e3 - w.ib,
            (x.o - x.z) / 2.2e3 + w.ie + d.current(x.d1),
            *joined(q, x.c, 18, x.m),
            *joined(r, x.m, 18, x.o),
            *joined(w, x.f, x.c, x.z),
            d.outer(x.d1) + x.z,
        ]

    return Board(
        name="series regulator with error amplifier",
        bench=b,
        guess={
            "c": 12.9, "m": 12.3, "o": 11.6, "f": 5.8, "z": 5.15, "be1": 0.6, "bc1": -5.0, "be2": 0.68, "bc2": -5.7,
            "be3": 0.6, "bc3": -7.0, "d1": -5.1,
        },
        devices={"1": t, "2": t, "3": t, "d1": d},
        dc=dc,
    )  # fmt: skip


def clamped_input() -> Board:
    """A gate behind a series resistor with diodes to both supplies, driven beyond one of them, and its PNP follower."""
    b = Bench(27.0)
    b.v("VP", "vp", "0", 5.0)
    b.v("VI", "i", "0", 9.0)
    b.r("R1", "i", "g", 10e3)
    b.d("D1", "g", "vp", **SIGNAL_DIODE)
    b.d("D2", "0", "g", **SIGNAL_DIODE)
    b.m("M1", "vp", "g", "s", "0", **NMOS)
    b.r("RS", "s", "0", 1.5e3)
    b.q("Q1", "0", "s", "e", pnp=True, **PNP)
    b.r("RE", "vp", "e", 2.2e3)
    m, t, d = Mosfet(NMOS), Transistor(PNP), Diode(SIGNAL_DIODE)

    def dc(x: Unknowns) -> Residuals:
        f, q = m.at(x.gsm1, x.dsm1, x.bsm1), t.at(x.be1, x.bc1)
        return [
            (9 - x.g) / 10e3 - d.current(x.d1) + d.current(x.d2),
            f.out + q.ib - x.s / 1.5e3,
            (5 - x.e) / 2.2e3 - q.ie,
            *at_mosfet(f, x.g, 5, x.s, 0),
            *joined(q, -x.s, 0, -x.e),
            d.outer(x.d1) - (x.g - 5),
            d.outer(x.d2) + x.g,
        ]

    return Board(
        name="clamped MOSFET input with a PNP follower",
        bench=b,
        guess={
            "g": 5.6, "s": 3.0, "e": 3.6, "gsm1": 2.6, "dsm1": 2.0, "bsm1": -3.0, "be1": 0.65, "bc1": -3.0,
            "d1": 0.6, "d2": -5.6,
        },
        devices={"m1": m, "1": t, "d1": d, "d2": d},
        dc=dc,
        pnp=("1",),
    )  # fmt: skip


MIXED: tuple[Callable[[], Board], ...] = (
    jfet_stage,
    jfet_follower,
    pjfet_into_zener,
    body_effect,
    inverter,
    load_switch,
    mixed_cascode,
    two_supplies,
    series_regulator,
    clamped_input,
)
