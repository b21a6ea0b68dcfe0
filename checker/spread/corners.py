"""The corners that ride on the scenario axis: temperature, gain spread, and resistor tolerance by sensitivity.

For each biased stage there is one corner in which every resistor stands at that end of its tolerance which raises the
stage's current, with gain and temperature on the same side, and one with all of them on the other. Equal corners are
one. Capacitors stand at the ends of their tolerance together.
"""

from __future__ import annotations

from collections.abc import Iterable

import numpy as np

from checker.circuit.types import Change, Circuit, Scenario
from checker.constants import ZERO_CELSIUS_K
from checker.intent.types import Ambient
from checker.measure.steadiness import gain_limits
from checker.spread.influence import Influence

MOST = 48
"""Corners at most; beyond it the stages with the weakest influence share those of the others."""


def corner_scenarios(circuit: Circuit, ambient: Ambient, influence: Influence) -> tuple[Scenario, ...]:
    """Nominal first, then the corners, each with a name that says what is at which end."""
    cold, hot = _temperatures(circuit, ambient)
    out = [Scenario(name="nominal")]
    if cold is not None:
        out.append(Scenario(name=f"{cold - ZERO_CELSIUS_K:g} degC", kind="corner", temperature_k=cold))
    if hot is not None:
        out.append(Scenario(name=f"{hot - ZERO_CELSIUS_K:g} degC", kind="corner", temperature_k=hot))
    low, high = _gains(circuit, 0), _gains(circuit, 1)
    if low:
        out.append(Scenario(name="current gain lowest", kind="corner", changes=low))
        out.append(Scenario(name="current gain highest", kind="corner", changes=high))
    weak, strong = _channels(circuit, 0), _channels(circuit, 1)
    if weak:
        out.append(Scenario(name="channel currents lowest", kind="corner", changes=weak))
        out.append(Scenario(name="channel currents highest", kind="corner", changes=strong))
    for sign, word in ((-1.0, "lowest"), (1.0, "highest")):
        changes = tuple(_supplies(circuit, sign))
        if changes:
            out.append(Scenario(name=f"supplies {word}", kind="corner", changes=changes))
    for sign, word in ((-1.0, "smallest"), (1.0, "largest")):
        changes = tuple(_ends(circuit, circuit.capacitors.names, sign))
        if changes:
            out.append(Scenario(name=f"capacitors {word}", kind="corner", changes=changes))
    return tuple(out + list(_currents(circuit, influence, (low + weak, high + strong), (cold, hot)))[: MOST - len(out)])


def _temperatures(circuit: Circuit, ambient: Ambient) -> tuple[float | None, float | None]:
    nominal = float(circuit.temperature_k[0])
    cold = None if ambient.min_c is None else ambient.min_c + ZERO_CELSIUS_K
    hot = None if ambient.max_c is None else ambient.max_c + ZERO_CELSIUS_K
    return (cold if cold is not None and cold < nominal else None, hot if hot is not None and hot > nominal else None)


def _gains(circuit: Circuit, end: int) -> tuple[Change, ...]:
    return tuple(
        Change(part=name, property="bf", value=gain_limits(circuit, name)[end]) for name in circuit.bipolars.names
    )


def _channels(circuit: Circuit, end: int) -> tuple[Change, ...]:
    """Field-effect transistors at one end of what their cards allow."""
    out = []
    for kind in ("jfet", "mosfet"):
        table = circuit.devices.get(kind)
        for place, name in enumerate(table.names if table is not None else ()):
            fact = circuit.parts.get(name)
            card = fact.card if fact is not None and fact.model_source.startswith("card") else None
            if table is not None and card is not None and card.spread is not None:
                for key, factor in card.spread[end].items():
                    out.append(Change(part=name, property=key, value=factor * float(table.params[key][0, place])))  # type: ignore[arg-type]
    return tuple(out)


def _supplies(circuit: Circuit, sign: float) -> Iterable[Change]:
    """Rails that the intent gives a tolerance, all at one end."""
    for rail in circuit.rails:
        if rail.tolerance and rail.element >= 0:
            name = circuit.voltages.names[rail.element]
            yield Change(part=name, property="factor", value=1.0 + sign * rail.tolerance)


def _tolerance(circuit: Circuit, name: str) -> float:
    fact = circuit.parts.get(name)
    return fact.value.tolerance or 0.0 if fact is not None and fact.value is not None else 0.0


def _ends(circuit: Circuit, names: Iterable[str], sign: float) -> Iterable[Change]:
    for name in names:
        tolerance = _tolerance(circuit, name)
        if 0.0 < tolerance < 1.0:
            yield Change(part=name, property="factor", value=1.0 + sign * tolerance)


def _currents(
    circuit: Circuit,
    influence: Influence,
    gains: tuple[tuple[Change, ...], tuple[Change, ...]],
    temperatures: tuple[float | None, float | None],
) -> Iterable[Scenario]:
    seen: dict[tuple[Change, ...], str] = {}
    for j, device in enumerate(influence.devices):
        column = influence.slope[:, j]
        if not np.any(np.abs(column) > 1e-3):
            continue
        for word, sign in (("highest", 1.0), ("lowest", -1.0)):
            changes = tuple(
                change
                for k, name in enumerate(influence.resistors)
                if abs(column[k]) > 1e-3
                for change in _ends(circuit, (name,), sign * float(np.sign(column[k])))
            )
            if changes and changes not in seen:
                seen[changes] = device
                yield Scenario(
                    name=f"current of {device} {word}",
                    kind="corner",
                    changes=(*changes, *gains[1 if sign > 0 else 0]),
                    temperature_k=temperatures[1 if sign > 0 else 0],
                )
