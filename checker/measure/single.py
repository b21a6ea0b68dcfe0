"""The nominal scenario cut out of a stack."""

from __future__ import annotations

from dataclasses import replace

from checker.circuit.types import Branches, Circuit, Devices


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
        bipolars=devices(circuit.bipolars),
        diodes=devices(circuit.diodes),
        temperature_k=circuit.temperature_k[:1],
        scenarios=circuit.scenarios[:1],
    )
