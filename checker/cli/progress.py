"""How far a long run has come, on standard error and only where that is a terminal."""

from __future__ import annotations

import sys

BAR = 30
"""Columns of the bar."""


class Progress:
    """A line that is drawn over itself and leaves nothing behind."""

    def __init__(self, count: int) -> None:
        self.count, self.done = count, 0
        self.shown = count > 1 and sys.stderr.isatty()
        self._draw()

    def step(self) -> None:
        """One more is done."""
        self.done += 1
        self._draw()

    def end(self) -> None:
        """Take the line away."""
        if self.shown:
            sys.stderr.write("\r" + " " * (BAR + 30) + "\r")
            sys.stderr.flush()

    def _draw(self) -> None:
        if self.shown:
            full = BAR * self.done // self.count
            sys.stderr.write(f"\r|{'█' * full}{' ' * (BAR - full)}| {self.done} of {self.count} boards")
            sys.stderr.flush()
