"""One element into one `Part`, by its letter. What is not understood keeps its reference and nodes and says
why."""

from __future__ import annotations

import math
import re
from collections.abc import Callable, Mapping
from dataclasses import replace
from typing import Protocol

from checker.netlist.spice_deck import Element
from checker.netlist.spice_source import read_source
from checker.netlist.types import Part, Pin
from checker.pattern import lazy
from checker.quantity.value import Origin
from checker.trouble import NotAQuantity

_PLAIN_NUMBER = lazy(r"(\d+\.?\d*|\.\d+)(e[+-]?\d+)?", re.IGNORECASE)
_KINDS = {
    "R": {"r", "res"},
    "C": {"c", "cap"},
    "L": {"l", "ind"},
    "D": {"d"},
    "Q": {"npn", "pnp", "lpnp", "qnpn", "qpnp"},
    "J": {"njf", "pjf"},
    "M": {"nmos", "pmos", "vdmos"},
}
"""Kinds of model that an element letter takes: a node may bear the name of a model of another kind."""
_WORD = lazy(r"[A-Za-z_][\w.-]*")
_NODE_COUNT = {"E": 4, "G": 4, "S": 4, "T": 4, "O": 4, "Q": 3, "J": 3, "Z": 3, "M": 4, "K": 0}
"""How many words after the name are nodes, where the line itself leaves it open; 2 for other letters."""
_ASKED = lazy(r"\b([VI])\s*\(\s*([^\s(),]+)\s*(?:,\s*([^\s(),]+)\s*)?\)", re.IGNORECASE)
"""V(a), V(a, b) or I(V1) in a formula."""
_TRIED = (0.0, -1.0, 2.0, 1e-3, -1e3)
_BEHAVIOURAL = frozenset({"poly", "value", "vol", "cur", "table", "laplace", "freq", "foster", "delay"})


class Place(Protocol):
    """Where an element stands: what the expansion knows there."""

    @property
    def origin(self) -> Origin: ...

    def ref(self, name: str) -> str:
        """Full reference of an element of the same level by its written name."""

    def net(self, name: str) -> str:
        """Key of the net that a node name means there."""

    def number(self, word: str) -> float:
        """Value of a word there. Raises `NotAQuantity`."""

    def model(self, name: str) -> tuple[str, str] | None:
        """Key text and kind of the model of that name in force there, None for none."""

    def multiplier(self) -> float:
        """How many of the enclosing instances are in parallel."""


def part_of(element: Element, place: Place) -> Part | None:
    """The part of an element card; None where not even two nodes can be told (a reference alone for K)."""
    builder = _BUILDERS.get(element.letter, _other)
    try:
        part = builder(element, place)
    except NotAQuantity as error:
        return _unknown(element, place, str(error))
    for size in ("area", "m"):
        value = part.params.get(size, 1.0) if part is not None else 1.0
        if not 0.0 < value < math.inf:
            return _unknown(element, place, f"{size} is {value:g}; it must be above zero")
    return part


def _unknown(element: Element, place: Place, reason: str, count: int | None = None) -> Part | None:
    words = element.words.positional[1:]
    wanted = _NODE_COUNT.get(element.letter, 2) if count is None else count
    if element.letter != "K" and len(words) < 2:
        return None
    nodes = words[: min(wanted, len(words))]
    # A coupling that is not understood still touches its inductors.
    controls = tuple(place.ref(word) for word in words[:-1]) if element.letter == "K" else ()
    value = " ".join(words[len(nodes) :])
    return _part(element, place, nodes, value=value, unknown=reason, params={}, controls=controls)


def _part(
    element: Element,
    place: Place,
    nodes: tuple[str, ...],
    *,
    params: Mapping[str, float] | None = None,
    **more: object,
) -> Part:
    pins = tuple(
        Pin(number=str(index), net=place.net(f"?{element.ref}.{index}" if node == "?" else node))
        for index, node in enumerate(nodes, start=1)
    )
    given = _params(element, place) if params is None else params
    return Part(
        ref=place.ref(element.name),
        letter=element.letter,
        pins=pins,
        origin=place.origin,
        params=_multiplied(given, place),
        **more,  # type: ignore[arg-type]
    )


def _params(element: Element, place: Place) -> dict[str, float]:
    """Pairs that are numbers. A plain word (a maker's name) is left out; what should compute and does not is
    named by the exception."""
    params: dict[str, float] = {}
    for key, text in element.words.named.items():
        try:
            params[key] = place.number(text)
        except NotAQuantity as error:
            if not _WORD.fullmatch(text):
                raise NotAQuantity(f"{key}: {error}") from error
    for key, texts in element.words.groups.items():
        for index, text in enumerate(texts, start=2):
            params[f"{key}{index}"] = place.number(text)
    return params


