"""Sixty circuits from microvolts to 400 V and from picoamperes to 10 A: what the solver must bring to a certificate.

Values are invented. `expect`: net -> (lowest, highest) voltage that the circuit's own arithmetic allows; `helper`: what
the solver is known to need; `held`: of a circuit with several rests, nets that, held at ground and let go, leave one
each. Each circuit is one function that fills a bench.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field

from tests.bench import Bench

N = {"is_": 2e-14, "bf": 200.0, "vaf": 90.0, "br": 4.0, "ikf": 0.15, "rb": 60.0, "rc": 1.0, "re": 0.2, "ise": 1e-14}
POWER = {"is_": 5e-12, "bf": 80.0, "vaf": 100.0, "br": 4.0, "ikf": 4.0, "rb": 2.0, "rc": 0.05, "re": 0.02}
HIGH = {"is_": 1e-13, "bf": 60.0, "vaf": 300.0, "br": 2.0, "ikf": 0.1, "rb": 100.0, "rc": 10.0}
ZENER = {"is_": 1e-14, "n": 1.2, "rs": 0.6, "bv": 5.1, "ibv": 5e-3, "nbv": 7.0, "tbv1": -1.6e-4}
DIODE = {"is_": 2.5e-9, "n": 1.75, "rs": 0.6, "bv": 100.0, "ibv": 5e-6}
SCHOTTKY = {"is_": 5e-6, "n": 1.1, "rs": 0.15, "eg": 0.69, "xti": 2.0, "bv": 40.0}
LED = {"is_": 1e-20, "n": 1.8, "rs": 2.0, "eg": 1.95}
SMALL_MOS = {"vto": 1.8, "kp": 0.1, "lambda_": 0.005, "rd": 0.8, "is_": 1e-13, "n": 1.2}
POWER_MOS = {"vto": 3.0, "kp": 28.0, "lambda_": 0.005, "rd": 0.031, "is_": 1e-13, "n": 1.2}
JFET = {"vto": -3.0, "beta": 1.2e-3, "lambda_": 0.01, "is_": 1e-14}

Span = tuple[float, float]


@dataclass(frozen=True, kw_only=True)
class Entry:
    """One circuit."""

    name: str
    fill: Callable[[Bench], None]
    expect: Mapping[str, Span] = field(default_factory=dict)
    helper: str = "plain"
    rests: int = 1
    held: tuple[str, ...] = ()

    def bench(self, temperature_c: float = 27.0) -> Bench:
        """The filled bench."""
        b = Bench(temperature_c)
        self.fill(b)
        return b


SIXTY: list[Entry] = []


def circuit(
    helper: str = "plain", rests: int = 1, held: tuple[str, ...] = (), **expect: Span
) -> Callable[[Callable[[Bench], None]], Callable[[Bench], None]]:
    """Add a function's circuit to the sixty."""

    def add(fill: Callable[[Bench], None]) -> Callable[[Bench], None]:
        name = fill.__name__.removeprefix("_")
        SIXTY.append(Entry(name=name, fill=fill, expect=expect, helper=helper, rests=rests, held=held))
        return fill

    return add


def _bias(b: Bench, k: str, r1: float, r2: float, base: str) -> None:
    b.r(f"RA{k}", "vcc", base, r1)
    b.r(f"RB{k}", base, "0", r2)


# --- one transistor, over the decades -------------------------------------------------------------------------
@circuit(c=(5.5, 7.5))
def _common_emitter(b: Bench) -> None:
    b.v("V", "vcc", "0", 12.0)
    _bias(b, "1", 47e3, 10e3, "b")
    b.r("RC", "vcc", "c", 4.7e3)
    b.r("RE", "e", "0", 1.2e3)
    b.q("Q1", "c", "b", "e", **N)


@circuit(b=(-1e-5, 3e-5), c=(0.0, 1e-6))
def _supply_of_a_microvolt(b: Bench) -> None:
    b.v("V", "vcc", "0", 1e-6)
    b.r("RC", "vcc", "c", 1e4)
    b.r("RB", "vcc", "b", 1e5)
    b.q("Q1", "c", "b", "0", **N)


@circuit(c=(0.0, 1.0))
def _picoamperes(b: Bench) -> None:
    b.v("V", "vcc", "0", 1.0)
    b.r("RC", "vcc", "c", 1e11)
    b.r("RB", "vcc", "b", 1e12)
    b.q("Q1", "c", "b", "0", is_=1e-16, bf=100.0)


@circuit(e=(8.0, 9.5))
def _ten_amperes(b: Bench) -> None:
    b.v("V", "vcc", "0", 20.0)
    b.v("VB", "b", "0", 10.5)
    b.r("RL", "e", "0", 0.9)
    b.q("Q1", "vcc", "b", "e", **POWER)


@circuit(c=(100.0, 300.0))
def _four_hundred_volts(b: Bench) -> None:
    b.v("V", "vcc", "0", 400.0)
    _bias(b, "1", 1.5e6, 15e3, "b")
    b.r("RC", "vcc", "c", 68e3)
    b.r("RE", "e", "0", 1e3)
    b.q("Q1", "c", "b", "e", **HIGH)


