"""One board under test: its certified points and responses, each made once and kept."""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np

from checker.arrays import FloatArray
from checker.circuit.types import Circuit, PartFact, Port, Scenario
from checker.solve.operating import OperatingPoint, self_heated
from checker.solve.response import Response, small_signal
from checker.stages.types import Group, Recognition, Stage


class Bench:
    """A circuit with all its scenarios, recognised at the nominal.

    `band_hz` and `f0_hz`: the board's; a port of its own band overrides them where that port is asked.
    """

    def __init__(
        self,
        circuit: Circuit,
        point: OperatingPoint,
        recognition: Recognition,
        ports: tuple[Port, ...],
        band_hz: tuple[float, float] | None,
        f0_hz: float,
        nominal: OperatingPoint,
    ) -> None:
        """`nominal`: the certified point of scenario 0 alone."""
        self.circuit = circuit
        self.point = point
        self.recognition = recognition
        self.ports = ports
        self.band_hz = band_hz
        self.f0_hz = f0_hz
        self._responses: dict[tuple[float, ...], Response] = {}
        self._nominal_responses: dict[tuple[float, ...], Response] = {}
        self._heated: OperatingPoint | None = None
        self.nominal_point = nominal
        self.kept: dict[str, object] = {}

    @property
    def scenarios(self) -> tuple[Scenario, ...]:
        """Names and changes of axis 0."""
        return self.circuit.scenarios

    @property
    def size(self) -> int:
        """Number of scenarios."""
        return self.circuit.size

    @property
    def edges_hz(self) -> FloatArray:
        """Band edge, f0, band edge, (3,); f0 three times where there is no band. A low edge of 0 reads f0."""
        if self.band_hz is None:
            return np.array([self.f0_hz] * 3)
        low, high = self.band_hz
        return np.array([low if low > 0.0 else self.f0_hz, self.f0_hz, high])

    def response(self, f_hz: FloatArray) -> Response:
        """All scenarios at frequencies (F,) [Hz]; kept."""
        key = tuple(np.asarray(f_hz, dtype=float).tolist())
        if key not in self._responses:
            self._responses[key] = small_signal(self.point, np.array(key))
        return self._responses[key]

    def nominal_response(self, f_hz: FloatArray) -> Response:
        """Scenario 0 alone at frequencies (F,) [Hz]; kept."""
        key = tuple(np.asarray(f_hz, dtype=float).tolist())
        if key not in self._nominal_responses:
            self._nominal_responses[key] = small_signal(self.nominal_point, np.array(key))
        return self._nominal_responses[key]

    @property
    def heated(self) -> OperatingPoint:
        """The second solution, with junctions at their own temperatures."""
        if self._heated is None:
            trials = any(scenario.kind in ("candidate", "sample") for scenario in self.scenarios)
            self._heated = self_heated(self.point, quick=trials)
        return self._heated

    def stage(self, ident: str) -> Stage:
        """The stage of that id. Raises KeyError."""
        return self.recognition.stage(ident)

    def family(self, stage: str) -> str:
        """The device family of a stage: bipolar, jfet, mosfet. Raises KeyError."""
        return self.circuit.find_device(self.stage(stage).device)[0]

    def place(self, stage: str) -> int:
        """The row of a stage's device in its family's table. Raises KeyError."""
        return self.circuit.find_device(self.stage(stage).device)[1]

    def group(self, ident: str) -> Group:
        """The group of that id. Raises KeyError."""
        for group in self.recognition.groups:
            if group.id == ident:
                return group
        raise KeyError(ident)

    def port(self, name: str) -> Port:
        """The port of that name. Raises KeyError."""
        for port in self.ports:
            if port.name == name:
                return port
        raise KeyError(name)

    @property
    def facts(self) -> Mapping[str, PartFact]:
        """What is known of each part."""
        return self.circuit.parts
