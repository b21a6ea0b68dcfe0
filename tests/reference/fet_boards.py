"""Circuits with field-effect transistors, for direct current: the same rules as in `boards`."""

from __future__ import annotations

from collections.abc import Callable

from tests.bench import Bench
from tests.reference.boards import NPN, Board, Residuals, Unknowns, joined
from tests.reference.fets import Jfet, Mosfet
from tests.reference.physics import Transistor

J: dict[str, float] = {"vto": -2.6, "beta": 1.3e-3, "lambda": 0.012, "b": 0.9, "is": 3e-14, "n": 1.05, "pb": 0.9}
M: dict[str, float] = {
    "vto": 1.4, "kp": 2e-5, "w": 4e-4, "l": 1e-5, "lambda": 0.02, "gamma": 0.6, "phi": 0.65, "is": 2e-14,
}  # fmt: skip
P: dict[str, float] = {
    "vto": 1.1, "kp": 8e-6, "w": 9e-4, "l": 1e-5, "lambda": 0.03, "gamma": 0.5, "phi": 0.7, "is": 1e-14,
}  # fmt: skip


def board(name: str, bench: Bench, guess: dict[str, float], dc: Callable[[Unknowns], Residuals]) -> Board:
    """A board of field-effect transistors alone."""
    return Board(name=name, bench=bench, guess=guess, devices={}, dc=dc)


def self_biased_jfet() -> Board:
    b = Bench(27.0)
    b.v("VDD", "vdd", "0", 12.0)
    b.r("RD", "vdd", "d", 2.2e3)
    b.r("RG", "g", "0", 1e6)
    b.r("RS", "s", "0", 470.0)
    b.j("J1", "d", "g", "s", **J)
    t = Jfet(J)

    def dc(x: Unknowns) -> Residuals:
        i_d, i_g = t.terminal(x.g - x.s, x.g - x.d)
        return [(12 - x.d) / 2.2e3 - i_d, -x.g / 1e6 - i_g, i_d + i_g - x.s / 470]

    return board("self-biased JFET", b, {"d": 7.0, "g": 0.0, "s": 1.1}, dc)


def jfet_follower_on_a_current_source() -> Board:
    """Two of a kind: the lower with a resistor in its source sets the current of the upper, at 75 degC."""
    b = Bench(75.0)
    b.v("VDD", "vdd", "0", 15.0)
    b.v("VSS", "vss", "0", -5.0)
    b.r("RG", "g", "0", 2.2e6)
    b.j("J1", "vdd", "g", "o", tnom_c=27.0, **J)
    b.r("R1", "o", "k", 220.0)
    b.j("J2", "k", "vss", "s", tnom_c=27.0, **J)
    b.r("R2", "s", "vss", 220.0)
    b.r("RL", "o", "0", 47e3)
    t = Jfet(J, 75.0)

    def dc(x: Unknowns) -> Residuals:
        d1, g1 = t.terminal(x.g - x.o, x.g - 15)
        d2, g2 = t.terminal(-5 - x.s, -5 - x.k)
        link = (x.o - x.k) / 220
        return [-x.g / 2.2e6 - g1, d1 + g1 - link - x.o / 47e3, link - d2, d2 + g2 - (x.s + 5) / 220]

    return board("JFET follower on a current source", b, {"g": 0.0, "o": 0.8, "k": 0.0, "s": -4.2}, dc)


def p_channel_jfet() -> Board:
    b = Bench(27.0)
    b.v("VSS", "vss", "0", 9.0)
    b.r("RS", "vss", "s", 330.0)
    b.r("RG", "g", "vss", 1e6)
    b.r("RD", "d", "0", 1.5e3)
    b.j("J1", "d", "g", "s", p=True, **J)
    t = Jfet(J)

    def dc(x: Unknowns) -> Residuals:
        i_d, i_g = t.terminal(x.s - x.g, x.d - x.g)
        return [(9 - x.s) / 330 - i_d - i_g, (9 - x.g) / 1e6 + i_g, i_d - x.d / 1.5e3]

    return board("P-channel JFET", b, {"s": 8.0, "g": 9.0, "d": 4.0}, dc)


def jfet_with_conducting_gate() -> Board:
    """The gate pulled up: its junction conducts."""
    b = Bench(27.0)
    b.v("VDD", "vdd", "0", 10.0)
    b.r("RD", "vdd", "d", 1e3)
    b.r("RG", "g", "vdd", 100e3)
    b.j("J1", "d", "g", "0", **J)
    t = Jfet(J)

    def dc(x: Unknowns) -> Residuals:
        i_d, i_g = t.terminal(x.g, x.g - x.d)
        return [(10 - x.d) / 1e3 - i_d, (10 - x.g) / 100e3 - i_g]

    return board("JFET with conducting gate", b, {"d": 1.0, "g": 0.6}, dc)


def mosfet_stage_with_body_effect() -> Board:
    b = Bench(27.0)
    b.v("VDD", "vdd", "0", 10.0)
    b.r("R1", "vdd", "g", 1e6)
    b.r("R2", "g", "0", 680e3)
    b.r("RD", "vdd", "d", 10e3)
    b.r("RS", "s", "0", 3.3e3)
    b.m("M1", "d", "g", "s", "0", **M)
    t = Mosfet(M)

    def dc(x: Unknowns) -> Residuals:
        i_d, i_b = t.terminal(x.g - x.s, x.d - x.s, -x.s)
        return [(10 - x.g) / 1e6 - x.g / 680e3, (10 - x.d) / 10e3 - i_d, i_d + i_b - x.s / 3.3e3]

    return board("MOSFET stage with body effect", b, {"g": 4.05, "d": 6.0, "s": 1.3}, dc)