@circuit(c=(0.0, 0.3))
def _hard_saturation(b: Bench) -> None:
    b.v("V", "vcc", "0", 24.0)
    b.r("RB", "vcc", "b", 1e3)
    b.r("RC", "vcc", "c", 1e3)
    b.q("Q1", "c", "b", "0", **N)


@circuit(c=(11.9, 12.0))
def _cut_off_by_negative_base(b: Bench) -> None:
    b.v("V", "vcc", "0", 12.0)
    b.v("VN", "n", "0", -5.0)
    b.r("RB", "n", "b", 10e3)
    b.r("RC", "vcc", "c", 1e3)
    b.q("Q1", "c", "b", "0", **N)


@circuit(b=(0.5, 6.0))
def _reverse_active(b: Bench) -> None:
    b.v("V", "vcc", "0", 5.0)
    b.r("RB", "vcc", "b", 100e3)
    b.r("RE", "vcc", "e", 1e3)
    b.q("Q1", "0", "b", "e", **N)


@circuit(c=(0.6, 6.0))
def _collector_feedback(b: Bench) -> None:
    b.v("V", "vcc", "0", 9.0)
    b.r("RC", "vcc", "c", 2.2e3)
    b.r("RB", "c", "b", 330e3)
    b.q("Q1", "c", "b", "0", **N)


@circuit(c=(-8.0, -4.0))
def _pnp_on_a_negative_rail(b: Bench) -> None:
    b.v("V", "vee", "0", -12.0)
    b.r("R1", "vee", "b", 47e3)
    b.r("R2", "b", "0", 10e3)
    b.r("RC", "vee", "c", 4.7e3)
    b.r("RE", "e", "0", 1.2e3)
    b.q("Q1", "c", "b", "e", pnp=True, **N)


# --- Darlingtons and followers -------------------------------------------------------------------------------
def _chain(b: Bench, count: int, load: float) -> None:
    b.v("V", "vcc", "0", 20.0)
    b.v("VB", "b0", "0", 12.0)
    for k in range(count):
        b.q(f"Q{k}", "vcc", f"b{k}", f"b{k + 1}", **(POWER if k == count - 1 else N))
        b.r(f"RP{k}", f"b{k + 1}", "0", load if k == count - 1 else 1e5)


for _count in (2, 3, 4, 6):
    circuit(**{f"b{_count}": (12.0 - 0.95 * _count, 12.0 - 0.45 * _count)})(
        type("F", (), {"__name__": f"darlington_of_{_count}", "__call__": lambda _s, b, n=_count: _chain(b, n, 50.0)})()
    )


@circuit(c=(0.6, 1.8))
def _darlington_switch(b: Bench) -> None:
    b.v("V", "vcc", "0", 12.0)
    b.r("RB", "vcc", "b", 22e3)
    b.q("Q1", "c", "b", "m", **N)
    b.q("Q2", "c", "m", "0", **POWER)
    b.r("RX", "m", "0", 1e3)
    b.r("RL", "vcc", "c", 6.0)


@circuit(e=(4.5, 7.5))
def _complementary_feedback_pair(b: Bench) -> None:
    b.v("V", "vcc", "0", 15.0)
    _bias(b, "1", 100e3, 100e3, "b")
    b.q("Q1", "x", "b", "e", **N)
    b.q("Q2", "e", "x", "vcc", pnp=True, **POWER)
    b.r("RX", "vcc", "x", 1e3)
    b.r("RL", "e", "0", 100.0)


@circuit(e=(5.0, 9.0))
def _bootstrapped_follower(b: Bench) -> None:
    b.v("V", "vcc", "0", 15.0)
    _bias(b, "1", 47e3, 56e3, "m")
    b.r("R3", "m", "b", 100e3)
    b.c("CB", "m", "e", 10e-6)
    b.r("RE", "e", "0", 4.7e3)
    b.q("Q1", "vcc", "b", "e", **N)


# --- mirrors and current sources ------------------------------------------------------------------------------
def _mirror(b: Bench, outputs: int, v: float, r: float, load: float) -> None:
    b.v("V", "vcc", "0", v)
    b.r("RR", "vcc", "a", r)
    b.q("Q0", "a", "a", "0", **N)
    for k in range(outputs):
        b.q(f"Q{k + 1}", f"o{k}", "a", "0", **N)
        b.r(f"RL{k}", "vcc", f"o{k}", load)


@circuit(o0=(1.0, 9.0))
def _simple_mirror(b: Bench) -> None:
    _mirror(b, 1, 10.0, 10e3, 5e3)


@circuit(o9=(1.0, 9.0))
def _mirror_of_ten(b: Bench) -> None:
    _mirror(b, 10, 10.0, 10e3, 5e3)


@circuit(o0=(0.0, 10.0))
def _mirror_of_nanoamperes(b: Bench) -> None:
    _mirror(b, 1, 10.0, 10e9, 5e9)


