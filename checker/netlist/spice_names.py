"""References as an engineer says them: the element letter that a tool puts in front of `Q21` is taken off
again."""

from __future__ import annotations

import re
from collections import Counter
from collections.abc import Sequence

from checker.pattern import lazy

_SEPARATED = lazy(r"([A-Za-z])[_§](.+)", re.DOTALL)
_REFERENCE = lazy(r"[A-Za-z]{1,4}\d+[A-Za-z]?")
_INSTANCE = lazy(r"[Xx]([A-Za-z].*)", re.DOTALL)


def plain_reference(name: str) -> str:
    """`Q_Q21` and `V_Vin` without their prefix, `XU1` as `U1`; any other name as it is. `R_load` stays, since
    a person may well have written that."""
    if name[1:2] not in ("_", "§") and name[:1] not in ("X", "x"):
        return name
    separated = _SEPARATED.fullmatch(name)
    if separated:
        letter, rest = separated.groups()
        if letter in "Xx" or rest[0].lower() == letter.lower() or _REFERENCE.fullmatch(rest):
            return rest
        return name
    instance = _INSTANCE.fullmatch(name)
    return instance[1] if instance else name


def references(names: Sequence[str]) -> tuple[list[str], list[int]]:
    """The reference of each element name, unique without regard to case, whatever the order; and the
    positions of the names that repeat an earlier one, which get a suffix."""
    plain = [plain_reference(name) for name in names]
    raw_uses = Counter({name.lower() for name in names})
    plain_uses = Counter({name.lower(): short.lower() for name, short in zip(names, plain, strict=True)}.values())
    result: list[str] = []
    repeated: list[int] = []
    taken: set[str] = set()
    copies: Counter[str] = Counter()
    for index, (name, short) in enumerate(zip(names, plain, strict=True)):
        shortened = short.lower() != name.lower()
        clashes = plain_uses[short.lower()] > 1 or (shortened and raw_uses[short.lower()] > 0)
        ref = name if clashes else short
        if ref.lower() in taken:
            repeated.append(index)
            ref = _suffixed(ref, taken, copies)
        taken.add(ref.lower())
        result.append(ref)
    return result, repeated


def _suffixed(ref: str, taken: set[str], copies: Counter[str]) -> str:
    key = ref.lower()
    copies[key] = max(copies[key], 1) + 1
    while f"{key}#{copies[key]}" in taken:
        copies[key] += 1
    return f"{ref}#{copies[key]}"
