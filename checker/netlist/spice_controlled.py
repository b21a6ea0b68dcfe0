"""Controlled sources: E, G by a voltage, F, H by a current, B by a formula. Only linear ones are understood."""

from __future__ import annotations

import re
from collections.abc import Sequence

from checker.netlist.spice_deck import Element
from checker.netlist.spice_parts import PLAIN_NUMBER, Place, new_part, unknown_part
from checker.netlist.spice_words import split_assignments
from checker.netlist.types import Part, Source
from checker.pattern import lazy
from checker.shape import frozen
from checker.trouble import NotAQuantity

_KEY = lazy(r"\s(?:(V|I|VALUE|VOL|CUR)\s*=(?!=)|(VALUE|VOL|CUR)(?=\s*[{'\"]))\s*(.*)", re.IGNORECASE | re.DOTALL)
_PAIR = lazy(r"\s[A-Za-z_]\w*\s*=(?!=)")
_ASKED = lazy(r"\b([VI])\s*\(\s*([^\s(),]+)\s*(?:,\s*([^\s(),]+)\s*)?\)", re.IGNORECASE)
"""V(a), V(a, b) or I(V1) in a formula."""
_TRIED = (0.0, *(sign * size for size in (1e-3, 0.1, 0.7, 1.5, 4.0, 9.0, 20.0, 60.0, 1e3) for sign in (1.0, -1.0)))
"""A formula with a corner within the voltages of a board shows it between these."""
_SHAPED = frozenset({"poly", "value", "vol", "cur", "table", "laplace", "freq", "foster", "delay"})
_NOT_LINEAR = {
    "B": "a behavioural source that is not linear is not modelled",
    "": "a controlled source that is not linear is not modelled",
}


@frozen
class Formula:
    """`text` of what a source puts out, a `current` or a voltage; `m`: how many are in parallel."""

    text: str
    current: bool
    m: str = ""


def controlled(element: Element, place: Place) -> Part | None:
    """The part of an E, F, G, H or B card; one that is no factor of a single voltage or current is not understood."""
    formula = _formula(element)
    if formula is not None:
        part = _proportional(element, place, formula)
        return part or _unknown(element, place)
    words = _without_polynomial(element.words.positional[1:])
    if element.letter == "B" or any(word.lower() in _SHAPED for word in (*words[2:3], *element.words.named)):
        return _unknown(element, place)
    by_nodes = element.letter in "EG"
    if len(words) != (5 if by_nodes else 4):
        wanted = "four nodes and a gain" if by_nodes else "two nodes, a V element and a gain"
        raise NotAQuantity(f"expected {wanted}")
    gain = place.number(words[-1])
    nodes = words[:4] if by_nodes else words[:2]
    controls = () if by_nodes else (place.ref(words[2]),)
    return new_part(element, place, nodes, value=words[-1], number=gain, controls=controls)


def _unknown(element: Element, place: Place) -> Part | None:
    return unknown_part(element, place, _NOT_LINEAR.get(element.letter, _NOT_LINEAR[""]), count=2)


def _formula(element: Element) -> Formula | None:
    """The formula of a card, blanks and all; None where there is none. Raises `NotAQuantity` where more than a count
    of sources follows it."""
    found = _KEY.search(element.card.text) if element.letter in "BEG" else None
    if found is None:
        return None
    text, behind = _cut(found[3].strip())
    key = (found[1] or found[2]).lower()
    pairs = dict(split_assignments(behind))
    if behind and (set(pairs) != {"m"} or _PAIR.match(f" {behind}") is None):
        raise NotAQuantity(f"{behind[:40]!r} is not expected behind the formula")
    current = key in ("i", "cur") or (key == "value" and element.letter == "G")
    return Formula(text=text, current=current, m=pairs.get("m", ""))


def _cut(text: str) -> tuple[str, str]:
    """A formula in braces, quotes or neither, and what follows it."""
    opened = text[:1]
    if opened == "{":
        depth = 0
        for at, sign in enumerate(text):
            depth += (sign == "{") - (sign == "}")
            if depth == 0:
                return text[1:at], text[at + 1 :].strip()
        return text[1:], ""
    if opened and opened in "'\"":
        inner, _, behind = text[1:].partition(opened)
        return inner, behind.strip()
    pair = _PAIR.search(text)
    return (text, "") if pair is None else (text[: pair.start()], text[pair.start() :].strip())


def _proportional(element: Element, place: Place, formula: Formula) -> Part | None:
    """The controlled source that a formula amounts to: `B1 a b V={2*V(c,d)}` is E, `G1 a b VALUE={I(VX)/5}` is F, and
    `B1 a b V=5` is V.

    One voltage or current may be named. That the formula is proportional to it is tried at several values; None where
    it is not.
    """
    asked = {tuple(map(str.lower, words)): words for words in _ASKED.findall(formula.text)}

    def at(value: float) -> float:
        return place.number("{" + _ASKED.sub(f"({value!r})", formula.text) + "}")

    gain = at(1.0)
    if len(asked) > 1 or (asked and any(abs(at(x) - x * gain) > 1e-9 * abs(x * gain) for x in _TRIED)):
        return None
    params = {"m": place.number(formula.m)} if formula.m else {}
    outputs = element.words.positional[1:3]
    if not asked:
        source = Source(dc=gain)
        letter = "I" if formula.current else "V"
        return _like(element, place, letter, outputs, value=formula.text, number=gain, params=params, source=source)
    ((kind, first, second),) = asked.values()
    by_voltage = kind in "Vv"
    letter = ("EG" if by_voltage else "HF")[formula.current]
    nodes = (*outputs, first, second or "0") if by_voltage else outputs
    controls = () if by_voltage else (place.ref(first),)
    return _like(element, place, letter, nodes, value=formula.text, number=gain, params=params, controls=controls)


def _like(element: Element, place: Place, letter: str, nodes: Sequence[str], **more: object) -> Part:
    """The part as if its card began with another letter."""
    from dataclasses import replace

    return replace(new_part(element, place, tuple(nodes), **more), letter=letter)  # type: ignore[arg-type]


def _without_polynomial(words: tuple[str, ...]) -> tuple[str, ...]:
    """`a b POLY(1) c d 0 g` is linear: the same as `a b c d g` (for F and H, `a b POLY(1) v 0 g`)."""
    if len(words) in (7, 8) and words[2].lower() == "poly" and words[3] == "1":
        offset = words[-2]
        if PLAIN_NUMBER.fullmatch(offset) and float(offset) == 0:
            return (*words[:2], *words[4:-2], words[-1])
    return words