@circuit(o=(3.0, 9.9))
def _widlar(b: Bench) -> None:
    b.v("V", "vcc", "0", 10.0)
    b.r("RR", "vcc", "a", 9.3e3)
    b.q("Q1", "a", "a", "0", **N)
    b.q("Q2", "o", "a", "e", **N)
    b.r("RE", "e", "0", 10e3)
    b.r("RL", "vcc", "o", 100e3)


@circuit(o=(2.0, 9.0))
def _wilson(b: Bench) -> None:
    b.v("V", "vcc", "0", 10.0)
    b.r("RR", "vcc", "a", 8.6e3)
    b.q("Q1", "a", "m", "0", **N)
    b.q("Q2", "m", "m", "0", **N)
    b.q("Q3", "o", "a", "m", **N)
    b.r("RL", "vcc", "o", 4e3)


@circuit(o=(2.0, 9.0))
def _cascoded_mirror(b: Bench) -> None:
    b.v("V", "vcc", "0", 10.0)
    b.r("RR", "vcc", "a", 8.6e3)
    b.q("Q1", "a", "a", "m", **N)
    b.q("Q2", "m", "m", "0", **N)
    b.q("Q3", "o", "a", "n", **N)
    b.q("Q4", "n", "m", "0", **N)
    b.r("RL", "vcc", "o", 4e3)


@circuit(o=(2.0, 11.0))
def _current_source_with_two_diodes(b: Bench) -> None:
    b.v("V", "vcc", "0", 12.0)
    b.r("RR", "vcc", "b", 10e3)
    b.d("D1", "b", "m", **DIODE)
    b.d("D2", "m", "0", **DIODE)
    b.q("Q1", "o", "b", "e", **N)
    b.r("RE", "e", "0", 560.0)
    b.r("RL", "vcc", "o", 2.2e3)


@circuit(o=(2.0, 11.0))
def _current_source_with_a_led(b: Bench) -> None:
    b.v("V", "vcc", "0", 12.0)
    b.r("RR", "vcc", "b", 4.7e3)
    b.d("D1", "b", "0", **LED)
    b.q("Q1", "o", "b", "e", **N)
    b.r("RE", "e", "0", 560.0)
    b.r("RL", "vcc", "o", 2.2e3)


@circuit(o=(0.0, 10.0))
def _feedback_current_source(b: Bench) -> None:
    b.v("V", "vcc", "0", 10.0)
    b.r("RS", "vcc", "a", 1e6)
    b.q("Q1", "a", "b", "0", **N)
    b.q("Q2", "o", "a", "b", **N)
    b.r("RE", "b", "0", 680.0)
    b.r("RL", "vcc", "o", 3.3e3)


# --- Zener references and regulators --------------------------------------------------------------------------
@circuit(z=(4.9, 5.3))
def _zener_reference(b: Bench) -> None:
    b.v("V", "vcc", "0", 12.0)
    b.r("R", "vcc", "z", 1.2e3)
    b.d("DZ", "0", "z", **ZENER)


@circuit(z=(1.0, 4.5))
def _zener_starved(b: Bench) -> None:
    b.v("V", "vcc", "0", 12.0)
    b.r("R", "vcc", "z", 12e6)
    b.d("DZ", "0", "z", **ZENER)


@circuit(z=(9.8, 10.7))
def _two_zeners_in_series(b: Bench) -> None:
    b.v("V", "vcc", "0", 24.0)
    b.r("R", "vcc", "z", 2.7e3)
    b.d("D1", "m", "z", **ZENER)
    b.d("D2", "0", "m", **ZENER)


@circuit(o=(4.2, 4.7))
def _zener_follower_regulator(b: Bench) -> None:
    b.v("V", "vcc", "0", 12.0)
    b.r("R", "vcc", "z", 680.0)
    b.d("DZ", "0", "z", **ZENER)
    b.q("Q1", "vcc", "z", "o", **POWER)
    b.r("RL", "o", "0", 15.0)


@circuit(o=(9.0, 14.0))
def _series_regulator_with_error_amplifier(b: Bench) -> None:
    b.v("V", "vcc", "0", 20.0)
    b.r("RB", "vcc", "b", 2.2e3)
    b.q("Q1", "vcc", "b", "m", **N)
    b.q("Q2", "vcc", "m", "o", **POWER)
    b.q("Q3", "b", "f", "z", **N)
    b.d("DZ", "0", "z", **ZENER)
    b.r("RZ", "o", "z", 1e3)
    b.r("R1", "o", "f", 10e3)
    b.r("R2", "f", "0", 10e3)
    b.r("RL", "o", "0", 50.0)


@circuit(o=(5.2, 6.3))
def _shunt_regulator(b: Bench) -> None:
    b.v("V", "vcc", "0", 15.0)
    b.r("R", "vcc", "o", 100.0)
    b.d("DZ", "b", "o", **ZENER)
    b.q("Q1", "o", "b", "0", **POWER)
    b.r("RB", "b", "0", 1e3)