def mosfet_switch() -> Board:
    """Ohmic, 24 V through 120 ohm."""
    strong = {**M, "kp": 0.05, "w": 1e-2, "l": 1e-3, "gamma": 0.0}
    b = Bench(27.0)
    b.v("VDD", "vdd", "0", 24.0)
    b.v("VG", "g", "0", 5.0)
    b.r("RL", "vdd", "d", 120.0)
    b.m("M1", "d", "g", "0", **strong)
    t = Mosfet(strong)

    def dc(x: Unknowns) -> Residuals:
        return [(24 - x.d) / 120 - t.terminal(5, x.d, 0)[0]]

    return board("MOSFET switch", b, {"d": 0.1}, dc)


def mosfet_the_wrong_way_round() -> Board:
    """Current enters at the source: the body diode carries most of it."""
    b = Bench(27.0)
    b.v("VIN", "in", "0", 5.0)
    b.r("R1", "in", "s", 470.0)
    b.r("R2", "d", "0", 220.0)
    b.m("M1", "d", "0", "s", **M)
    t = Mosfet(M)

    def dc(x: Unknowns) -> Residuals:
        # Body and source are one net: what enters there leaves at the drain, the gate takes nothing.
        i_d = t.terminal(-x.s, x.d - x.s, 0)[0]
        return [(5 - x.s) / 470 + i_d, -i_d - x.d / 220]

    return board("MOSFET the wrong way round", b, {"s": 2.1, "d": 1.4}, dc)


def mosfet_mirror() -> Board:
    b = Bench(27.0)
    b.v("VDD", "vdd", "0", 5.0)
    b.r("R1", "vdd", "g", 22e3)
    b.m("M1", "g", "g", "0", **M)
    b.m("M2", "o", "g", "0", **{**M, "w": 8e-4})
    b.r("RL", "vdd", "o", 4.7e3)
    one, two = Mosfet(M), Mosfet({**M, "w": 8e-4})

    def dc(x: Unknowns) -> Residuals:
        return [
            (5 - x.g) / 22e3 - one.terminal(x.g, x.g, 0)[0],
            (5 - x.o) / 4.7e3 - two.terminal(x.g, x.o, 0)[0],
        ]

    return board("MOSFET mirror", b, {"g": 2.0, "o": 3.5}, dc)


def complementary_inverter() -> Board:
    """N and P channel near the middle of their transfer, with feedback from output to input."""
    b = Bench(27.0)
    b.v("VDD", "vdd", "0", 5.0)
    b.r("RF", "o", "g", 1e6)
    b.r("RG", "g", "0", 4.7e6)
    b.m("M1", "o", "g", "0", **M)
    b.m("M2", "o", "g", "vdd", p=True, channel=-1.0, **P)
    n, p = Mosfet(M), Mosfet(P)

    def dc(x: Unknowns) -> Residuals:
        down = n.terminal(x.g, x.o, 0)[0]
        up = p.terminal(5 - x.g, 5 - x.o, 0)[0]
        link = (x.o - x.g) / 1e6
        return [up - down - link, link - x.g / 4.7e6]

    return board("complementary inverter", b, {"o": 2.5, "g": 2.1}, dc)


def jfet_under_a_bipolar() -> Board:
    """Cascode: the JFET's drain drives the emitter of an NPN."""
    b = Bench(27.0)
    b.v("VCC", "vcc", "0", 15.0)
    b.r("R1", "vcc", "b", 47e3)
    b.r("R2", "b", "0", 33e3)
    b.r("RC", "vcc", "c", 1.8e3)
    b.r("RG", "g", "0", 1e6)
    b.r("RS", "s", "0", 560.0)
    b.q("Q1", "c", "b", "e", **NPN)
    b.j("J1", "e", "g", "s", **J)
    t, f = Transistor(NPN), Jfet(J)

    def dc(x: Unknowns) -> Residuals:
        q = t.at(x.be1, x.bc1)
        i_d, i_g = f.terminal(x.g - x.s, x.g - x.e)
        return [
            (15 - x.b) / 47e3 - x.b / 33e3 - q.ib,
            (15 - x.c) / 1.8e3 - q.ic,
            q.ie - i_d,
            -x.g / 1e6 - i_g,
            i_d + i_g - x.s / 560,
            *joined(q, x.b, x.c, x.e),
        ]

    guess = {"b": 6.1, "c": 11.5, "e": 5.4, "g": 0.0, "s": 1.1, "be1": 0.68, "bc1": -5.4}
    return Board(name="JFET under a bipolar", bench=b, guess=guess, devices={"1": t}, dc=dc)


FET_BOARDS: tuple[Callable[[], Board], ...] = (
    self_biased_jfet,
    jfet_follower_on_a_current_source,
    p_channel_jfet,
    jfet_with_conducting_gate,
    mosfet_stage_with_body_effect,
    mosfet_switch,
    mosfet_the_wrong_way_round,
    mosfet_mirror,
    complementary_inverter,
    jfet_under_a_bipolar,
)
