"""No pattern of the house takes a text of a few hundred characters for a feast: netlists come from anywhere."""

from __future__ import annotations

import ast
import importlib
import re
import signal
import time
from collections.abc import Iterator
from pathlib import Path

import pytest

from checker.netlist.limits import MOST_TEXT
from checker.pattern import _Lazy

ROOT = Path(__file__).resolve().parents[1]
SIZE = MOST_TEXT
"""Characters; readers hand on no longer text to those who ask what a part is."""
SECONDS = 2.0
"""Of the processor: a pattern of linear time needs some microseconds, of quadratic time some milliseconds, of cubic
time half a second; one that runs away would need years."""
PUMPS = " -_1aPkV0.,(){}=+~*\"'/\\:#\n"
PAIRS = ("a ", "a-", "_1", "1,", "1.", "1 ", " 1", "1-", "(a", "a=", "x_", "ab", "- ", "T ", "1k", ".1", "-1", "V(")
DIRECT = ("compile", "search", "match", "fullmatch", "sub", "split", "findall", "finditer")


def texts() -> Iterator[tuple[str, int]]:
    """Every pattern with its flags: those made lazily, which modules hold by name or in tables, and those written at
    their use."""
    found: dict[tuple[str, int], None] = {}
    for path in sorted([*ROOT.glob("checker/**/*.py"), *ROOT.glob("rules/**/*.py")]):
        name = ".".join(path.relative_to(ROOT).with_suffix("").parts).removesuffix(".__init__")
        for value in vars(importlib.import_module(name)).values():
            found.update(dict.fromkeys(held(value)))
        found.update(dict.fromkeys(written_at_use(path)))
    return iter(found)


def held(value: object) -> Iterator[tuple[str, int]]:
    """The lazy patterns in a value, or in a table of them."""
    if isinstance(value, _Lazy):
        yield value._text, value._flags
    elif isinstance(value, dict):
        yield from held(tuple(value.values()))
    elif isinstance(value, tuple):
        for each in value:
            yield from held(each)


def written_at_use(path: Path) -> Iterator[tuple[str, int]]:
    """Texts in calls such as `re.search("...", x)`; without regard to case, which is the harder way."""
    for node in ast.walk(ast.parse(path.read_text("utf-8"))):
        function = getattr(node, "func", None)
        if not (isinstance(node, ast.Call) and isinstance(function, ast.Attribute) and function.attr in DIRECT):
            continue
        if getattr(function.value, "id", "") == "re" and node.args and isinstance(node.args[0], ast.Constant):
            yield str(node.args[0].value), int(re.IGNORECASE)


def attacks(text: str) -> Iterator[str]:
    """A beginning that the pattern likes, one or two signs over and over, and an end that it does not."""
    words = dict.fromkeys(["", "1", "P", *re.findall(r"[A-Za-z0-9]{1,8}", text)[:2]])
    for pump in (*PUMPS, *PAIRS):
        body = (pump * SIZE)[:SIZE]
        for word in words:
            yield f"{word}{body}!"


def stop(*_: object) -> None:
    raise TimeoutError


def test_no_pattern_runs_away() -> None:
    old = signal.signal(signal.SIGALRM, stop)
    slow, tried = [], 0
    try:
        for text, flags in texts():
            made = re.compile(text, flags)
            tried += 1
            for attack in attacks(text):
                start = time.process_time()
                signal.setitimer(signal.ITIMER_REAL, 5 * SECONDS)
                try:
                    made.search(attack)
                    made.fullmatch(attack)
                except TimeoutError:
                    slow.append((text, attack[:20], "without end"))
                    break
                finally:
                    signal.setitimer(signal.ITIMER_REAL, 0)
                if time.process_time() - start > SECONDS:
                    slow.append((text, attack[:20], f"{time.process_time() - start:.1f} s"))
                    break
    finally:
        signal.signal(signal.SIGALRM, old)
    assert tried > 150
    assert slow == []


@pytest.mark.parametrize("text", [r"R(?:[-_ ]\w+)*", r"P(?:[\s-]+[\w-]+){0,4}?[\s_-]*FET"])
def test_a_pattern_that_runs_away_is_found(text: str) -> None:
    """The two of this kind that there once were."""
    old = signal.signal(signal.SIGALRM, stop)
    signal.setitimer(signal.ITIMER_REAL, 2.0)
    try:
        with pytest.raises(TimeoutError):
            for attack in attacks(text):
                re.fullmatch(text, attack)
                re.search(text, attack)
    finally:
        signal.setitimer(signal.ITIMER_REAL, 0)
        signal.signal(signal.SIGALRM, old)