# --- diodes ---------------------------------------------------------------------------------------------------
@circuit(a=(1.5, 2.3))
def _schottky_of_ten_amperes(b: Bench) -> None:
    b.i("I", "0", "a", 10.0)
    b.d("D1", "a", "0", **SCHOTTKY)


@circuit(a=(6.0, 9.0))
def _string_of_four_leds(b: Bench) -> None:
    b.v("V", "vcc", "0", 12.0)
    b.r("R", "vcc", "a", 330.0)
    for k, (anode, cathode) in enumerate((("a", "m"), ("m", "n"), ("n", "p"), ("p", "0"))):
        b.d(f"D{k}", anode, cathode, **LED)


@circuit(p=(10.0, 16.0))
def _bridge(b: Bench) -> None:
    b.v("V", "x", "y", 15.0)
    b.r("RG", "y", "0", 1e6)
    b.d("D1", "x", "p", **DIODE)
    b.d("D2", "y", "p", **DIODE)
    b.d("D3", "0", "x", **DIODE)
    b.d("D4", "0", "y", **DIODE)
    b.r("RL", "p", "0", 1e3)


@circuit(a=(-5.0, 0.0))
def _clamp_between_rails(b: Bench) -> None:
    b.v("V", "vcc", "0", 5.0)
    b.v("VI", "in", "0", -30.0)
    b.r("R", "in", "a", 1e3)
    b.d("D1", "a", "vcc", **DIODE)
    b.d("D2", "0", "a", **DIODE)


# --- complementary outputs ------------------------------------------------------------------------------------
@circuit(out=(-1.5, 1.5))
def _class_b_with_vbe_multiplier(b: Bench) -> None:
    b.v("VP", "vcc", "0", 20.0)
    b.v("VN", "vee", "0", -20.0)
    b.r("R1", "vcc", "top", 2.2e3)
    b.q("Q1", "top", "x", "low", **N)
    b.r("RX1", "top", "x", 1.2e3)
    b.r("RX2", "x", "low", 1e3)
    b.r("R2", "low", "vee", 2.2e3)
    b.q("Q2", "vcc", "top", "ep", **POWER)
    b.q("Q3", "vee", "low", "en", pnp=True, **POWER)
    b.r("RE1", "ep", "out", 0.22)
    b.r("RE2", "en", "out", 0.22)
    b.r("RL", "out", "0", 8.0)


@circuit(out=(-3.0, 3.0))
def _triple_darlington_output(b: Bench) -> None:
    b.v("VP", "vcc", "0", 45.0)
    b.v("VN", "vee", "0", -45.0)
    b.r("R1", "vcc", "t0", 10e3)
    b.q("QM", "t0", "x", "l0", **N)
    b.r("RX1", "t0", "x", 3.9e3)
    b.r("RX2", "x", "l0", 820.0)
    b.r("R2", "l0", "vee", 10e3)
    for k in range(3):
        b.q(f"QT{k}", "vcc", f"t{k}", f"t{k + 1}", **(POWER if k == 2 else N))
        b.q(f"QL{k}", "vee", f"l{k}", f"l{k + 1}", pnp=True, **(POWER if k == 2 else N))
        if k < 2:
            b.r(f"RB{k}", f"t{k + 1}", f"l{k + 1}", 330.0 * 10.0 ** (1 - k))
    b.r("RE1", "t3", "out", 0.33)
    b.r("RE2", "l3", "out", 0.33)
    b.r("RL", "out", "0", 8.0)


@circuit(out=(-0.3, 0.3))
def _power_amplifier_of_ten(b: Bench) -> None:
    """Differential input with a mirror, voltage stage, VBE multiplier, drivers and outputs under feedback."""
    b.v("VP", "vcc", "0", 30.0)
    b.v("VN", "vee", "0", -30.0)
    b.r("RIN", "in", "0", 10e3)
    b.r("RT", "tail", "vee", 15e3)
    b.q("Q1", "c1", "in", "tail", **N)
    b.q("Q2", "c2", "fb", "tail", **N)
    b.q("Q3", "c2", "c2", "e3", pnp=True, **N)
    b.q("Q4", "c1", "c2", "e4", pnp=True, **N)
    b.r("RM1", "vcc", "e3", 100.0)
    b.r("RM2", "vcc", "e4", 100.0)
    b.q("Q5", "top", "c1", "e5", pnp=True, **N)
    b.r("R5", "vcc", "e5", 100.0)
    b.q("Q6", "top", "x", "low", **N)
    b.r("RX1", "top", "x", 2.2e3)
    b.r("RX2", "x", "low", 1e3)
    b.r("R6", "low", "vee", 4.7e3)
    b.q("Q7", "vcc", "top", "d1", **N)
    b.q("Q8", "vee", "low", "d2", pnp=True, **N)
    b.r("RD", "d1", "d2", 150.0)
    b.q("Q9", "vcc", "d1", "o1", **POWER)
    b.q("Q10", "vee", "d2", "o2", pnp=True, **POWER)
    b.r("RO1", "o1", "out", 0.22)
    b.r("RO2", "o2", "out", 0.22)
    b.r("RL", "out", "0", 8.0)
    b.r("RF1", "out", "fb", 10e3)
    b.r("RF2", "fb", "g", 470.0)
    b.c("CF", "g", "0", 100e-6)


