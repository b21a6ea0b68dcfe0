"""Random circuits of resistors and all kinds of semiconductors, as hypothesis strategies."""

from __future__ import annotations

from dataclasses import dataclass

from hypothesis import strategies as st

from tests.bench import BIPOLAR, DIODE, JFET, MOSFET, Bench, both_diodes
from tests.reference.boards import NPN, PNP, SIGNAL_DIODE
from tests.reference.mixed_boards import NJF, NMOS, PJF, PMOS, SOFT_ZENER
from tests.solve.random_circuits import RAILS, SUPPLY, ohms

MODELS: dict[str, dict[str, float]] = {
    "npn": NPN, "pnp": PNP, "njf": NJF, "pjf": PJF, "nmos": NMOS, "pmos": PMOS, "diode": SIGNAL_DIODE,
    "zener": SOFT_ZENER,
}  # fmt: skip
CURRENTS = {"is", "isd", "iss", "ise", "isc", "isr", "ikf", "ikr", "irb", "itf", "ibv", "beta", "kp"}
CURRENTS_AND_CHARGES = CURRENTS | {"cje", "cjc", "cjs", "cjo", "cgs", "cgd", "cbd", "cbs", "cgso", "cgdo", "cgbo"}
LEADS = {"rb", "rbm", "rc", "re", "rs", "rd"}
DEFAULTS = {"q": BIPOLAR, "j": JFET, "m": MOSFET, "d": DIODE}


def scaled(letter: str, given: dict[str, float], ohm: float) -> dict[str, float]:
    """Model parameters at `ohm` times the impedance: currents (of a channel its transconductance) and capacitances
    divided, leads multiplied."""
    written = both_diodes(given) if letter == "m" else given
    full = {**DEFAULTS[letter], **{key.rstrip("_"): float(value) for key, value in written.items()}}
    by = {**dict.fromkeys(CURRENTS_AND_CHARGES, 1.0 / ohm), **dict.fromkeys(LEADS, ohm)}
    if letter == "q":
        full.setdefault("rbm", full["rb"])
    return {key: value * by.get(key, 1.0) for key, value in full.items() if key != "channel"}


@dataclass(frozen=True)
class Mixed:
    """Resistors (a, b, ohm) and devices (kind, nets); each net is tied to a rail by a resistor."""

    nets: tuple[str, ...]
    resistors: tuple[tuple[str, str, float], ...]
    devices: tuple[tuple[str, tuple[str, ...]], ...]

    def bench(self, *, ohm: float = 1.0, rails: dict[str, object] | None = None, celsius: float = 27.0) -> Bench:
        """The filled bench; `ohm` scales all impedances."""
        b = Bench(celsius)
        for rail, volt in (rails or SUPPLY).items():
            b.v(f"V{rail}", rail, "0", volt)  # type: ignore[arg-type]
        for j, (one, other, value) in enumerate(self.resistors):
            b.r(f"R{j}", one, other, value * ohm)
        for j, (kind, nets) in enumerate(self.devices):
            negative = kind.startswith("p")
            if kind in ("npn", "pnp"):
                b.q(f"Q{j}", *nets[:3], pnp=negative, **scaled("q", MODELS[kind], ohm))
            elif kind in ("njf", "pjf"):
                b.j(f"J{j}", *nets[:3], p=negative, **scaled("j", MODELS[kind], ohm))
            elif kind in ("nmos", "pmos"):
                b.m(f"M{j}", *nets[:3], "vcc" if negative else "vee", p=negative, **scaled("m", MODELS[kind], ohm))
            else:
                b.d(f"D{j}", *nets[:2], **scaled("d", MODELS[kind], ohm))
        return b


@st.composite
def mixed(draw: st.DrawFn) -> Mixed:
    """One to four devices of any kind on nets that all have a resistor to a rail; MOSFET bodies on the outer rails."""
    nets = tuple(f"n{j}" for j in range(draw(st.integers(3, 6))))
    resistors = [(net, draw(st.sampled_from(RAILS)), draw(ohms())) for net in nets]
    for _ in range(draw(st.integers(0, 3))):
        one, other = draw(st.permutations(nets))[:2]
        resistors.append((one, other, draw(ohms())))
    devices = []
    for _ in range(draw(st.integers(1, 4))):
        kind = draw(st.sampled_from(tuple(MODELS)))
        one, other, third = draw(st.permutations(nets))[:3]
        devices.append((kind, (draw(st.sampled_from([one, one, "vcc"])), draw(st.sampled_from([other, "0"])), third)))
    return Mixed(nets=nets, resistors=tuple(resistors), devices=tuple(devices))
