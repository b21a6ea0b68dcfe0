"""Asking a board for the report's figures, and keeping the reason of every one that does not exist."""

from __future__ import annotations

import math

from checker.board import Board
from checker.quantity.figure import Figure
from checker.quantity.show import show
from checker.record import Complex, WorkingLine, at
from checker.trouble import CannotTell

MIDDLE = 1
"""f0 in figures over low edge, f0, high edge."""
LATER = "not computed by this version"


class Ledger:
    """Collects `unavailable` and the workings while the records are written."""

    def __init__(self, board: Board) -> None:
        self.board = board
        self.unavailable: dict[str, str] = {}
        self._lines: dict[tuple[str, str, str], WorkingLine] = {}

    def real_at(self, quantity: str, subject: str, *path: str) -> float | None:
        """A real figure at f0, nominal; None with its reason filed under `path` (last segment: the key)."""
        value = self._value(quantity, subject, path)
        return None if value is None else float(value.real)

    def complex_at(self, quantity: str, subject: str, *path: str) -> Complex | None:
        """A complex figure at f0, nominal."""
        value = self._value(quantity, subject, path)
        return None if value is None else Complex.of(complex(value))

    @property
    def workings(self) -> tuple[WorkingLine, ...]:
        """All workings so far, each once, in the order they were asked for."""
        return tuple(self._lines.values())

    def missing(self, reason: str, *path: str) -> None:
        """File a reason."""
        self.unavailable[at(*path)] = reason

    def _value(self, quantity: str, subject: str, path: tuple[str, ...]) -> complex | None:
        try:
            figure = self.board.ask(quantity, subject)
        except CannotTell as gap:
            self.missing(f"{gap.datum} is not known", *path)
            return None
        value = complex(figure.values[0, MIDDLE if figure.values.shape[1] == 3 else 0])
        if not (math.isfinite(value.real) and math.isfinite(value.imag)):
            self.missing(figure.reason or "not certified", *path)
            return None
        self.note(figure, value)
        return value

    def note(self, figure: Figure, value: complex) -> None:
        """Keep the working of a figure for `why`."""
        line = WorkingLine(
            subject=figure.subject,
            quantity=figure.quantity,
            formula=figure.working.formula,
            numbers=figure.working.numbers,
            result=in_words(value, figure.unit),
            source=figure.working.source,
        )
        self._lines.setdefault((line.subject, line.quantity, line.formula), line)


def in_words(value: complex, unit: str) -> str:
    """A figure as text: magnitude and angle where it is complex."""
    unit = {"ohm": "Ω", "1": "", "degC": "°C"}.get(unit, unit)
    if abs(value.imag) <= 1e-3 * abs(value):
        return show(value.real, unit)
    angle = math.degrees(math.atan2(value.imag, value.real))
    return f"{show(abs(value), unit)} at {angle:.1f}°"
