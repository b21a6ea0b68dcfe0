"""The device families that the solver knows, in one order, and what each must offer.

A new family is one module that fulfils `Family` (a transistor's also `TransistorFamily`) and one line in `FAMILIES`.
Modules are imported when a board has such a device: start-up is a feature.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from typing import Final, Protocol

from checker.arrays import FloatArray
from checker.devices.evaluation import Evaluation

Params = Mapping[str, FloatArray]
Pairs = tuple[tuple[int, int], ...]


class Family(Protocol):
    """What the solver asks of a device module. Implemented by the modules of this folder; used by `checker.solve`.

    Arrays are (S, n, ...): scenario, device. Terminals are numbered outer ones first, then inner nodes.
    """

    @property
    def TERMINALS(self) -> int:
        """Number of terminals, inner nodes included."""

    @property
    def OUTER(self) -> int:
        """Number of outer terminals."""

    @property
    def INNER(self) -> tuple[tuple[str, int, int], ...]:
        """(parameter of the lead resistance, outer terminal, inner terminal)."""

    @property
    def PATHS(self) -> Pairs:
        """Pairs of terminals that carry direct current to each other."""

    @property
    def CONTROLS(self) -> Pairs:
        """Pairs of which the first acts on the second at DC without a current between them."""

    @property
    def TIED(self) -> Pairs:
        """Pairs of outer terminals of which the first is one lead with the second where both are on one net."""

    def at_temperature(self, p: Params, t_k: FloatArray, tnom_k: FloatArray, /) -> dict[str, FloatArray]:
        """Parameters moved to the device temperatures [K]."""

    def start(self, p: Params, /) -> FloatArray:
        """Junction voltages (S, n, j) of the first iteration [V]."""

    def junctions(self, v: FloatArray, polarity: FloatArray, /) -> FloatArray:
        """Junction voltages (S, n, j) from terminal voltages (S, n, TERMINALS) [V]."""

    def limit(self, p: Params, new: FloatArray, old: FloatArray, /) -> FloatArray:
        """Junction voltages held to a step that the equations can follow."""

    def evaluate(self, p: Params, polarity: FloatArray, v: FloatArray, at: FloatArray, gmin: float, /) -> Evaluation:
        """Currents and conductances, linearised at junction voltages `at`, taken to terminals `v`."""

    def capacitance(self, p: Params, polarity: FloatArray, v: FloatArray, /) -> FloatArray:
        """Capacitance matrix (S, n, TERMINALS, TERMINALS) [F]."""

    def figures(self, p: Params, polarity: FloatArray, v: FloatArray, /) -> dict[str, FloatArray]:
        """What the operating point tells of each device, (S, n) a key; nan where a terminal has no voltage."""


class TransistorFamily(Family, Protocol):
    """A family whose first three terminals are output, control and common (collector, base, emitter)."""

    @property
    def FIGURES(self) -> tuple[str, str, str, str, str, str]:
        """Its names in `figures` for current into output, control and common terminal, voltage from output to common
        and from control to common, and power."""

    def ends(self, p: Params, /) -> tuple[FloatArray, FloatArray]:
        """Junction voltages (S, n, j) of a device that conducts as a closed switch, and of one that does not: seeds of
        the search for other rests."""

    def small_signal(self, p: Params, polarity: FloatArray, v: FloatArray, /) -> dict[str, FloatArray]:
        """Intrinsic gm, g_pi, g_o [S] and c, all capacitance at the control terminal [F], each (S, n)."""

    def without_gm(self, g: FloatArray, gm: FloatArray, /) -> FloatArray:
        """The conductance matrix with the controlled current taken out; `gm` (S, n) [S]."""


def _bipolar() -> TransistorFamily:
    from checker.devices import bipolar

    return bipolar


def _diode() -> Family:
    from checker.devices import diode

    return diode


def _jfet() -> TransistorFamily:
    from checker.devices import jfet

    return jfet


def _mosfet() -> TransistorFamily:
    from checker.devices import mosfet

    return mosfet


def _opamp() -> Family:
    from checker.devices import opamp

    return opamp


TRANSISTORS: Final[Mapping[str, Callable[[], TransistorFamily]]] = {
    "bipolar": _bipolar,
    "jfet": _jfet,
    "mosfet": _mosfet,
}
"""Families with an output, a control and a common terminal, in the order of `Circuit.transistors`."""

FAMILIES: Final[Mapping[str, Callable[[], Family]]] = {**TRANSISTORS, "diode": _diode, "opamp": _opamp}
"""Every family, in the order in which the solver stacks them."""
