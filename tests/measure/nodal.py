"""A second way to small-signal figures: node equations written by hand in the test, solved as they stand.

Shares nothing with the solver. Transistors are ideal (no Early effect, no charges): gm = IC/VT, g_pi = IB/VT, exact
for them; capacitances are parts of the netlist.
"""

from __future__ import annotations

import numpy as np
from scipy.constants import Boltzmann, elementary_charge

VT = Boltzmann * 300.15 / elementary_charge
"""At the 27 degC of the boards [V]."""
IDEAL = ".model QI NPN(IS=1e-14 BF=100)\n"


class Nodal:
    """Admittances between named nets; "0" is ground."""

    def __init__(self, f_hz: float, same: dict[str, str] | None = None) -> None:
        """`same`: net -> the net that it is shorted to."""
        self.s = 2j * np.pi * f_hz
        self._same = same or {}
        self._nets: list[str] = []
        self._y: list[tuple[str, str, complex]] = []
        self._gm: list[tuple[str, str, str, str, complex]] = []

    def _at(self, net: str) -> int:
        if net not in self._nets:
            self._nets.append(net)
        return self._nets.index(net)

    def g(self, a: str, b: str, siemens: complex) -> None:
        """Conductance."""
        self._y.append((self._same.get(a, a), self._same.get(b, b), siemens))

    def r(self, a: str, b: str, ohm: float) -> None:
        """Resistor."""
        self.g(a, b, 1.0 / ohm)

    def c(self, a: str, b: str, farad: float) -> None:
        """Capacitor."""
        self.g(a, b, self.s * farad)

    def q(self, c: str, b: str, e: str, ic_a: float, ib_a: float) -> None:
        """Transistor from its currents."""
        self.g(b, e, ib_a / VT)
        c, b, e = (self._same.get(net, net) for net in (c, b, e))
        self._gm.append((c, e, b, e, ic_a / VT))

    def solve(self, into: dict[str, complex]) -> dict[str, complex]:
        """Net voltages [V] for currents [A] into nets."""
        for net in into:
            self._at(net)
        for row in (*self._y, *self._gm):
            for net in row[:-1]:
                if net != "0":
                    self._at(str(net))
        n = len(self._nets)
        full = np.zeros((n, n), dtype=complex)

        def stamp(row: str, column: str, value: complex) -> None:
            if "0" not in (row, column):
                full[self._at(row), self._at(column)] += value

        for a, b, y in self._y:
            for row, column, sign in ((a, a, 1), (b, b, 1), (a, b, -1), (b, a, -1)):
                stamp(row, column, sign * y)
        for out, back, plus, minus, gm in self._gm:
            for row, way in ((out, 1), (back, -1)):
                stamp(row, plus, way * gm)
                stamp(row, minus, -way * gm)
        rhs = np.zeros(n, dtype=complex)
        for net, ampere in into.items():
            rhs[self._at(net)] += ampere
        v = np.linalg.solve(full, rhs)
        found = {"0": 0j, **{net: complex(v[k]) for k, net in enumerate(self._nets)}}
        return found | {net: found[other] for net, other in self._same.items()}