@circuit(out=(5.0, 10.0))
def _bootstrapped_output_stage(b: Bench) -> None:
    """Voltage stage whose collector load is tied to the output by a capacitor; complementary followers; one supply."""
    b.v("V", "vcc", "0", 15.0)
    b.r("R1", "vcc", "m", 680.0)
    b.r("R2", "m", "top", 2.2e3)
    b.c("CB", "m", "out", 100e-6)
    b.d("D1", "top", "x", **DIODE)
    b.d("D2", "x", "low", **DIODE)
    b.q("Q1", "low", "b", "0", **N)
    b.q("Q2", "vcc", "top", "e2", **POWER)
    b.q("Q3", "0", "low", "e3", pnp=True, **POWER)
    b.r("RE2", "e2", "out", 0.47)
    b.r("RE3", "e3", "out", 0.47)
    b.r("RF", "out", "b", 47e3)
    b.r("RB", "b", "0", 4.7e3)
    b.c("CO", "out", "load", 1e-3)
    b.r("RL", "load", "0", 8.0)


@circuit(b=(3.0, 7.0))
def _bootstrapped_darlington_input(b: Bench) -> None:
    b.v("V", "vcc", "0", 12.0)
    _bias(b, "1", 220e3, 220e3, "m")
    b.r("R3", "m", "b", 1e6)
    b.c("CB", "m", "e", 10e-6)
    b.q("Q1", "vcc", "b", "n", **N)
    b.q("Q2", "vcc", "n", "e", **N)
    b.r("RN", "n", "e", 100e3)
    b.r("RE", "e", "0", 4.7e3)


# --- amplifiers of many ---------------------------------------------------------------------------------------
@circuit(c2=(1.0, 11.0))
def _direct_coupled_pair_with_feedback(b: Bench) -> None:
    b.v("V", "vcc", "0", 12.0)
    b.r("R1", "vcc", "c1", 100e3)
    b.q("Q1", "c1", "b", "0", **N)
    b.q("Q2", "c2", "c1", "e2", **N)
    b.r("RC2", "vcc", "c2", 4.7e3)
    b.r("RE2", "e2", "0", 1e3)
    b.r("RF", "e2", "b", 100e3)


@circuit(c3=(0.5, 11.5))
def _three_stages_with_feedback(b: Bench) -> None:
    b.v("V", "vcc", "0", 12.0)
    b.r("R1", "vcc", "c1", 47e3)
    b.q("Q1", "c1", "b", "e1", **N)
    b.r("RE1", "e1", "0", 220.0)
    b.q("Q2", "c2", "c1", "e2", **N)
    b.r("R2", "vcc", "c2", 10e3)
    b.r("RE2", "e2", "0", 1.5e3)
    b.q("Q3", "vcc", "c2", "c3", **N)
    b.r("RE3", "c3", "0", 1e3)
    b.r("RF", "e2", "b", 47e3)
    b.r("RB", "b", "0", 100e3)


@circuit(out=(-6.0, 6.0))
def _amplifier_of_forty(b: Bench) -> None:
    """Ten cells of a differential pair on its own current source with a follower, each under feedback, in a chain."""
    b.v("VP", "vcc", "0", 15.0)
    b.v("VN", "vee", "0", -15.0)
    b.r("RI", "s0", "0", 10e3)
    for k in range(10):
        b.q(f"QA{k}", f"p{k}", f"s{k}", f"t{k}", **N)
        b.q(f"QB{k}", f"n{k}", f"f{k}", f"t{k}", **N)
        b.r(f"RP{k}", "vcc", f"p{k}", 10e3)
        b.r(f"RN{k}", "vcc", f"n{k}", 10e3)
        b.q(f"QT{k}", f"t{k}", "m", "vee", **N)
        b.q(f"QF{k}", "vcc", f"n{k}", f"s{k + 1}", **N)
        b.r(f"RF{k}", f"s{k + 1}", "vee", 10e3)
        b.r(f"R1{k}", f"s{k + 1}", f"f{k}", 22e3)
        b.r(f"R2{k}", f"f{k}", "0", 2.2e6)
    b.r("RM", "0", "m", 14e3)
    b.d("DM", "m", "vee", is_=2e-14)
    b.r("RL", "s10", "out", 100.0)
    b.r("RO", "out", "0", 10e3)


