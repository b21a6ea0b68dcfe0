"""Standard values worth trying: near ones closely, far ones coarsely, alone and in pairs that keep their
ratio.
"""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence
from itertools import combinations

from checker.circuit.types import Branches, Change, Circuit
from checker.quantity.series import nearest, neighbours
from checker.rulekit import Lever

MOST = 96
"""Candidates of one finding: with the nominal they are one stack of a few milliseconds a small board."""
_SINGLES = 64
_NEAR = {"r_ohm": "E24", "c_f": "E12", "l_h": "E12"}
_FAR = "E6"
_PAIRED = 3
"""Levers, from the first, that are tried in pairs."""
_FACTORS = (1.5, 2.2, 3.3, 4.7, 6.8, 10.0)

Trial = tuple[Change, ...]


def trials(circuit: Circuit, levers: Sequence[Lever]) -> tuple[Trial, ...]:
    """Changes to try, at most `MOST`; levers on parts that the circuit does not hold as such are passed
    over.
    """
    usable = [(lever, value) for lever in levers if (value := drawn(circuit, lever.part, lever.property)) is not None]
    if not usable:
        return ()
    each = max(_SINGLES // len(usable), 4)
    singles = [(change,) for lever, value in usable for change in _single(lever, value, each)]
    pairs = [pair for one, two in combinations(usable[:_PAIRED], 2) for pair in _pair(one, two)]
    return tuple(dict.fromkeys((*singles[:_SINGLES], *pairs)))[:MOST]


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


def _single(lever: Lever, value: float, count: int) -> Iterator[Change]:
    """`count` values around `value`, half of them near; all on one side where the lever says so."""
    sides = 2 if lever.direction == "any" else 1
    near = max(count // sides // 2, 1)
    far = max(count // sides - near, 1)
    for up in (True, False):
        if lever.direction in ("any", "up" if up else "down"):
            for new in _ladder(value, _NEAR[lever.property], near, far, up=up):
                yield Change(part=lever.part, property=lever.property, value=new)


def _ladder(value: float, series: str, near: int, far: int, *, up: bool) -> Iterator[float]:
    """Outward from `value`: `near` steps of its series, then `far` of the coarse one."""
    close = neighbours(value, series, 0 if up else near, near if up else 0)
    outward = close if up else close[::-1]
    yield from outward
    beyond = neighbours(outward[-1], _FAR, 0 if up else far, far if up else 0)
    yield from beyond if up else beyond[::-1]


def _pair(one: tuple[Lever, float], two: tuple[Lever, float]) -> Iterator[Trial]:
    """Both parts by one factor, to the nearest standard value: what a divider needs to become stiffer."""
    ways = {one[0].direction, two[0].direction}
    for factor in _FACTORS:
        for up in (True, False):
            if ways <= {"any", "up" if up else "down"}:
                scale = factor if up else 1.0 / factor
                yield tuple(
                    Change(
                        part=lever.part,
                        property=lever.property,
                        value=nearest(value * scale, _NEAR[lever.property]),
                    )
                    for lever, value in (one, two)
                )
