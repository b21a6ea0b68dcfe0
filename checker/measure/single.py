"""The nominal scenario cut out of a stack without solving again."""

from __future__ import annotations

from dataclasses import replace

from checker.circuit.types import Branches, Circuit, Devices
from checker.solve.operating import OperatingPoint, operating_point


def first_scenario(point: OperatingPoint) -> OperatingPoint:
    """Scenario 0 of a stacked operating point: converged already, so one pass confirms its certificate."""
    return operating_point(nominal_circuit(point.circuit), near=point)


def nominal_circuit(circuit: Circuit) -> Circuit:
    """The circuit with scenario 0 alone."""

    def branches(table: Branches) -> Branches:
        return replace(table, value=table.value[:1])

    def devices(table: Devices) -> Devices:
        return replace(table, params={name: value[:1] for name, value in table.params.items()})

    return replace(
        circuit,
        resistors=branches(circuit.resistors),
        capacitors=branches(circuit.capacitors),
        inductors=branches(circuit.inductors),
        voltages=branches(circuit.voltages),
        currents=branches(circuit.currents),
        couplings=replace(circuit.couplings, k=circuit.couplings.k[:1]),
        devices={kind: devices(table) for kind, table in circuit.devices.items()},
        temperature_k=circuit.temperature_k[:1],
        scenarios=circuit.scenarios[:1],
    )
