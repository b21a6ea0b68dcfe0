"""A bench's circuit as netlist text, read back and measured by the program: the whole path of a bias question."""

from __future__ import annotations

import math

from checker.board import Board
from checker.constants import ZERO_CELSIUS_K
from checker.setup import Setup
from tests.bench import BIPOLAR, DIODE, JFET, MOSFET, Bench
from tests.whole import intent_text, set_up_from

KINDS = {"q": (BIPOLAR, "NPN", "PNP"), "d": (DIODE, "D", "D"), "j": (JFET, "NJF", "PJF"), "m": (MOSFET, "NMOS", "PMOS")}
UNWRITTEN = ("channel", "cox", "w", "l", "iss", "cbdsw", "cbssw", "weak")
"""What the netlist's text says otherwise, or a bench of text leaves at nothing."""


def text_of(b: Bench) -> str:
    """Netlist lines of a bench with one value a part; its temperature is left to the intent."""
    lines = [
        f"{name} {b._nets[x]} {b._nets[y]} {value!r}"
        for kind in "rclvi"
        for name, (x, y), value in zip(
            b._tables[kind].names, b._tables[kind].nodes, b._tables[kind].values, strict=True
        )
    ]
    return "\n".join(lines + [line for kind in KINDS for line in _devices(b, kind)]) + "\n"


def _devices(b: Bench, kind: str) -> list[str]:
    defaults, positive, negative = KINDS[kind]
    table = b._tables[kind]
    out = []
    for name, nodes, given, sign, tnom_k in zip(
        table.names, table.nodes, table.params, table.polarity, table.tnom_k, strict=True
    ):
        nets = " ".join(b._nets[node] for node in nodes)
        size = f" W={given['w']!r} L={given['l']!r}" if kind == "m" else ""
        out.append(f"{name} {nets} X{name}{size}")
        written = {
            key: value * sign if (kind, key) == ("m", "vto") else value
            for key, value in given.items()
            if key in defaults and key not in UNWRITTEN and math.isfinite(float(value))
        }
        if kind == "m":
            written["is"] = written.pop("isd")
        words = " ".join(f"{key.upper()}={float(value)!r}" for key, value in written.items())
        out.append(f".model X{name} {positive if sign > 0 else negative}({words} TNOM={tnom_k - ZERO_CELSIUS_K:.10g})")
    return out


class Measured:
    """A board read from text: figures of stages by the registry's names, of nets and diodes from the solution."""

    def __init__(self, b: Bench) -> None:
        celsius = float(b._t_k[0]) - ZERO_CELSIUS_K
        ambient = f'[ambient]\nnominal = "{celsius:.10g} degC"\n'
        self.setup: Setup = set_up_from(text_of(b), intent_text(band=None, more=ambient))
        self.board: Board = self.setup.board(self.setup.scenarios[:1])
        assert all(island.ok.all() for island in self.setup.point.islands)

    def ask(self, quantity: str, stage: str = "Q1") -> float:
        """A stage's figure in the nominal scenario."""
        return float(self.board.ask(quantity, stage).values[0, 0])

    def volts(self, net: str) -> float:
        """Voltage of a net."""
        return float(self.setup.point.v_v[0, self.setup.circuit.node(net)])

    def diode_a(self, name: str) -> float:
        """Current of a diode from anode to cathode."""
        return float(self.setup.point.diode["i_a"][0, self.setup.circuit.diodes.names.index(name)])

    def region(self, stage: str = "Q1") -> str:
        """Region in words."""
        return self.board.region_words(stage)
