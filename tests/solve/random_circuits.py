"""Random circuits of resistors and transistors, as hypothesis strategies."""

from __future__ import annotations

from dataclasses import dataclass

from hypothesis import strategies as st

from tests.bench import Bench
from tests.reference.boards import NPN, PNP

RAILS = ("vcc", "vee", "0")
SUPPLY = {"vcc": 12.0, "vee": -9.0}
IDEAL: dict[str, float] = {"bf": 120.0, "vaf": 60.0, "is_": 3e-15}


@dataclass(frozen=True)
class Drawn:
    """What was drawn: resistors (a, b, ohm), transistors (c, b, e, kind); each net is tied to a rail by a resistor."""

    nets: tuple[str, ...]
    resistors: tuple[tuple[str, str, float], ...]
    transistors: tuple[tuple[str, str, str, str], ...]

    def onto(self, b: Bench, *, prefix: str = "", ohm: float = 1.0, rails: dict[str, float] | None = None) -> None:
        """Add everything to a bench; `ohm` scales all impedances, `prefix` all names but those of rails."""
        for rail, volt in (rails or SUPPLY).items():
            if f"V{rail}" not in [*b._tables["v"].names]:
                b.v(f"V{rail}", rail, "0", volt)

        def net(name: str) -> str:
            return name if name in RAILS else prefix + name

        for j, (one, other, value) in enumerate(self.resistors):
            b.r(f"{prefix}R{j}", net(one), net(other), value * ohm)
        for j, (c, base, e, kind) in enumerate(self.transistors):
            given = {"npn": NPN, "pnp": PNP, "ideal": IDEAL}[kind]
            b.q(f"{prefix}Q{j}", net(c), net(base), net(e), pnp=kind == "pnp", **scaled(given, ohm))


def scaled(given: dict[str, float], ohm: float) -> dict[str, float]:
    """Model parameters at `ohm` times the impedance: currents divided, lead resistances multiplied."""
    by = {"is_": -1, "ise": -1, "isc": -1, "ikf": -1, "ikr": -1, "irb": -1, "rb": 1, "rbm": 1, "re": 1, "rc": 1}
    by |= {"cje": -1, "cjc": -1, "cjs": -1, "itf": -1}
    full = {"is_": 1e-14, **given}
    return {key: value * ohm ** by.get(key, 0) for key, value in full.items()}


def ohms() -> st.SearchStrategy[float]:
    """100 ohm to 1 Mohm, two digits."""
    return st.builds(
        lambda m, e: m * 10.0**e, st.integers(10, 99).map(lambda m: m / 10.0), st.integers(2, 5)
    )


@st.composite
def circuits(draw: st.DrawFn, most_devices: int = 3) -> Drawn:
    """Up to `most_devices` transistors on nets that all have a resistor to a rail."""
    count = draw(st.integers(3, 6))
    nets = tuple(f"n{j}" for j in range(count))
    resistors = [(net, draw(st.sampled_from(RAILS)), draw(ohms())) for net in nets]
    for _ in range(draw(st.integers(0, 4))):
        one, other = draw(st.permutations(nets))[:2]
        resistors.append((one, other, draw(ohms())))
    transistors = []
    for _ in range(draw(st.integers(1, most_devices))):
        c, b, e = draw(st.permutations(nets))[:3]
        c = draw(st.sampled_from([c, c, "vcc"]))
        b = draw(st.sampled_from([b, b, b, "0"]))
        transistors.append((c, b, e, draw(st.sampled_from(["npn", "pnp", "ideal"]))))
    return Drawn(nets=nets, resistors=tuple(resistors), transistors=tuple(transistors))
