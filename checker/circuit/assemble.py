"""The finished draft in numbers: nodes, columns, and everything sorted by name."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import replace

import numpy as np

from checker.arrays import FloatArray, IntArray
from checker.circuit.draft import Draft, DraftDevice, DraftPort, Wire
from checker.circuit.order import natural, natural_key
from checker.circuit.parameters import PARAMETERS
from checker.circuit.types import NO_FOUR_POLES, Branches, Circuit, Couplings, Devices, FourPoles, Port, Scenario

NOMINAL = Scenario(name="nominal")


def assemble(draft: Draft, temperature_k: float) -> Circuit:
    """Number the nodes (ground 0, then nets in natural order) and fill the tables; S = 1."""
    nets = (draft.ground, *natural(draft.present() - {draft.ground}))
    node = {net: place for place, net in enumerate(nets)}
    voltages = _branches(draft.voltages, node)
    resistors = _branches(draft.resistors, node)
    inductors = _branches(draft.inductors, node)
    sources, ohms = _places(voltages), _places(resistors)
    rails = tuple(replace(rail, element=sources.get(draft.rail_elements.get(rail.net, ""), -1)) for rail in draft.rails)
    return Circuit(
        nets=nets,
        resistors=resistors,
        capacitors=_branches(draft.capacitors, node),
        inductors=inductors,
        couplings=_couplings(draft.couplings, inductors.names),
        voltages=voltages,
        currents=_branches(draft.currents, node),
        devices={
            kind: _devices(draft.devices[kind], node, keys) for kind, keys in PARAMETERS.items() if draft.devices[kind]
        },
        temperature_k=frozen(np.array([temperature_k])),
        scenarios=(NOMINAL,),
        rails=rails,
        ports=tuple(_port(port, node, sources, ohms) for port in draft.ports if port.net in node),
        parts={ref: draft.facts[ref] for ref in natural(draft.facts)},
        unknowns=tuple(
            sorted(
                draft.unknowns,
                key=lambda entry: (natural_key(entry.ref), natural_key(entry.pin), entry.datum),
            )
        ),
        assumptions=draft.notes.lines(),
        states=tuple(draft.states),
        four_poles=_four_poles(draft, node, sources) if draft.four_poles else NO_FOUR_POLES,
        band_hz=None if draft.intent.band is None else (draft.intent.band.low_hz, draft.intent.band.high_hz),
    )


def frozen(array: FloatArray) -> FloatArray:
    """The same array, made read-only."""
    array.setflags(write=False)
    return array


def _branches(wires: Mapping[str, Wire], node: Mapping[str, int]) -> Branches:
    names = tuple(natural(wires))
    nodes: IntArray = np.array(
        [(node[wires[name].first], node[wires[name].second]) for name in names], dtype=np.int64
    ).reshape(len(names), 2)
    nodes.setflags(write=False)
    return Branches(names=names, nodes=nodes, value=_column([wires[name].value for name in names]))


def _couplings(pairs: Mapping[str, tuple[str, str, float]], inductors: tuple[str, ...]) -> Couplings:
    names = tuple(natural(pairs))
    place = {name: index for index, name in enumerate(inductors)}
    pair = np.array([(place[pairs[name][0]], place[pairs[name][1]]) for name in names], dtype=np.int64)
    pair = pair.reshape(len(names), 2)
    pair.setflags(write=False)
    return Couplings(names=names, pair=pair, k=_column([pairs[name][2] for name in names]))


def _devices(devices: Mapping[str, DraftDevice], node: Mapping[str, int], keys: Iterable[str]) -> Devices:
    """The table of one family."""
    names = tuple(natural(devices))
    entries = [devices[name] for name in names]
    nodes = np.array([[node[net] for net in entry.nets] for entry in entries], dtype=np.int64)
    nodes.setflags(write=False)
    return Devices(
        names=names,
        nodes=nodes,
        polarity=frozen(np.array([entry.polarity for entry in entries], dtype=np.float64)),
        params={key: _column([entry.params[key] for entry in entries]) for key in keys},
        tnom_k=frozen(np.array([entry.tnom_k for entry in entries], dtype=np.float64)),
        rth_kpw=frozen(np.array([entry.rth_kpw for entry in entries], dtype=np.float64)),
        one_chip=_one_chip([entry.chip for entry in entries]),
    )


def _one_chip(chips: Sequence[str]) -> tuple[tuple[int, int], ...]:
    first: dict[str, int] = {}
    return tuple((first[chip], row) for row, chip in enumerate(chips) if chip and first.setdefault(chip, row) != row)


def _four_poles(draft: Draft, node: Mapping[str, int], sources: Mapping[str, int]) -> FourPoles:
    names = tuple(natural(draft.four_poles))
    entries = [draft.four_poles[name] for name in names]
    return FourPoles(
        names=names,
        kinds=tuple(entry.kind for entry in entries),
        nodes=np.array([[node[net] for net in entry.nets] for entry in entries], dtype=np.int64),
        sense=np.array([sources[entry.sense] if entry.sense else -1 for entry in entries], dtype=np.int64),
        value=frozen(np.array([entry.value for entry in entries], dtype=np.float64)),
    )


def _column(values: list[float]) -> FloatArray:
    """One row of nominal values, (1, n)."""
    return frozen(np.array(values, dtype=np.float64).reshape(1, len(values)))


def _places(branches: Branches) -> dict[str, int]:
    return {name: place for place, name in enumerate(branches.names)}


def _port(port: DraftPort, node: Mapping[str, int], voltages: Mapping[str, int], resistors: Mapping[str, int]) -> Port:
    return Port(
        name=port.name,
        net=port.net,
        node=node[port.net],
        role=port.role,
        reference_ohm=port.reference_ohm,
        emf=voltages.get(port.emf, -1),
        series=resistors.get(port.series, -1),
        load=port.load,
        level_v=port.level_v,
        band_hz=port.band_hz,
        coaxial=port.coaxial,
        declared=port.declared,
        part=port.part,
    )