@circuit(out=(-0.1, 0.1))
def _operational_amplifier_of_seventeen(b: Bench) -> None:
    """Darlington-input pair, cascoded mirror load, Wilson current source, level shift, Darlington voltage stage and a
    protected output, all inside one loop from the output straight to the inverting input."""
    b.v("VP", "vcc", "0", 15.0)
    b.v("VN", "vee", "0", -15.0)
    b.r("RI", "in", "0", 1e3)
    for side, base in (("p", "in"), ("n", "out")):
        b.q(f"QA{side}", "vee", base, f"d{side}", pnp=True, **N)
        b.r(f"RD{side}", "t", f"d{side}", 220e3)
        b.q(f"QB{side}", f"k{side}", f"d{side}", "t", pnp=True, **N)
    for side, base in (("p", "kp"), ("n", "kp")):
        b.q(f"QM{side}", f"k{side}", base, f"e{side}", **N)
        b.r(f"RM{side}", f"e{side}", "vee", 470.0)
    b.r("RR", "w", "0", 27e3)
    b.q("QW1", "w", "x", "vcc", pnp=True, **N)
    b.q("QW2", "x", "x", "vcc", pnp=True, **N)
    b.q("QW3", "t", "w", "x", pnp=True, **N)
    b.q("QS", "s", "x", "vcc", pnp=True, **N)
    b.q("QV1", "low", "kn", "v", **N)
    b.r("RV", "v", "vee", 47e3)
    b.q("QV2", "low", "v", "ev", **N)
    b.r("RE", "ev", "vee", 47.0)
    b.q("QX", "s", "y", "low", **N)
    b.r("RY1", "s", "y", 4.7e3)
    b.r("RY2", "y", "low", 4.7e3)
    b.q("QO1", "vcc", "s", "p", **POWER)
    b.q("QO2", "vee", "low", "q", pnp=True, **POWER)
    b.r("RO1", "p", "out", 22.0)
    b.r("RO2", "q", "out", 22.0)
    b.q("QL1", "s", "p", "out", **N)
    b.q("QL2", "low", "q", "out", pnp=True, **N)
    b.c("CC", "kn", "low", 30e-12)
    b.r("RL", "out", "0", 2e3)


@circuit(out=(-1.0, 1.0))
def _long_tailed_pair_with_mirror_load(b: Bench) -> None:
    b.v("VP", "vcc", "0", 10.0)
    b.v("VN", "vee", "0", -10.0)
    b.q("Q1", "a", "0", "t", **N)
    b.q("Q2", "o", "out", "t", **N)
    b.q("Q3", "a", "a", "vcc", pnp=True, **N)
    b.q("Q4", "o", "a", "vcc", pnp=True, **N)
    b.r("RT", "t", "vee", 10e3)
    b.q("Q5", "vcc", "o", "out", **N)
    b.r("RL", "out", "vee", 10e3)


# --- latches, triggers, multivibrators ------------------------------------------------------------------------
@circuit(rests=2, held=("c1", "c2"))
def _flip_flop(b: Bench) -> None:
    b.v("V", "vcc", "0", 5.0)
    for k, other in ((1, 2), (2, 1)):
        b.r(f"RC{k}", "vcc", f"c{k}", 1e3)
        b.r(f"RB{k}", f"c{other}", f"b{k}", 10e3)
        b.q(f"Q{k}", f"c{k}", f"b{k}", "0", **N)


def _schmitt(b: Bench, volts: float) -> None:
    b.v("V", "vcc", "0", 12.0)
    b.v("VI", "in", "0", volts)
    b.r("RI", "in", "b1", 10e3)
    b.q("Q1", "c1", "b1", "e", **N)
    b.q("Q2", "c2", "b2", "e", **N)
    b.r("RC1", "vcc", "c1", 4.7e3)
    b.r("RC2", "vcc", "c2", 1e3)
    b.r("RX", "c1", "b2", 4.7e3)
    b.r("RY", "b2", "0", 10e3)
    b.r("RE", "e", "0", 470.0)


@circuit(rests=2, held=("b1", "b2"))
def _schmitt_pair_between_its_thresholds(b: Bench) -> None:
    _schmitt(b, 2.9)


@circuit(c2=(2.0, 6.0))
def _schmitt_pair_below(b: Bench) -> None:
    _schmitt(b, 0.5)


@circuit(c2=(11.9, 12.0))
def _schmitt_pair_above(b: Bench) -> None:
    _schmitt(b, 6.0)


@circuit(c1=(0.0, 0.3), c2=(3.5, 5.0))
def _flip_flop_held_set(b: Bench) -> None:
    _flip_flop(b)
    b.r("RS", "vcc", "b1", 4.7e3)
    b.q("Q3", "b2", "s", "0", **N)
    b.r("R3", "vcc", "s", 10e3)


@circuit(c1=(0.0, 0.4), c2=(0.0, 0.4))
def _multivibrator_with_both_on(b: Bench) -> None:
    b.v("V", "vcc", "0", 9.0)
    for k, other in ((1, 2), (2, 1)):
        b.r(f"RC{k}", "vcc", f"c{k}", 1e3)
        b.r(f"RB{k}", "vcc", f"b{k}", 47e3)
        b.c(f"C{k}", f"c{other}", f"b{k}", 1e-7)
        b.q(f"Q{k}", f"c{k}", f"b{k}", "0", **N)


