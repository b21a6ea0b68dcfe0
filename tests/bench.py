"""A terse way to write circuits in tests: parts with nets and numbers, no netlist reader in between.

    b = Bench(temperature_c=25.0)
    b.v("VCC", "vcc", "0", 10.0)
    b.r("RC", "vcc", "c", [3.6e3, 3.3e3])       # a list gives one value a scenario
    b.q("Q1", "c", "b", "e", bf=100.0, vaf=80.0)
    point = operating_point(b.circuit())

Parameters not given are those of an ideal device (no Early effect, no leakage, no charge, no lead resistance);
`tnom_c` is the bench's own temperature, so that a parameter means what it says there.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field

import numpy as np

from checker.circuit.types import Branches, Circuit, Couplings, Devices, Scenario
from checker.constants import ZERO_CELSIUS_K

Number = float | Sequence[float]
INF = float("inf")

BIPOLAR: Mapping[str, float] = {
    "is": 1e-14, "bf": 100.0, "nf": 1.0, "vaf": INF, "ikf": INF, "ise": 0.0, "ne": 1.5,
    "br": 1.0, "nr": 1.0, "var": INF, "ikr": INF, "isc": 0.0, "nc": 2.0,
    "rb": 0.0, "irb": INF, "rbm": 0.0, "re": 0.0, "rc": 0.0,
    "cje": 0.0, "vje": 0.75, "mje": 0.33, "tf": 0.0, "xtf": 0.0, "vtf": INF, "itf": 0.0,
    "cjc": 0.0, "vjc": 0.75, "mjc": 0.33, "xcjc": 1.0, "tr": 0.0,
    "cjs": 0.0, "vjs": 0.75, "mjs": 0.0, "xtb": 0.0, "eg": 1.11, "xti": 3.0, "fc": 0.5,
}  # fmt: skip
DIODE: Mapping[str, float] = {
    "is": 1e-14, "n": 1.0, "rs": 0.0, "cjo": 0.0, "vj": 1.0, "m": 0.5, "tt": 0.0, "eg": 1.11, "xti": 3.0,
    "bv": INF, "ibv": 1e-3, "fc": 0.5, "isr": 0.0, "nr": 2.0, "ikf": INF, "nbv": 1.0, "tbv1": 0.0,
}  # fmt: skip
JFET: Mapping[str, float] = {
    "vto": -2.0, "beta": 1e-3, "lambda": 0.0, "b": 1.0, "is": 1e-14, "n": 1.0, "rd": 0.0, "rs": 0.0,
    "cgs": 0.0, "cgd": 0.0, "pb": 1.0, "m": 0.5, "fc": 0.5, "vtotc": 0.0, "betatce": 0.0, "eg": 1.11, "xti": 3.0,
    "isr": 0.0, "nr": 2.0, "alpha": 0.0, "vk": 0.0, "bv": INF, "ibv": 1e-3, "nbv": 1.0,
}  # fmt: skip
MOSFET: Mapping[str, float] = {
    "vto": 2.0, "kp": 1e-3, "lambda": 0.0, "gamma": 0.0, "phi": 0.6, "channel": 1.0, "w": 1.0, "l": 1.0,
    "rd": 0.0, "rs": 0.0, "isd": 1e-14, "iss": 1e-14, "n": 1.0, "cbd": 0.0, "cbs": 0.0, "cbdsw": 0.0, "cbssw": 0.0,
    "pb": 0.8, "mj": 0.5, "mjsw": 0.5, "fc": 0.5, "cgso": 0.0, "cgdo": 0.0, "cgbo": 0.0, "cox": 0.0, "weak": 0.0,
}  # fmt: skip


@dataclass(slots=True)
class _Table:
    names: list[str] = field(default_factory=list)
    nodes: list[tuple[int, ...]] = field(default_factory=list)
    values: list[Number] = field(default_factory=list)
    params: list[dict[str, Number]] = field(default_factory=list)
    polarity: list[float] = field(default_factory=list)
    tnom_k: list[float] = field(default_factory=list)
    rth: list[float] = field(default_factory=list)


def both_diodes(given: Mapping[str, Number]) -> dict[str, Number]:
    """Parameters of a MOSFET with a saturation current `is_` written out for the diodes at drain and source."""
    out = dict(given)
    if "is_" in out:
        out["isd"] = out["iss"] = out.pop("is_")
    return out


class Bench:
    """Collects parts, then makes a `Circuit`."""

    def __init__(self, temperature_c: Number = 27.0) -> None:
        self._t_k = np.atleast_1d(np.asarray(temperature_c, dtype=float)) + ZERO_CELSIUS_K
        self._nets = ["0"]
        self._tables = {kind: _Table() for kind in "rclkviqdjm"}

    def net(self, name: str) -> int:
        """Number of a net, new or known."""
        if name not in self._nets:
            self._nets.append(name)
        return self._nets.index(name)

    def _two(self, kind: str, name: str, a: str, b: str, value: Number) -> None:
        table = self._tables[kind]
        table.names.append(name)
        table.nodes.append((self.net(a), self.net(b)))
        table.values.append(value)

    def r(self, name: str, a: str, b: str, ohm: Number) -> None:
        """Resistor."""
        self._two("r", name, a, b, ohm)

    def c(self, name: str, a: str, b: str, farad: Number) -> None:
        """Capacitor."""
        self._two("c", name, a, b, farad)

    def l(self, name: str, a: str, b: str, henry: Number) -> None:  # noqa: E743
        """Inductor."""
        self._two("l", name, a, b, henry)

    def k(self, name: str, one: str, other: str, factor: Number) -> None:
        """Coupling of two inductors, given by name."""
        known = self._tables["l"].names
        table = self._tables["k"]
        table.names.append(name)
        table.nodes.append((known.index(one), known.index(other)))
        table.values.append(factor)

    def v(self, name: str, plus: str, minus: str, volt: Number) -> None:
        """Voltage source."""
        self._two("v", name, plus, minus, volt)

    def i(self, name: str, out_of: str, into: str, ampere: Number) -> None:
        """Current source: its current leaves net `out_of` and enters net `into`."""
        self._two("i", name, out_of, into, ampere)

    def q(self, name: str, c: str, b: str, e: str, *, pnp: bool = False, sub: str = "0", **given: Number) -> None:
        """Bipolar transistor; `is_` for the saturation current; `rbm` follows `rb` unless given; `tnom_c`, `rth`."""
        if "rb" in given:
            given.setdefault("rbm", given["rb"])
        self._device("q", name, (c, b, e, sub), BIPOLAR, -1.0 if pnp else 1.0, given)

    def d(self, name: str, anode: str, cathode: str, **given: Number) -> None:
        """Diode; `is_` for the saturation current; `tnom_c`, `rth`."""
        self._device("d", name, (anode, cathode), DIODE, 1.0, given)

    def j(self, name: str, d: str, g: str, s: str, *, p: bool = False, **given: Number) -> None:
        """Junction FET; `is_`, `lambda_`; `tnom_c`, `rth`."""
        self._device("j", name, (d, g, s), JFET, -1.0 if p else 1.0, given)

    def m(self, name: str, d: str, g: str, s: str, body: str = "", *, p: bool = False, **given: Number) -> None:
        """MOSFET, its body on its source unless named; `vto` positive for enhancement; `is_` of both body diodes;
        `lambda_`."""
        given = both_diodes(given)
        given.setdefault("channel", -1.0 if p else 1.0)
        self._device("m", name, (d, g, s, body or s), MOSFET, -1.0 if p else 1.0, given)

    def _device(
        self,
        kind: str,
        name: str,
        nets: tuple[str, ...],
        defaults: Mapping[str, float],
        polarity: float,
        given: dict[str, Number],
    ) -> None:
        table = self._tables[kind]
        tnom_c = given.pop("tnom_c", None)
        rth = given.pop("rth", float("nan"))
        renamed = {key.rstrip("_"): value for key, value in given.items()}
        strange = set(renamed) - set(defaults)
        if strange:
            raise KeyError(f"{name}: no parameter {sorted(strange)}")
        table.names.append(name)
        table.nodes.append(tuple(self.net(n) for n in nets))
        table.params.append({**defaults, **renamed})
        table.polarity.append(polarity)
        table.tnom_k.append(float(self._t_k[0]) if tnom_c is None else float(np.asarray(tnom_c)) + ZERO_CELSIUS_K)
        table.rth.append(float(np.asarray(rth)))

    def _scenarios(self) -> int:
        sizes = {len(self._t_k)}
        for table in self._tables.values():
            every = list(table.values)
            for params in table.params:
                every.extend(params.values())
            sizes.update(np.atleast_1d(np.asarray(v)).size for v in every)
        sizes.discard(1)
        if len(sizes) > 1:
            raise ValueError(f"scenario axes of different lengths: {sorted(sizes)}")
        return sizes.pop() if sizes else 1

    def _device_tables(self, s: int) -> dict[str, Devices]:
        kinds = {"bipolar": ("q", BIPOLAR), "jfet": ("j", JFET), "mosfet": ("m", MOSFET), "diode": ("d", DIODE)}
        tables = {kind: (self._tables[letter], defaults) for kind, (letter, defaults) in kinds.items()}
        return {kind: _devices(table, defaults, s) for kind, (table, defaults) in tables.items() if table.names}

    def circuit(self) -> Circuit:
        """The finished circuit, all values on one scenario axis."""
        s = self._scenarios()
        pairs = self._tables["k"]
        return Circuit(
            nets=tuple(self._nets),
            resistors=_branches(self._tables["r"], s),
            capacitors=_branches(self._tables["c"], s),
            inductors=_branches(self._tables["l"], s),
            couplings=Couplings(names=tuple(pairs.names), pair=_nodes(pairs, 2), k=_columns(pairs.values, s)),
            voltages=_branches(self._tables["v"], s),
            currents=_branches(self._tables["i"], s),
            devices=self._device_tables(s),
            temperature_k=np.broadcast_to(self._t_k, (s,)).copy(),
            scenarios=tuple(
                Scenario(name="nominal" if j == 0 else f"case {j}", kind="nominal" if j == 0 else "sample")
                for j in range(s)
            ),
        )


def _columns(values: Sequence[Number], s: int) -> np.ndarray:
    out = np.empty((s, len(values)))
    for j, value in enumerate(values):
        out[:, j] = value
    return out


def _nodes(table: _Table, width: int) -> np.ndarray:
    return np.array(table.nodes, dtype=np.int64).reshape(-1, width)


def _branches(table: _Table, s: int) -> Branches:
    return Branches(names=tuple(table.names), nodes=_nodes(table, 2), value=_columns(table.values, s))


def _devices(table: _Table, defaults: Mapping[str, float], s: int) -> Devices:
    return Devices(
        names=tuple(table.names),
        nodes=np.array(table.nodes, dtype=np.int64),
        polarity=np.array(table.polarity, dtype=float),
        params={key: _columns([p[key] for p in table.params], s) for key in defaults},
        tnom_k=np.array(table.tnom_k, dtype=float),
        rth_kpw=np.array(table.rth, dtype=float),
    )
