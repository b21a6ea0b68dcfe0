"""Scenarios over a circuit: altered values stacked on axis 0, topology and numbering untouched."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import replace
from typing import Final

import numpy as np

from checker.arrays import FloatArray
from checker.circuit.assemble import NOMINAL
from checker.circuit.drives import DRIVEN_OHM, OPEN_OHM, drive_name, high_volts, split_label
from checker.circuit.lookup import find_rail
from checker.circuit.types import Branches, Change, Circuit, Devices, Scenario
from checker.intent.types import Intent, StateIntent
from checker.trouble import Internal

_SET: Final = {
    "resistors": "r_ohm",
    "capacitors": "c_f",
    "inductors": "l_h",
    "voltages": "v_v",
    "currents": "i_a",
}
_DEVICE_PARAMETERS: Final = (("bipolar", "bf"), ("jfet", "vto"), ("jfet", "beta"), ("mosfet", "vto"))
"""Family and parameter of devices that a change may set; a factor goes to the first of a family."""
_POSITIVE: Final = ("r_ohm", "c_f", "l_h", "bf", "beta")


def with_changes(circuit: Circuit, scenarios: Sequence[Scenario]) -> Circuit:
    """The circuit with one row of values a scenario, each made from the nominal row and the scenario's
    changes.

    `scenarios[0]` must be nominal: no change, no temperature of its own. `factor` multiplies the part's
    nominal value (of a bipolar, its `bf`). Raises Internal for an unknown part, a property that the part
    does not have, a value that is not finite, or a resistance, capacitance, inductance or gain that is not
    positive.
    """
    if not scenarios or scenarios[0].changes or scenarios[0].temperature_k is not None:
        raise Internal("with_changes: scenario 0 must be the nominal one, without changes")
    size = len(scenarios)
    columns = _Columns(circuit, size)
    for row, scenario in enumerate(scenarios):
        for change in scenario.changes:
            columns.apply(row, change)
    nominal_k = float(circuit.temperature_k[0])
    temperature = np.array([nominal_k if s.temperature_k is None else s.temperature_k for s in scenarios])
    temperature.setflags(write=False)
    return columns.circuit(circuit, tuple(scenarios), temperature)


class _Columns:
    """Stacks of values under change: a table is copied only once something in it changes."""

    def __init__(self, circuit: Circuit, size: int) -> None:
        self._size = size
        self._nominal: dict[str, FloatArray] = {name: getattr(circuit, name).value[:1] for name in _SET}
        for kind, param in _DEVICE_PARAMETERS:
            if kind in circuit.devices:
                self._nominal[f"{kind} {param}"] = circuit.devices[kind].params[param][:1]
        self._stacks: dict[str, FloatArray] = {}
        self._places: dict[str, list[tuple[str, int]]] = {}
        names = {name: getattr(circuit, name).names for name in _SET}
        for kind, param in _DEVICE_PARAMETERS:
            if kind in circuit.devices:
                names[f"{kind} {param}"] = circuit.devices[kind].names
        for table, entries in names.items():
            for place, part in enumerate(entries):
                self._places.setdefault(part, []).append((table, place))

    def apply(self, row: int, change: Change) -> None:
        """Write one change into its row."""
        table, place = self._find(change)
        nominal = float(self._nominal[table][0, place])
        value = nominal * change.value if change.property == "factor" else change.value
        quantity = _quantity(table)
        if not math.isfinite(value) or (quantity in _POSITIVE and value <= 0.0):
            raise Internal(f"with_changes: {change.part}: {quantity} = {value!r} is not possible")
        if table not in self._stacks:
            self._stacks[table] = np.repeat(self._nominal[table], self._size, axis=0)
        self._stacks[table][row, place] = value

    def _find(self, change: Change) -> tuple[str, int]:
        places = self._places.get(change.part)
        if not places:
            raise Internal(f"with_changes: the circuit has no element {change.part!r}")
        for table, place in places:
            if change.property in ("factor", _quantity(table)):
                return table, place
        raise Internal(f"with_changes: {change.part!r} has no {change.property}")

    def circuit(self, circuit: Circuit, scenarios: tuple[Scenario, ...], temperature: FloatArray) -> Circuit:
        """The circuit with the stacks in place."""
        return replace(
            circuit,
            resistors=self._branches(circuit, "resistors"),
            capacitors=self._branches(circuit, "capacitors"),
            inductors=self._branches(circuit, "inductors"),
            voltages=self._branches(circuit, "voltages"),
            currents=self._branches(circuit, "currents"),
            couplings=replace(circuit.couplings, k=self._spread(circuit.couplings.k)),
            devices={
                kind: self._devices(
                    table, {param: self._stack(f"{kind} {param}") for own, param in _DEVICE_PARAMETERS if own == kind}
                )
                for kind, table in circuit.devices.items()
            },
            scenarios=scenarios,
            temperature_k=temperature,
        )

    def _branches(self, circuit: Circuit, table: str) -> Branches:
        branches: Branches = getattr(circuit, table)
        return replace(branches, value=self._stack(table))

    def _devices(self, devices: Devices, changed: Mapping[str, FloatArray]) -> Devices:
        params = {name: changed.get(name, self._spread(value)) for name, value in devices.params.items()}
        return replace(devices, params=params)

    def _stack(self, table: str) -> FloatArray:
        stack = self._stacks.get(table)
        if stack is None:
            return self._spread(self._nominal[table])
        stack.setflags(write=False)
        return stack

    def _spread(self, value: FloatArray) -> FloatArray:
        """The nominal row seen S times, without a copy (read-only)."""
        return np.broadcast_to(value[:1], (self._size, value.shape[1]))


def _quantity(table: str) -> str:
    """The property that a table holds: of its own, or the parameter of a family of devices."""
    return _SET[table] if table in _SET else table.rpartition(" ")[2]


def state_scenarios(circuit: Circuit, intent: Intent) -> tuple[Scenario, ...]:
    """One scenario a state of the board itself and of the intent: driven pins, open pins, absent rails (0 V
    through their own source); and one for each rail that may be absent, alone.

    The nominal scenario is not among them. Raises InputTrouble for a rail that the circuit does not know.
    """
    said = (Scenario(name=state.name, kind="state", changes=_changes(circuit, state)) for state in intent.states)
    absent = (
        Scenario(
            name=f"without {rail.net}",
            kind="state",
            changes=(Change(part=circuit.voltages.names[rail.element], property="v_v", value=0.0),),
        )
        for rail in circuit.rails
        if rail.may_be_absent and rail.element >= 0
    )
    return (*circuit.states, *absent, *said)


def nominal() -> Scenario:
    """The scenario that must stand first."""
    return NOMINAL


def _changes(circuit: Circuit, state: StateIntent) -> tuple[Change, ...]:
    made: list[Change] = []
    for label in sorted(state.pins):
        made += _pin_changes(circuit, label, state.pins[label])
    for net in state.absent:
        rail = find_rail(circuit, net, state.origin, f"state {state.name!r}")
        if rail.element >= 0:
            made.append(Change(part=circuit.voltages.names[rail.element], property="v_v", value=0.0))
    return tuple(made)


def _pin_changes(circuit: Circuit, label: str, level: float | str) -> list[Change]:
    """Source and series resistor of one pin; none where its net is held by other sources."""
    ref, pin = split_label(label)
    terminals = circuit.parts[ref].terminals
    name = drive_name(label)
    if name in circuit.voltages.names:
        emf, series, driven = name, f"{name}.r", DRIVEN_OHM
    else:
        port = next((port for port in circuit.ports if port.net == terminals.get(pin) and port.emf >= 0), None)
        if port is None or port.series < 0:
            return []
        emf, series = circuit.voltages.names[port.emf], circuit.resistors.names[port.series]
        driven = float(circuit.resistors.value[0, port.series])
    if level == "open":
        return [Change(part=series, property="r_ohm", value=OPEN_OHM)]
    volts = high_volts(circuit.rails, terminals.values()) if level == "high" else 0.0 if level == "low" else level
    if not isinstance(volts, float | int):
        raise Internal(f"state level {level!r} of {label} has no volts")
    return [
        Change(part=series, property="r_ohm", value=driven),
        Change(part=emf, property="v_v", value=float(volts)),
    ]
