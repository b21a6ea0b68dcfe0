"""Parameters in force at a place: expressions evaluated when asked for, each once, with cycles refused."""

from __future__ import annotations

from checker.netlist.limits import ReadLimits
from checker.netlist.spice_expression import evaluate
from checker.pattern import lazy
from checker.quantity.spice_number import parse_spice_number
from checker.trouble import NotAQuantity

_NAME = lazy(r"[A-Za-z_][\w.]*")
_QUOTES = {"{": "}", "'": "'", '"': '"'}
_OPERATOR = lazy(r"[-+*/^(]")


class Scope:
    """Parameter texts of one level over those of the levels around it."""

    def __init__(self, texts: dict[str, str], *, outer: Scope | None, limits: ReadLimits) -> None:
        self._texts = texts
        self._values: dict[str, float] = {}
        self._failed: dict[str, str] = {}
        """Why a parameter does not compute, so that it is tried once however often it is used."""
        self._outer = outer
        self._limits = limits
        self._open: list[str] = []

    def knows(self, name: str) -> bool:
        """True where a parameter of that lower-case name is in force."""
        return name in self._texts or name in self._values or (self._outer is not None and self._outer.knows(name))

    def names(self) -> tuple[str, ...]:
        """Names given a text on this level, in their order."""
        return tuple(self._texts)

    def give(self, name: str, value: float) -> None:
        """Set a value that overrides the text of that name."""
        self._values[name] = value

    def value(self, name: str, level: int = 0) -> float:
        """Value of a parameter. Raises `NotAQuantity` where it is unknown, circular or does not compute."""
        if name in self._values:
            return self._values[name]
        if name in self._failed:
            raise NotAQuantity(self._failed[name])
        if name not in self._texts:
            if self._outer is None:
                raise NotAQuantity(f"the parameter {name[:40]!r} is not defined")
            return self._outer.value(name, level)
        if name in self._open:
            # A default such as `w=w` means the value around it.
            if self._open[-1] == name and self._outer is not None and self._outer.knows(name):
                return self._outer.value(name, level)
            raise NotAQuantity(f"the parameter {name[:40]!r} is defined by itself")
        self._open.append(name)
        try:
            self._values[name] = self.number(self._texts[name], level + 1)
        except NotAQuantity as error:
            self._failed[name] = str(error)
            raise
        finally:
            self._open.pop()
        return self._values[name]

    def number(self, word: str, level: int = 0) -> float:
        """Value of a word: number, parameter name, or expression with or without braces. Raises
        `NotAQuantity`."""
        text = word.strip()
        if text and text[0] in _QUOTES:
            inner = text[1:-1] if text[-1] == _QUOTES[text[0]] and len(text) > 1 else text[1:]
            return self._evaluate(inner, level)
        # Numbers are many, and none begins as a name does.
        if not text[:1].isdigit() and _NAME.fullmatch(text) and self.knows(text.lower()):
            return self.value(text.lower(), level)
        try:
            return parse_spice_number(text)
        except NotAQuantity as error:
            if not _OPERATOR.search(text):
                raise
            try:
                return self._evaluate(text, level)
            except NotAQuantity:
                raise error from None

    def _evaluate(self, text: str, level: int) -> float:
        return evaluate(text, self.value, steps=self._limits.steps, depth=self._limits.depth, level=level)