@circuit(rests=2, held=("g", "b"))
def _thyristor_pair(b: Bench) -> None:
    b.v("V", "vcc", "0", 12.0)
    b.r("RA", "vcc", "a", 1e3)
    b.q("Q1", "g", "b", "a", pnp=True, **N)
    b.q("Q2", "b", "g", "0", **N)
    b.r("RG", "g", "0", 10e3)
    b.r("RB", "a", "b", 10e3)


# --- field-effect transistors ---------------------------------------------------------------------------------
@circuit(d=(5.0, 14.0))
def _jfet_self_bias(b: Bench) -> None:
    b.v("V", "vcc", "0", 15.0)
    b.r("RG", "g", "0", 1e6)
    b.r("RD", "vcc", "d", 2.2e3)
    b.r("RS", "s", "0", 680.0)
    b.j("J1", "d", "g", "s", **JFET)


@circuit(a=(1.0, 14.0))
def _jfet_current_source(b: Bench) -> None:
    b.v("V", "vcc", "0", 15.0)
    b.j("J1", "vcc", "a", "s", **JFET)
    b.r("RS", "s", "a", 1e3)
    b.r("RL", "a", "0", 2.2e3)


@circuit(o=(10.0, 39.0))
def _jfet_cascode_current_source(b: Bench) -> None:
    b.v("V", "vcc", "0", 40.0)
    b.j("J1", "m", "0", "s", **JFET)
    b.r("RS", "s", "0", 2.2e3)
    b.j("J2", "o", "0", "m", vto=-6.0, beta=1e-3, lambda_=0.01)
    b.r("RL", "vcc", "o", 10e3)


@circuit(s=(0.0, 4.0))
def _jfet_source_follower_on_a_current_source(b: Bench) -> None:
    b.v("VP", "vcc", "0", 12.0)
    b.v("VN", "vee", "0", -12.0)
    b.r("RG", "g", "0", 1e9)
    b.j("J1", "vcc", "g", "s", **JFET)
    b.q("Q1", "s", "b", "e", **N)
    b.r("R1", "0", "b", 10e3)
    b.r("R2", "b", "vee", 2.2e3)
    b.r("RE", "e", "vee", 1e3)


@circuit(g=(-1e-3, 1e-3))
def _jfet_gate_of_ten_gigohm(b: Bench) -> None:
    b.v("V", "vcc", "0", 9.0)
    b.r("RG", "g", "0", 1e10)
    b.r("RD", "vcc", "d", 100e3)
    b.r("RS", "s", "0", 33e3)
    b.j("J1", "d", "g", "s", **JFET)


@circuit(d=(17.0, 22.0))
def _jfet_gate_in_breakdown(b: Bench) -> None:
    """The drain rises until the gate's junction carries what the channel, pinched off, does not."""
    b.v("V", "vcc", "0", 60.0)
    b.v("VG", "g", "0", -10.0)
    b.r("RD", "vcc", "d", 33e3)
    b.j("J1", "d", "g", "0", **JFET, bv=30.0, ibv=1e-3, isr=1e-12, alpha=1e-4, vk=50.0)


@circuit(d=(0.0, 0.6))
def _mosfet_load_switch_on(b: Bench) -> None:
    b.v("V", "vcc", "0", 24.0)
    b.v("VG", "g", "0", 10.0)
    b.r("RL", "vcc", "d", 2.4)
    b.m("M1", "d", "g", "0", **POWER_MOS)


@circuit(d=(23.9, 24.0))
def _mosfet_load_switch_off(b: Bench) -> None:
    b.v("V", "vcc", "0", 24.0)
    b.r("RG", "g", "0", 100e3)
    b.r("RL", "vcc", "d", 2.4)
    b.m("M1", "d", "g", "0", **POWER_MOS)


@circuit(load=(11.0, 12.0))
def _high_side_pmos_switch_with_npn_driver(b: Bench) -> None:
    b.v("V", "vcc", "0", 12.0)
    b.v("VL", "in", "0", 3.3)
    b.r("RB", "in", "b", 10e3)
    b.q("Q1", "c", "b", "0", **N)
    b.r("RG", "vcc", "g", 10e3)
    b.r("RX", "g", "c", 1e3)
    b.m("M1", "load", "g", "vcc", p=True, **POWER_MOS)
    b.r("RL", "load", "0", 12.0)


@circuit(load=(4.7, 5.0))
def _high_side_pnp_switch(b: Bench) -> None:
    b.v("V", "vcc", "0", 5.0)
    b.v("VL", "in", "0", 3.3)
    b.r("R1", "in", "b", 4.7e3)
    b.q("Q1", "c", "b", "0", **N)
    b.r("R2", "c", "g", 470.0)
    b.r("R3", "g", "vcc", 4.7e3)
    b.q("Q2", "load", "g", "vcc", pnp=True, **POWER)
    b.r("RL", "load", "0", 47.0)


