"""Arithmetic of parameter expressions: a small parser of our own, bounded in steps and depth. Nothing is
executed but the operators and functions listed here."""

from __future__ import annotations

import math
from collections.abc import Callable
from typing import Literal

from checker.pattern import lazy
from checker.quantity.spice_number import parse_spice_number
from checker.trouble import NotAQuantity, Trouble

Lookup = Callable[[str, int], float]
"""Value of a parameter by lower-case name, asked for at a level of nesting; raises `NotAQuantity` for
none."""

_TOKEN = lazy(
    r"\s*(?:(?P<number>(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?[A-Za-zµμ]*\d*)"
    r"|(?P<name>[A-Za-z_][\w.#]*)|(?P<op>\*\*|<=|>=|==|!=|&&|\|\||[-+*/^()<>?:,!&|~%]))"
)
_BLANK = lazy(r"\s*\Z")
_BINARY = {
    "?": 1, "||": 2, "|": 2, "&&": 3, "&": 3, "==": 4, "!=": 4, "<": 5, ">": 5, "<=": 5, ">=": 5,
    "+": 6, "-": 6, "*": 7, "/": 7, "%": 7, "**": 9, "^": 9,
}  # fmt: skip
_UNARY = 8
_CONSTANTS = {"pi": math.pi, "e": math.e, "true": 1.0, "false": 0.0}

_FUNCTIONS: dict[str, tuple[int, Callable[..., float]]] = {
    "sin": (1, math.sin),
    "cos": (1, math.cos),
    "tan": (1, math.tan),
    "asin": (1, math.asin),
    "acos": (1, math.acos),
    "atan": (1, math.atan),
    "arctan": (1, math.atan),
    "atan2": (2, math.atan2),
    "sinh": (1, math.sinh),
    "cosh": (1, math.cosh),
    "tanh": (1, math.tanh),
    "exp": (1, math.exp),
    "ln": (1, math.log),
    "log": (1, math.log),
    "log10": (1, math.log10),
    "sqrt": (1, math.sqrt),
    "abs": (1, abs),
    "int": (1, math.trunc),
    "floor": (1, math.floor),
    "ceil": (1, math.ceil),
    "nint": (1, round),
    "round": (1, round),
    "sgn": (1, lambda x: math.copysign(1.0, x) if x else 0.0),
    "u": (1, lambda x: x > 0),
    "uramp": (1, lambda x: max(x, 0.0)),
    "min": (2, min),
    "max": (2, max),
    "pow": (2, math.pow),
    "pwr": (2, lambda x, y: math.pow(abs(x), y)),
    "pwrs": (2, lambda x, y: math.copysign(math.pow(abs(x), y), x)),
    "hypot": (2, math.hypot),
    "limit": (3, lambda x, a, b: min(max(x, min(a, b)), max(a, b))),
    "if": (3, lambda test, yes, no: yes if test else no),
}
"""Lower-case name to number of arguments and function; `log` is natural, as `ln`."""


class TooMuch(Trouble):
    """An expression that exceeds the steps or the depth allowed; `limit` names which."""

    def __init__(self, limit: Literal["steps", "depth"]) -> None:
        super().__init__(f"an expression exceeds the limit {limit}")
        self.limit: Literal["steps", "depth"] = limit


def evaluate(text: str, lookup: Lookup, *, steps: int, depth: int, level: int = 0) -> float:
    """The finite value of an expression. Raises `NotAQuantity` for anything that does not compute, `TooMuch`
    for one that exceeds `steps` tokens or `depth` levels, of which the parameter that is being evaluated has
    used `level`: brackets and parameters within parameters count alike."""
    parser = _Parser(text, lookup, steps, depth)
    try:
        value = parser.expression(0, level)
    except (ValueError, OverflowError, ZeroDivisionError) as error:
        if isinstance(error, NotAQuantity):
            raise
        raise NotAQuantity(f"{text[:60]!r} does not compute: {error}") from error
    if parser.symbol:
        raise NotAQuantity(f"{text[:60]!r}: {parser.symbol[:20]!r} is not expected there")
    if not math.isfinite(value):
        raise NotAQuantity(f"{text[:60]!r} is not finite")
    return value


