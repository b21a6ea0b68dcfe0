"""The exception tree. Every message reads *where, got, expected, what to do*.

`InputTrouble` (status 2): the netlist, intent file or call is unusable. `Unsolved` (a finding under `unchecked`):
an island has no certified operating point. `Internal` (status 3): our own fault, reported loudly.
"""

from __future__ import annotations


class Trouble(Exception):
    """Root of all that Stageproof raises on purpose."""


class InputTrouble(Trouble, ValueError):
    """Unusable input: one message with file and line, exit status 2."""

    def __init__(self, message: str, *, file: str = "", line: int = 0) -> None:
        self.message = message
        self.file = file
        self.line = line
        super().__init__(str(self))

    def __str__(self) -> str:
        where = f"{self.file}:{self.line}: " if self.file and self.line else f"{self.file}: " if self.file else ""
        return where + self.message


class NotAQuantity(Trouble, ValueError):
    """A text that does not read as an engineering value of the wanted unit."""


class Unsolved(Trouble, ArithmeticError):
    """An island without a certified answer; carries the reason in words."""


class CannotTell(Trouble, LookupError):
    """A datum is missing, so a question has no answer: `datum` names it, `supply` says what would help."""

    def __init__(self, datum: str, supply: str = "") -> None:
        self.datum = datum
        self.supply = supply
        super().__init__(f"{datum}: {supply}" if supply else datum)


class Internal(Trouble, RuntimeError):
    """A fault of the program itself: visible in the report, exit status 3."""
