"""One scenario cut out of a stack."""

from __future__ import annotations

from dataclasses import replace

from checker.circuit.types import Branches, Circuit, Devices


def nominal_circuit(circuit: Circuit) -> Circuit:
    """The circuit with scenario 0 alone."""
    return one_scenario(circuit, 0)


def one_scenario(circuit: Circuit, row: int) -> Circuit:
    """The circuit with one scenario alone, which is then its nominal."""
    cut = slice(row, row + 1)

    def branches(table: Branches) -> Branches:
        return replace(table, value=table.value[cut])

    def devices(table: Devices) -> Devices:
        return replace(table, params={name: value[cut] for name, value in table.params.items()})

    return replace(
        circuit,
        resistors=branches(circuit.resistors),
        capacitors=branches(circuit.capacitors),
        inductors=branches(circuit.inductors),
        voltages=branches(circuit.voltages),
        currents=branches(circuit.currents),
        couplings=replace(circuit.couplings, k=circuit.couplings.k[cut]),
        devices={kind: devices(table) for kind, table in circuit.devices.items()},
        temperature_k=circuit.temperature_k[cut],
        scenarios=circuit.scenarios[cut],
    )
