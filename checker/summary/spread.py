"""The range of a stage's figures over the corners that ride on the scenario axis, and what moves each most."""

from __future__ import annotations

import numpy as np

from checker.circuit.types import Scenario
from checker.record import Span
from checker.setup import Setup
from checker.stages import types as found
from checker.summary.ledger import MIDDLE, Ledger
from checker.trouble import CannotTell

SPREAD = ("ic_a", "id_a", "vce_v", "vds_v", "voltage_gain_db", "input_impedance_ohm", "output_impedance_ohm")
"""Figures whose range is reported; complex ones by their magnitude, signal figures at f0."""


def spans(setup: Setup, ledger: Ledger, stage: found.Stage) -> dict[str, Span]:
    """Range by quantity; without the figures that the stage does not have."""
    corners = [k for k, scenario in enumerate(ledger.board.scenarios) if scenario.kind in ("nominal", "corner")]
    out = {}
    for key in SPREAD:
        try:
            values = ledger.board.ask(key, stage.id).values
        except CannotTell:
            continue
        column = values[corners, MIDDLE if values.shape[1] == 3 else 0]
        column = np.abs(column) if np.iscomplexobj(column) else column.real
        if np.isfinite(column).all() and len(column) > 1:
            far = int(np.argmax(np.abs(column - column[0])))
            dominant = _mover(setup, stage, ledger.board.scenarios[corners[far]]) if far else None
            out[key] = Span(min=float(column.min()), max=float(column.max()), dominant=dominant)
    return out


def _mover(setup: Setup, stage: found.Stage, corner: Scenario) -> str:
    """What a corner stands for in a word; for a current corner the resistor that moves this stage most."""
    if corner.name.startswith("current of "):
        parts = setup.influence.order(stage.device)
        return f"{parts[0]} ({corner.name})" if parts else corner.name
    return corner.name
