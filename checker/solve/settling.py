"""The last of the helpers: the board switched on, with a capacitor at every node, until nothing moves any more.

Backward Euler steps of C dv/dt = -f(v) from all nodes at zero: each solves f(v) + (C/h)(v - v_before) = 0, which is the
circuit with a conductance C/h from each node to where it stood. The step h grows while steps succeed and shrinks when
one does not; at the end the conductance is nothing, and plain passes settle what is left. No charge is taken for real:
only the rest counts.

Source: pseudo-transient continuation, Kelley and Keyes, SIAM J. Numer. Anal. 35(2):508-523 (1998) (from memory).
"""

from __future__ import annotations

from typing import Final

import numpy as np

from checker.arrays import BoolArray, FloatArray
from checker.constants import MAX_ITERATIONS, MAX_RUNGS, RUNG_ITERATIONS
from checker.solve.assemble import Assembler
from checker.solve.newton import expand, iterate

FIRST_S: Final = 1e-2
LAST_S: Final = 1e-13
STIFFEST_S: Final = 1e4
"""Conductance C/h [S] of the first step, at which a step is as good as infinite, and at which an island is given up."""
LONGER: Final = 0.25
SHORTER: Final = 8.0
"""What it is multiplied by after a step that succeeded, and after one that did not."""


def settle(assembler: Assembler, x: FloatArray, done: BoolArray) -> tuple[FloatArray, BoolArray]:
    """Unknowns (S, U) and which islands (S, islands) have come to rest; those already `done` stay as they are."""
    given_up = done.copy()
    state, at = np.where(expand(assembler, done), x, 0.0), assembler.start()
    pull = FIRST_S
    for _ in range(MAX_RUNGS):
        trial, good, moved = iterate(
            assembler, state, at, given_up, limit=RUNG_ITERATIONS, pull=pull, anchor=state.copy()
        )
        if not good.all() and pull < STIFFEST_S:
            pull *= SHORTER
            continue
        given_up |= ~good
        state, at = np.where(expand(assembler, ~good), state, trial), moved
        pull *= LONGER
        if pull < LAST_S or given_up.all():
            break
    final, good, _ = iterate(assembler, state, at, given_up, limit=MAX_ITERATIONS)
    reached = done | (good & ~given_up)
    return np.where(expand(assembler, reached & ~done), final, x), reached
