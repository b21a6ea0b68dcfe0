"""One netlist made ready for questions: solved, recognised, and able to build a board over any scenarios."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

import numpy as np

from checker.board import Board
from checker.cards.types import Card
from checker.circuit.build import build_circuit
from checker.circuit.changes import state_scenarios, with_changes
from checker.circuit.types import Change, Circuit, Port, Scenario
from checker.intent.types import Intent
from checker.measure.bench import Bench
from checker.measure.single import one_scenario
from checker.netlist.types import Netlist
from checker.shape import frozen
from checker.solve.operating import OperatingPoint, operating_point
from checker.solve.poles import growing_poles
from checker.solve.response import small_signal
from checker.solve.states import searched, settled
from checker.spread.corners import corner_scenarios
from checker.spread.influence import Influence, influence
from checker.stages.recognise import recognise
from checker.stages.region import REGIONS, region_codes
from checker.stages.types import Recognition
from checker.words import Region


@frozen
class Setup:
    """`circuit`, `point`: nominal alone. `scenarios`: nominal, corners, states. `growing`: whether the linearised
    circuit has a pole that grows (its operating point is then no rest)."""

    netlist: Netlist
    intent: Intent
    circuit: Circuit
    point: OperatingPoint
    recognition: Recognition
    ports: tuple[Port, ...]
    f0_hz: float
    influence: Influence
    scenarios: tuple[Scenario, ...]
    growing: bool

    def board(self, scenarios: Sequence[Scenario]) -> Board:
        """A board over these scenarios (nominal first); stages and links stay those of the nominal."""
        circuit = with_changes(self.circuit, tuple(scenarios))
        trials = any(scenario.kind in ("candidate", "sample") for scenario in scenarios)
        bench = Bench(
            circuit=circuit,
            point=operating_point(circuit, near=self.point, quick=trials),
            recognition=self.recognition,
            ports=self.ports,
            band_hz=self.circuit.band_hz,
            f0_hz=self.f0_hz,
            nominal=self.point,
        )
        order = {name: self.influence.order(name) for name in self.influence.devices}
        return Board(bench, self.intent, order)

    def corners_with(self, changes: tuple[Change, ...]) -> tuple[Scenario, ...]:
        """The corners that the board has with these changes made, which are not among theirs: which end of a tolerance
        raises a current follows from the operating point, and may turn with it."""
        both = with_changes(self.circuit, (self.scenarios[0], Scenario(name="changed", changes=changes)))
        point = operating_point(one_scenario(both, 1), near=self.point, quick=True)
        return corner_scenarios(point.circuit, self.intent.ambient, influence(point))[1:]


def set_up(netlist: Netlist, intent: Intent, own_cards: Mapping[str, Card] | None = None) -> Setup:
    """Build the circuit, solve its nominal, find the stages, and choose the scenarios."""
    circuit = build_circuit(netlist, intent, own_cards)
    point = searched(operating_point(circuit))
    growing = growing_poles(point)
    point = settled(point, growing)
    ports, words = _directed(circuit, point)
    f0, f_look, band_words = _frequencies(circuit, point, ports)
    states = state_scenarios(circuit, intent)
    recognition = recognise(
        point,
        small_signal(point, f_look),
        ports,
        _state_regions(circuit, point, tuple(state for state in states if state.kind == "state")),
        oscillating=_oscillating(point, growing),
    )
    moves = influence(point)
    return Setup(
        netlist=netlist,
        intent=intent,
        circuit=circuit,
        point=point,
        recognition=Recognition(
            stages=recognition.stages,
            groups=recognition.groups,
            paths=recognition.paths,
            assumptions=(*recognition.assumptions, *words, *band_words),
        ),
        ports=ports,
        f0_hz=f0,
        influence=moves,
        scenarios=(*corner_scenarios(circuit, intent.ambient, moves), *states),
        growing=bool(len(growing)),
    )


def _oscillating(point: OperatingPoint, growing: np.ndarray[tuple[int], np.dtype[np.complex128]]) -> dict[str, float]:
    """Devices whose removal takes a growing oscillation away, with its frequency [Hz]."""
    turning = np.abs(growing.imag) > 1e-6 * np.abs(growing)
    if not turning.any():
        return {}
    f_hz = float(np.abs(growing[turning].imag).max() / (2.0 * np.pi))

    def quiet(name: str) -> bool:
        left = growing_poles(point, without=name)
        return not np.any(np.abs(left.imag) > 1e-6 * np.abs(left))

    return {name: f_hz for name in point.circuit.transistors.names if quiet(name)}


def _directed(circuit: Circuit, point: OperatingPoint) -> tuple[tuple[Port, ...], tuple[str, ...]]:
    """Ports with roles; the sweep is made only where a direction or every output is missing."""
    words: tuple[str, ...]
    ports, words = circuit.ports, ()
    if {"input", "output"} <= {port.role for port in ports} and all(port.role for port in ports):
        return ports, words
    from checker.stages.ports import directed, supposed_output, wide_grid_hz  # a board with declared ports needs none

    if any(port.role is None for port in ports):
        ports, words = directed(ports, small_signal(point, wide_grid_hz()))
    if any(port.role == "input" for port in ports) and not any(port.role == "output" for port in ports):
        ports, more = supposed_output(point, ports, small_signal(point, wide_grid_hz()))
        words = (*words, *more)
    return ports, words


def _frequencies(
    circuit: Circuit, point: OperatingPoint, ports: tuple[Port, ...]
) -> tuple[float, np.ndarray[tuple[int], np.dtype[np.float64]], tuple[str, ...]]:
    """f0 [Hz], the three frequencies recognition looks at, and what was assumed.

    f0 = geometric mean of the band; with a low edge of 0, min(1 kHz, high/10).
    """
    if circuit.band_hz is not None:
        low, high = circuit.band_hz
        f0 = float(np.sqrt(low * high)) if low > 0.0 else min(1e3, high / 10.0)
        return f0, np.array([low if low > 0.0 else f0, f0, high]), ()
    from checker.stages.ports import widest_band

    found, f0 = widest_band(point, ports)
    if found is None:
        return f0, np.array([f0 / 2.0, f0, f0 * 2.0]), ()
    low, high = found
    words = f"no band declared: figures at {f0:.4g} Hz, the middle of {low:.3g} to {high:.3g} Hz (within 1 dB)"
    return f0, np.array([max(low, f0 / 3.0), f0, min(high, f0 * 3.0)]), (words,)


def _state_regions(
    circuit: Circuit, point: OperatingPoint, states: tuple[Scenario, ...]
) -> dict[str, dict[str, Region]]:
    """Region of each transistor in each declared state."""
    if not states:
        return {}
    stack = operating_point(with_changes(circuit, (Scenario(name="nominal"), *states)), near=point)
    codes = region_codes(stack)
    return {
        name: {
            state.name: REGIONS[int(codes[1 + k, j])] for k, state in enumerate(states) if np.isfinite(codes[1 + k, j])
        }
        for j, name in enumerate(circuit.transistors.names)
    }