def _multiplied(params: Mapping[str, float], place: Place) -> dict[str, float]:
    result = dict(params)
    if place.multiplier() != 1:
        result["m"] = result.get("m", 1.0) * place.multiplier()
    return result


def _nodes(element: Element, count: int, what: str) -> tuple[str, ...]:
    nodes = element.words.positional[1 : count + 1]
    if len(nodes) < count:
        raise NotAQuantity(f"too few words: {what}")
    return nodes


def _passive(element: Element, place: Place) -> Part:
    """R, C, L: two nodes, then a value, a model, or both in either order; `R=`, `C=`, `L=`, `value=` as
    well."""
    nodes = _nodes(element, 2, "expected two nodes and a value")
    rest = element.words.positional[3:]
    named = element.words.named
    key = next((key for key in (element.letter.lower(), "value", "val") if key in named), "")
    at = next((index for index, word in enumerate(rest[:2]) if _model(word, element, place)), None)
    model = "" if at is None else _model(rest[at], element, place) or ""
    words = [word for index, word in enumerate(rest) if index != at]
    if not words and not key and not model:
        raise NotAQuantity("no value is written")
    number = place.number(words[0] if words else named[key]) if words or key else None
    value = " ".join(words) if words else named[key] if key else ""
    return _part(element, place, nodes, value=value, number=number, model=model)


def _source(element: Element, place: Place) -> Part:
    nodes = _nodes(element, 2, "expected two nodes")
    words = element.words.positional[3:]
    source = read_source(words, element.words.named, place.number, amperes=element.letter == "I")
    others = {key: text for key, text in element.words.named.items() if key not in ("dc", "ac")}
    params = {}
    for key, text in others.items():
        params[key] = place.number(text)
    pairs = [f"{key}={text}" for key, text in element.words.named.items() if key in ("dc", "ac")]
    return _part(
        element,
        place,
        nodes,
        params=params,
        value=" ".join([*pairs, *words]),
        number=source.dc,
        source=source,
    )


def _device(least: int, most: int, what: str) -> Callable[[Element, Place], Part]:
    """D, Q, J, M: nodes, the model's name, then an area factor and bare words."""

    def build(element: Element, place: Place) -> Part:
        words = [word for word in element.words.positional[1:] if word.lower() not in ("off", "on")]
        at = _model_position(words, least, most, element, place)
        if at is None:
            raise NotAQuantity(f"too few words: expected {what} and a model")
        named = _model(words[at], element, place)
        params = _params(element, place)
        if len(words) > at + 1:
            params.setdefault("area", place.number(words[at + 1]))
        if len(words) > at + 2:
            raise NotAQuantity(f"{words[at + 2][:40]!r} is not expected behind the model")
        nodes = tuple(word.strip("[]") if len(word) > 2 else word for word in words[:at])
        return _part(element, place, nodes, params=params, value=words[at], model=named or words[at])

    return build


def _model(word: str, element: Element, place: Place) -> str | None:
    """Key text of the model a word names, where its kind fits the element."""
    found = place.model(word)
    return found[0] if found and found[1] in _KINDS[element.letter] else None


def _model_position(words: list[str], least: int, most: int, element: Element, place: Place) -> int | None:
    """Which word is the model: the first that names one in force, else the last but an area factor behind
    it."""
    for index in range(least, min(most, len(words) - 1) + 1):
        if _model(words[index], element, place):
            return index
    last = len(words) - 1
    if last > least and _PLAIN_NUMBER.fullmatch(words[last]) and not _PLAIN_NUMBER.fullmatch(words[last - 1]):
        last -= 1
    return last if least <= last <= most else None


def _controlled(by_nodes: bool) -> Callable[[Element, Place], Part | None]:
    """E, G by a voltage between two nodes; F, H by the current of a V element. Linear ones only are
    understood."""

    def build(element: Element, place: Place) -> Part | None:
        words = _without_polynomial(element.words.positional[1:])
        if linear := _linear(element, place):
            return linear
        if any(word.lower() in _BEHAVIOURAL for word in (*words[2:3], *element.words.named)):
            return _unknown(element, place, "a controlled source that is not linear is not modelled", count=2)
        if len(words) != (5 if by_nodes else 4):
            wanted = "four nodes and a gain" if by_nodes else "two nodes, a V element and a gain"
            raise NotAQuantity(f"expected {wanted}")
        gain = place.number(words[-1])
        nodes = words[:4] if by_nodes else words[:2]
        controls = () if by_nodes else (place.ref(words[2]),)
        return _part(element, place, nodes, value=words[-1], number=gain, controls=controls)

    return build