@circuit(load=(0.0, 1e-3))
def _high_side_pnp_switch_off(b: Bench) -> None:
    b.v("V", "vcc", "0", 5.0)
    b.v("VL", "in", "0", 0.0)
    b.r("R1", "in", "b", 4.7e3)
    b.q("Q1", "c", "b", "0", **N)
    b.r("R2", "c", "g", 470.0)
    b.r("R3", "g", "vcc", 4.7e3)
    b.q("Q2", "load", "g", "vcc", pnp=True, **POWER)
    b.r("RL", "load", "0", 47.0)


@circuit(out=(11.0, 12.0))
def _reverse_polarity_protection(b: Bench) -> None:
    b.v("V", "in", "0", 12.0)
    b.m("M1", "in", "0", "out", p=True, **POWER_MOS)
    b.r("RL", "out", "0", 10.0)


@circuit(helper="conductance", a=(-13.0, -0.5))
def _body_diode_carries_ten_amperes(b: Bench) -> None:
    b.i("I", "a", "0", 10.0)
    b.m("M1", "a", "0", "0", **{**POWER_MOS, "vto": 3.0})


@circuit(d=(3.0, 4.5))
def _drain_feedback(b: Bench) -> None:
    b.v("V", "vcc", "0", 12.0)
    b.r("RD", "vcc", "d", 2e3)
    b.r("RG", "d", "g", 10e6)
    b.m("M1", "d", "g", "0", vto=3.0, kp=15e-3)


@circuit(o=(1.0, 9.0))
def _mosfet_mirror(b: Bench) -> None:
    b.v("V", "vcc", "0", 10.0)
    b.r("RR", "vcc", "a", 7.5e3)
    b.m("M1", "a", "a", "0", **SMALL_MOS)
    b.m("M2", "o", "a", "0", **SMALL_MOS)
    b.r("RL", "vcc", "o", 4.7e3)


@circuit(helper="conductance", out=(4.9, 5.0))
def _complementary_inverter_low_in(b: Bench) -> None:
    b.v("V", "vcc", "0", 5.0)
    b.v("VI", "in", "0", 0.0)
    b.m("M1", "out", "in", "0", **SMALL_MOS)
    b.m("M2", "out", "in", "vcc", p=True, **SMALL_MOS)
    b.r("RL", "out", "0", 1e6)


@circuit(out=(1.0, 4.0))
def _complementary_inverter_biased_by_itself(b: Bench) -> None:
    b.v("V", "vcc", "0", 5.0)
    b.m("M1", "out", "in", "0", **SMALL_MOS)
    b.m("M2", "out", "in", "vcc", p=True, **SMALL_MOS)
    b.r("RF", "out", "in", 1e7)


@circuit(rests=2, held=("o1", "o2"))
def _latch_of_two_inverters(b: Bench) -> None:
    b.v("V", "vcc", "0", 5.0)
    for k, other in ((1, 2), (2, 1)):
        b.m(f"MN{k}", f"o{k}", f"o{other}", "0", **SMALL_MOS)
        b.m(f"MP{k}", f"o{k}", f"o{other}", "vcc", p=True, **SMALL_MOS)
        b.r(f"RL{k}", f"o{k}", "0", 1e6)


@circuit(out=(200.0, 400.0))
def _depletion_mosfet_start_up_of_four_hundred_volts(b: Bench) -> None:
    b.v("V", "hv", "0", 400.0)
    b.m("M1", "hv", "0", "s", vto=-2.5, kp=20e-3, lambda_=0.001)
    b.r("RS", "s", "0", 1e3)
    b.r("RD", "hv", "out", 10e3)
    b.m("M2", "out", "s", "0", vto=1.5, kp=5e-3)


@circuit(out=(-2.0, 2.0))
def _mosfet_power_follower_of_ten_amperes(b: Bench) -> None:
    b.v("VP", "vcc", "0", 30.0)
    b.v("VN", "vee", "0", -30.0)
    b.r("R1", "vcc", "gp", 4.7e3)
    b.r("RX", "gp", "gn", 2.2e3)
    b.r("R2", "gn", "vee", 4.7e3)
    b.m("M1", "vcc", "gp", "sp", **POWER_MOS)
    b.m("M2", "vee", "gn", "sn", p=True, **POWER_MOS)
    b.r("RS1", "sp", "out", 0.47)
    b.r("RS2", "sn", "out", 0.47)
    b.r("RL", "out", "0", 4.0)


@circuit(d=(8.0, 14.0))
def _jfet_and_bipolar_cascode(b: Bench) -> None:
    b.v("V", "vcc", "0", 15.0)
    _bias(b, "1", 100e3, 47e3, "b")
    b.r("RD", "vcc", "d", 1e3)
    b.q("Q1", "d", "b", "m", **N)
    b.j("J1", "m", "0", "s", **JFET)
    b.r("RS", "s", "0", 680.0)


@circuit(o=(-1e-4, 5.0))
def _jfets_in_series_both_pinched(b: Bench) -> None:
    b.v("V", "vcc", "0", 5.0)
    b.v("VG", "g", "0", -6.0)
    b.j("J1", "vcc", "g", "o", **JFET)
    b.j("J2", "o", "g", "0", **JFET)
    b.r("RL", "o", "0", 1e9)
