"""Standard values worth trying: near ones closely, far ones coarsely, alone and in pairs that keep their
ratio.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Iterator, Sequence
from itertools import combinations

from checker.circuit.types import Branches, Change, Circuit
from checker.quantity.series import mantissas, nearest, neighbours
from checker.rulekit import Lever

MOST = 96
"""Trials of one stack."""
_NEAR = {"r_ohm": "E24", "c_f": "E12", "l_h": "E12"}
_FAR = "E6"
_ALONE = 4
"""Levers, from the first, that are tried alone."""
_STEPS = 10
"""Values on either side: one of the near series, the others of the far one, thirtyfold in all."""
_PAIRED = 3
"""Levers, from the first, that are tried in pairs."""
_FACTORS = (2.2, 4.7)
_MADE = {"r_ohm": (1.0, 10e6), "c_f": (1e-12, 4.7e-3), "l_h": (1e-9, 1.0)}
"""Values that are easily bought; nothing beyond is proposed."""

Trial = tuple[Change, ...]


def trials(circuit: Circuit, levers: Sequence[Lever], *, in_step: bool = False) -> tuple[Trial, ...]:
    """Changes to try, at most `MOST`; levers on parts that the circuit does not hold as such, or that stand
    for what is outside the board, are passed over.

    `in_step`: all levers by one factor and nothing else.
    """
    usable = _usable(circuit, levers)
    if in_step:
        factors = (mantissa * decade for decade in (1.0, 10.0) for mantissa in mantissas("E12"))
        return tuple(dict.fromkeys(_together(usable, factors)))
    singles = [(change,) for lever, value in usable[:_ALONE] for change in _single(lever, value) if _is_made(change)]
    pairs = [pair for one, two in combinations(usable[:_PAIRED], 2) for pair in _together((one, two), _FACTORS)]
    return tuple(dict.fromkeys((*singles, *pairs)))[:MOST]


def with_second(circuit: Circuit, trial: Trial, levers: Sequence[Lever]) -> tuple[Trial, ...]:
    """The trial with one part more: the first of the levers that it does not hold already."""
    held = {change.part for change in trial}
    free = [(lever, value) for lever, value in _usable(circuit, levers) if lever.part not in held]
    return tuple((*trial, change) for lever, value in free[:1] for change in _single(lever, value) if _is_made(change))


def _usable(circuit: Circuit, levers: Sequence[Lever]) -> list[tuple[Lever, float]]:
    """Levers on elements of the board, with their values as drawn."""
    outside = {name for port in circuit.ports for name in port.load}
    found = ((lever, drawn(circuit, lever.part, lever.property)) for lever in levers if lever.part not in outside)
    return [(lever, value) for lever, value in found if value is not None]


def finer(circuit: Circuit, tried: Sequence[Trial], cleared: Sequence[bool]) -> tuple[Trial, ...]:
    """Near-series values around the step in which each lever first cleared the finding, either way; at most `MOST`."""
    found: list[Trial] = []
    singles = [(trial[0], ok) for trial, ok in zip(tried, cleared, strict=True) if len(trial) == 1]
    for part in dict.fromkeys(change.part for change, _ in singles):
        ladder = sorted((change.value, ok) for change, ok in singles if change.part == part)
        quantity = next(change.property for change, _ in singles if change.part == part)
        old = drawn(circuit, part, quantity) or math.nan
        for side in ([s for s in ladder if s[0] > old], [s for s in reversed(ladder) if s[0] < old]):
            found += [(Change(part=part, property=quantity, value=v),) for v in _first_step(side, old, _NEAR[quantity])]
    return tuple(found[:MOST])


def _first_step(side: Sequence[tuple[float, bool]], old: float, series: str) -> tuple[float, ...]:
    """Values of `series` from the last that does not clear to the second that does, walking away from `old`: what
    clears by a hair may fail at a corner."""
    at = next((index for index, (_, ok) in enumerate(side) if ok), None)
    if at is None:
        return ()
    ends = (side[at - 1][0] if at else old, side[min(at + 1, len(side) - 1)][0])
    low, high = sorted(ends)
    count = len(mantissas(series)) * (1 + round(math.log10(high / low)))
    known = {value for value, _ in side}
    return tuple(v for v in neighbours(low, series, 0, count) if v < high * (1.0 - 1e-9) and v not in known)


def drawn(circuit: Circuit, part: str, quantity: str) -> float | None:
    """The part's nominal `r_ohm`, `c_f` or `l_h`; None where the circuit has no such element of a positive
    value.
    """
    tables: dict[str, Branches] = {
        "r_ohm": circuit.resistors,
        "c_f": circuit.capacitors,
        "l_h": circuit.inductors,
    }
    table = tables[quantity]
    if part not in table.names:
        return None
    value = float(table.value[0, table.names.index(part)])
    return value if value > 0.0 and math.isfinite(value) else None


def size(trial: Trial, circuit: Circuit) -> float:
    """How far a trial is from the drawing: the sum of |ln(new/old)| over its parts."""
    olds = (drawn(circuit, change.part, change.property) for change in trial)
    return sum(abs(math.log(change.value / old)) for change, old in zip(trial, olds, strict=True) if old)


def _is_made(change: Change) -> bool:
    low, high = _MADE[change.property]
    return low <= change.value <= high


def _single(lever: Lever, value: float) -> Iterator[Change]:
    """Values around `value`, only on one side where the lever says so."""
    for up in (True, False):
        if lever.direction in ("any", "up" if up else "down"):
            for new in _ladder(value, _NEAR[lever.property], up=up):
                yield Change(part=lever.part, property=lever.property, value=new)


def _ladder(value: float, series: str, *, up: bool) -> Iterator[float]:
    """Outward from `value`: one step of its series, then the coarse one."""
    first = neighbours(value, series, 0 if up else 1, 1 if up else 0)[0]
    yield first
    beyond = neighbours(first, _FAR, 0 if up else _STEPS - 1, _STEPS - 1 if up else 0)
    yield from beyond if up else beyond[::-1]


def _together(parts: Sequence[tuple[Lever, float]], factors: Iterable[float]) -> Iterator[Trial]:
    """All parts by one factor, to the nearest standard values: what a divider needs to become stiffer."""
    ways = {lever.direction for lever, _ in parts}
    for factor in factors:
        for up in (True, False):
            if parts and factor > 1.0 and ways <= {"any", "up" if up else "down"}:
                scale = factor if up else 1.0 / factor
                trial = tuple(_scaled(lever, value * scale) for lever, value in parts)
                if all(map(_is_made, trial)):
                    yield trial


def _scaled(lever: Lever, value: float) -> Change:
    return Change(part=lever.part, property=lever.property, value=nearest(value, _NEAR[lever.property]))