class _Parser:
    """Precedence climbing over one symbol of look-ahead."""

    def __init__(self, text: str, lookup: Lookup, steps: int, depth: int) -> None:
        self.text, self.lookup, self.steps, self.depth = text, lookup, steps, depth
        self.position = 0
        self.symbol = ""
        self.kind = ""
        self.advance()

    def advance(self) -> None:
        self.steps -= 1
        if self.steps < 0:
            raise TooMuch("steps")
        found = _TOKEN.match(self.text, self.position)
        if found is None:
            self.symbol = self.kind = ""
            if _BLANK.match(self.text, self.position):
                return
            raise NotAQuantity(f"{self.text[:60]!r} holds what is no number, name or operator")
        self.position = found.end()
        self.kind = str(found.lastgroup)
        self.symbol = found[self.kind]

    def take(self, symbol: str) -> None:
        if self.symbol != symbol:
            raise NotAQuantity(f"{self.text[:60]!r}: expected {symbol!r}")
        self.advance()

    def expression(self, binding: int, level: int) -> float:
        if level > self.depth:
            raise TooMuch("depth")
        left = self.prefix(level)
        while self.kind == "op" and _BINARY.get(self.symbol, 0) > binding:
            operator = self.symbol
            self.advance()
            if operator == "?":
                yes = self.expression(0, level + 1)
                self.take(":")
                no = self.expression(0, level + 1)
                left = yes if left else no
            elif operator in ("**", "^"):
                left = math.pow(left, self.expression(_UNARY - 1, level + 1))
            else:
                left = _binary(operator, left, self.expression(_BINARY[operator], level + 1))
        return left

    def prefix(self, level: int) -> float:
        symbol, kind = self.symbol, self.kind
        self.advance()
        if kind == "number":
            return parse_spice_number(symbol)
        if kind == "name":
            return self.call(symbol.lower(), level) if self.symbol == "(" else self.name(symbol.lower(), level)
        if symbol == "(":
            value = self.expression(0, level + 1)
            self.take(")")
            return value
        if symbol in ("-", "+", "!", "~"):
            value = self.expression(_UNARY, level + 1)
            return -value if symbol == "-" else value if symbol == "+" else float(not value)
        raise NotAQuantity(f"{self.text[:60]!r} ends too early or holds {symbol[:20]!r} where a number should be")

    def name(self, name: str, level: int) -> float:
        try:
            return self.lookup(name, level)
        except NotAQuantity:
            if name in _CONSTANTS:
                return _CONSTANTS[name]
            raise

    def call(self, name: str, level: int) -> float:
        if name not in _FUNCTIONS:
            raise NotAQuantity(f"{name[:30]!r} is no function that parameters may use")
        count, function = _FUNCTIONS[name]
        self.take("(")
        values = [self.expression(0, level + 1)]
        while self.symbol == ",":
            self.advance()
            values.append(self.expression(0, level + 1))
        self.take(")")
        if len(values) != count:
            raise NotAQuantity(f"{name} takes {count} values, not {len(values)}")
        return float(function(*values))


def _binary(operator: str, left: float, right: float) -> float:
    if operator in ("+", "-", "*"):
        return left + right if operator == "+" else left - right if operator == "-" else left * right
    if operator == "/":
        return left / right
    if operator == "%":
        return math.fmod(left, right)
    compared = {
        "==": left == right, "!=": left != right, "<": left < right, ">": left > right, "<=": left <= right,
        ">=": left >= right, "&&": bool(left and right), "&": bool(left and right),
        "||": bool(left or right), "|": bool(left or right),
    }  # fmt: skip
    return float(compared[operator])
