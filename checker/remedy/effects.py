"""What a proposed change does: the parts, the judged quantity and the main figures of the stage, before and
after.
"""

from __future__ import annotations

import math
from typing import TypeGuard

import numpy as np

from checker.circuit.types import Circuit
from checker.examine import Examined
from checker.judge.verdict import Verdict
from checker.quantity.figure import Figure
from checker.record.finding import Change, Effect
from checker.record.units import as_written
from checker.remedy.candidates import Trial, drawn
from checker.rulekit import CannotTell, Relation
from checker.trouble import Unsolved

MAIN = ("ic_a", "id_a", "vce_v", "vds_v", "voltage_gain_db", "input_impedance_ohm", "low_corner_hz")
_UNITS = {"r_ohm": "ohm", "c_f": "F", "l_h": "H"}
_FELT = 0.01
"""Relative change under which a main figure is not worth a line."""


def changes_of(trial: Trial, circuit: Circuit) -> tuple[Change, ...]:
    """The trial as the report lists it."""
    return tuple(
        Change(
            part=each.part,
            property=each.property,
            from_=drawn(circuit, each.part, each.property),
            to=each.value,
            unit=_UNITS[each.property],
        )
        for each in trial
    )


def effects_of(verdict: Verdict, nominal: Examined, stack: Examined, start: int) -> tuple[Effect, ...]:
    """Before and after: the judged quantity where it was worst, the main figures of its first stage at nominal.

    `nominal`: the nominal as drawn, then with the change. `stack`: the board's scenarios as drawn from 0, the same with
    the change from `start`.
    """
    evidence = verdict.evidence
    judged, relation = evidence.check.figure, evidence.check.relation
    board, rows = (nominal, (0, 1)) if verdict.worst == 0 else (stack, (verdict.worst, start + verdict.worst))
    first = _effect(board, judged.quantity, judged.subject, rows, relation)
    main = (_effect(nominal, name, each, (0, 1), relation) for each in verdict.stages[:1] for name in MAIN)
    felt = (each for each in main if _felt(each) and (first is None or each.quantity != first.quantity))
    return tuple(each for each in (first, *felt) if each is not None)


def _effect(board: Examined, quantity: str, subject: str, rows: tuple[int, int], relation: Relation) -> Effect | None:
    """None where the board cannot tell."""
    try:
        figure = board.ask(quantity, subject)
    except (CannotTell, Unsolved):
        return None
    before, after = (_worst(figure, row, relation) for row in rows)
    return Effect(quantity=quantity, before=before, after=after, unit=figure.unit, subject=subject)


def _worst(figure: Figure, row: int, relation: Relation) -> float | None:
    """The row's worst value over frequency, magnitude of a complex one; None where there is none."""
    values = np.abs(figure.values[row]) if np.iscomplexobj(figure.values) else figure.values[row]
    known = values[np.isfinite(values)]
    if not known.size:
        return None
    return as_written(float(known.max() if relation == "at most" else known.min()), figure.unit)


def _felt(effect: Effect | None) -> TypeGuard[Effect]:
    if effect is None or effect.before is None or effect.after is None:
        return False
    return not math.isclose(effect.before, effect.after, rel_tol=_FELT)