def _linear(element: Element, place: Place) -> Part | None:
    """The controlled source that a formula amounts to: `B1 a b V={2*V(c,d)}` is E, `G1 a b VALUE={I(VX)/5}` is F.

    One voltage or current may be named. That the formula is proportional to it is tried at several values; None where
    it is not, or where there is no formula.
    """
    named = element.words.named
    key = next((key for key in ("v", "i", "value") if key in named), "")
    if not key or element.letter not in "BEG":
        return None
    asked = _ASKED.findall(named[key])
    if len(set(asked)) != 1:
        return None

    def at(value: float) -> float:
        return place.number("{" + _ASKED.sub(f"({value!r})", named[key].strip("{}'\"")) + "}")

    gain = at(1.0)
    if any(abs(at(x) - x * gain) > 1e-9 * abs(x * gain) for x in _TRIED):
        return None
    kind, first, second = asked[0][0].upper(), asked[0][1].strip(), asked[0][2].strip()
    current_out = key == "i" or (key == "value" and element.letter == "G")
    letter = {"V": "EG", "I": "HF"}[kind][current_out]
    nodes = (*element.words.positional[1:3], first, second or "0") if kind == "V" else element.words.positional[1:3]
    controls = () if kind == "V" else (place.ref(first),)
    part = _part(element, place, nodes, params={}, value=named[key], number=gain, controls=controls)
    return replace(part, letter=letter)


def _without_polynomial(words: tuple[str, ...]) -> tuple[str, ...]:
    """`a b POLY(1) c d 0 g` is linear: the same as `a b c d g` (for F and H, `a b POLY(1) v 0 g`)."""
    if len(words) in (7, 8) and words[2].lower() == "poly" and words[3] == "1":
        offset = words[-2]
        if _PLAIN_NUMBER.fullmatch(offset) and float(offset) == 0:
            return (*words[:2], *words[4:-2], words[-1])
    return words


def _coupling(element: Element, place: Place) -> Part:
    words = element.words.positional[1:]
    if len(words) < 3:
        raise NotAQuantity("expected two or more inductors and a coupling factor")
    controls = tuple(place.ref(word) for word in words[:-1])
    return _part(element, place, (), value=words[-1], number=place.number(words[-1]), controls=controls)


def _line(element: Element, place: Place) -> Part:
    """T: a lossless line, four nodes and its impedance and delay as pairs."""
    nodes = _nodes(element, 4, "expected four nodes")
    if "z0" not in element.words.named and "zo" not in element.words.named:
        raise NotAQuantity("no impedance Z0 is written")
    return _part(element, place, nodes, value=" ".join(element.words.positional[5:]))


def _lossy(element: Element, place: Place) -> Part:
    """O: a line with losses, four nodes and a model of kind LTRA."""
    nodes = _nodes(element, 4, "expected four nodes and a model")
    words = element.words.positional[5:]
    if not words:
        raise NotAQuantity("expected four nodes and a model")
    known = place.model(words[0])
    return _part(element, place, nodes, value=words[0], model=known[0] if known else words[0])


def _instance(element: Element, place: Place) -> Part | None:
    """X whose subcircuit is not there: a part with pins by position. The name is the last word."""
    words = element.words.positional[1:]
    if len(words) < 2:
        return None
    try:
        params = _params(element, place)
    except NotAQuantity:
        params = {}
    return _part(element, place, words[:-1], params=params, value=words[-1], model=words[-1])


def _behavioural(reason: str, count: int) -> Callable[[Element, Place], Part | None]:
    return lambda element, place: _unknown(element, place, reason, count=count)


def _other(element: Element, place: Place) -> Part | None:
    """A letter without meaning in SPICE text (`U2 ...`): all words but the last are taken for nodes."""
    words = element.words.positional[1:]
    if len(words) < 3:
        return None
    reason = f"elements of letter {element.letter} are not understood; the words are taken for nodes and a name"
    return _part(element, place, words[:-1], params={}, value=words[-1], model=words[-1], unknown=reason)


_BUILDERS: dict[str, Callable[[Element, Place], Part | None]] = {
    "R": _passive,
    "C": _passive,
    "L": _passive,
    "V": _source,
    "I": _source,
    "D": _device(2, 2, "two nodes"),
    "Q": _device(3, 5, "three to five nodes"),
    "J": _device(3, 3, "three nodes"),
    "M": _device(3, 4, "three or four nodes"),
    "K": _coupling,
    "E": _controlled(by_nodes=True),
    "G": _controlled(by_nodes=True),
    "F": _controlled(by_nodes=False),
    "H": _controlled(by_nodes=False),
    "T": _line,
    "O": lambda element, place: _lossy(element, place),
    "X": _instance,
    "B": lambda element, place: (
        _linear(element, place) or _unknown(element, place, "a behavioural source is not modelled", count=2)
    ),
    "S": _behavioural("a voltage-controlled switch is not modelled", 4),
    "W": _behavioural("a current-controlled switch is not modelled", 2),
}
