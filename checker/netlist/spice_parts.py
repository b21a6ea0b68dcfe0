"""One element into one `Part`, by its letter. What is not understood keeps its reference and nodes and says
why."""

from __future__ import annotations

import math
import re
from collections.abc import Callable, Mapping
from typing import Protocol

from checker.netlist.limits import MOST_TEXT
from checker.netlist.spice_deck import Element
from checker.netlist.spice_pads import REFERENCE
from checker.netlist.spice_source import read_source
from checker.netlist.types import Part, Pin
from checker.pattern import lazy
from checker.quantity.value import Origin
from checker.trouble import NotAQuantity

PLAIN_NUMBER = lazy(r"(\d++\.?\d*+|\.\d++)(e[+-]?\d++)?", re.IGNORECASE)
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
_UNIT = lazy(
    r"[\d.,]+(?:e[+-]?\d+)?(?:(?:meg|[tgkmunpxµμ])?(ohms?|Ω|hz|farads?|henr(?:y|ies)|h)|(?:meg|[tgkmunpxµμ])(f))",
    re.IGNORECASE,
)
"""A number with its unit; a lone `f` is femto."""
_UNIT_ENDS = frozenset("sSmMΩωzZdDyYhHfF")
_UNIT_OF = {"o": "R", "ω": "R", "f": "C", "h": "L"}
_PARTED = lazy(r"(?:meg|[tgkmunpxµμ])(?:ohms?|Ω|f|h)?", re.IGNORECASE)
_BESIDE = lazy(
    r"[A-Za-z].*|(?:±|\+/?-)?\d+(?:[.,]\d+)?%|\d+(?:[.,]\d+)?(?:/\d+)?[kmuµμ]?[VWA](?:dc|ac|rms)?|0\d{3}|1206|1210|2512",
    re.IGNORECASE,
)
"""What may stand behind a value and alter nothing: plain words, a tolerance, a rating, a size."""
_NODE_COUNT = {"E": 4, "G": 4, "S": 4, "T": 4, "O": 4, "Q": 3, "J": 3, "Z": 3, "M": 4, "K": 0}
"""How many words after the name are nodes, where the line itself leaves it open; 2 for other letters."""


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

    def lists_pads(self) -> bool:
        """Whether the file lists the pads and values of a schematic (see `spice_pads`)."""


def part_of(element: Element, place: Place) -> Part | None:
    """The part of an element card; None where not even two nodes can be told (a reference alone for K)."""
    builder = _BUILDERS.get(element.letter, _other)
    found = REFERENCE.fullmatch(element.ref) if place.lists_pads() else None
    if found and found[1].upper() not in _BUILDERS:
        builder = _other
    try:
        part = builder(element, place)
    except NotAQuantity as error:
        return unknown_part(element, place, str(error))
    for size in ("area", "m"):
        value = part.params.get(size, 1.0) if part is not None else 1.0
        if not 0.0 < value < math.inf:
            return unknown_part(element, place, f"{size} is {value:g}; it must be above zero")
    return part


def unknown_part(element: Element, place: Place, reason: str, count: int | None = None) -> Part | None:
    """The part with its nodes and why it is not understood; None where not even two nodes are written. `count`: how
    many words are nodes, where it is not the usual number of the letter."""
    words = element.words.positional[1:]
    wanted = _NODE_COUNT.get(element.letter, 2) if count is None else count
    if place.lists_pads():
        wanted = max(len(words) - 1, 0)
    if element.letter != "K" and len(words) < 2:
        return None
    nodes = words[: min(wanted, len(words))]
    # A coupling that is not understood still touches its inductors.
    coupling = element.letter == "K" and not place.lists_pads()
    controls = tuple(place.ref(word) for word in words[:-1]) if coupling else ()
    value = " ".join(words[len(nodes) :])[:MOST_TEXT]
    return new_part(element, place, nodes, value=value, unknown=reason, params={}, controls=controls)


def new_part(
    element: Element,
    place: Place,
    nodes: tuple[str, ...],
    *,
    params: Mapping[str, float] | None = None,
    **more: object,
) -> Part:
    """The part of a card with these nodes; `params`: instead of the pairs on the card. Raises `NotAQuantity` where a
    pair does not compute."""
    pins = tuple(
        Pin(number=str(index), net=place.net(f"?{element.ref}.{index}" if node == "?" else node))
        for index, node in enumerate(nodes, start=1)
    )
    given = _params(element, place) if params is None else params
    for key, text in more.items():
        if isinstance(text, str) and len(text) > MOST_TEXT:
            if key == "model":
                raise NotAQuantity(f"a name of {len(text)} characters is none of a model")
            more[key] = text[:MOST_TEXT]
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
    if place.lists_pads():
        # A value of a schematic, to be read by a schematic's rules.
        return new_part(element, place, nodes, value=" ".join(rest), params={})
    named = element.words.named
    key = next((key for key in (element.letter.lower(), "value", "val") if key in named), "")
    at = next((index for index, word in enumerate(rest[:2]) if _model(word, element, place)), None)
    model = "" if at is None else _model(rest[at], element, place) or ""
    words = [word for index, word in enumerate(rest) if index != at]
    if not words and not key and not model:
        raise NotAQuantity("no value is written")
    text = words[0] if words else named[key] if key else ""
    params = _params(element, place)
    if len(words) > 1:
        for word in _behind_value(words[1:]):
            params.setdefault("tol", place.number(word))
    number = place.number(_of_its_kind(element, text)) if text else None
    return new_part(element, place, nodes, params=params, value=" ".join(words) or text, number=number, model=model)


def _behind_value(words: list[str]) -> list[str]:
    """The percentages among the words behind a value. Ratings and plain words may stand there as well; whatever else
    does is part of what the line says and must not be dropped."""
    for word in words:
        if _PARTED.fullmatch(word):
            raise NotAQuantity(f"a blank parts the value from {word[:20]!r}: which value is meant cannot be told")
        if not _BESIDE.fullmatch(word):
            raise NotAQuantity(f"{word[:40]!r} is not expected behind the value")
    return [word.lstrip("±+/-") for word in words if word.endswith("%")]


def _of_its_kind(element: Element, text: str) -> str:
    """`text`, unless it bears the unit of another kind of part: `10uF` of a coil."""
    # Most values end in a digit or a prefix.
    found = _UNIT.fullmatch(text) if text[-1] in _UNIT_ENDS else None
    unit = (found[1] or found[2]).lower() if found else ""
    if unit and (unit == "hz" or _UNIT_OF[unit[0]] != element.letter):
        raise NotAQuantity(f"{text[:40]!r} is the value of another kind of part")
    return text


def _source(element: Element, place: Place) -> Part:
    nodes = _nodes(element, 2, "expected two nodes")
    words = element.words.positional[3:]
    source = read_source(words, element.words.named, place.number, amperes=element.letter == "I")
    others = {key: text for key, text in element.words.named.items() if key not in ("dc", "ac")}
    params = {}
    for key, text in others.items():
        params[key] = place.number(text)
    pairs = [f"{key}={text}" for key, text in element.words.named.items() if key in ("dc", "ac")]
    return new_part(
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
            amount = "many" if len(words) > most + 1 else "few"
            raise NotAQuantity(f"too {amount} words: expected {what} and a model")
        named = _model(words[at], element, place)
        params = _params(element, place)
        if len(words) > at + 1:
            params.setdefault("area", place.number(words[at + 1]))
        if len(words) > at + 2:
            raise NotAQuantity(f"{words[at + 2][:40]!r} is not expected behind the model")
        nodes = tuple(word.strip("[]") if len(word) > 2 else word for word in words[:at])
        return new_part(element, place, nodes, params=params, value=words[at], model=named or words[at])

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
    if last > least and PLAIN_NUMBER.fullmatch(words[last]) and not PLAIN_NUMBER.fullmatch(words[last - 1]):
        last -= 1
    return last if least <= last <= most else None


def _controlled(element: Element, place: Place) -> Part | None:
    from checker.netlist.spice_controlled import controlled  # few decks have any

    return controlled(element, place)


def _coupling(element: Element, place: Place) -> Part:
    words = element.words.positional[1:]
    if len(words) < 3:
        raise NotAQuantity("expected two or more inductors and a coupling factor")
    controls = tuple(place.ref(word) for word in words[:-1])
    return new_part(element, place, (), value=words[-1], number=place.number(words[-1]), controls=controls)


def _line(element: Element, place: Place) -> Part:
    """T: a lossless line, four nodes and its impedance and delay as pairs."""
    nodes = _nodes(element, 4, "expected four nodes")
    if "z0" not in element.words.named and "zo" not in element.words.named:
        raise NotAQuantity("no impedance Z0 is written")
    return new_part(element, place, nodes, value=" ".join(element.words.positional[5:]))


def _lossy(element: Element, place: Place) -> Part:
    """O: a line with losses, four nodes and a model of kind LTRA."""
    nodes = _nodes(element, 4, "expected four nodes and a model")
    words = element.words.positional[5:]
    if not words:
        raise NotAQuantity("expected four nodes and a model")
    known = place.model(words[0])
    return new_part(element, place, nodes, value=words[0], model=known[0] if known else words[0])


def _instance(element: Element, place: Place) -> Part | None:
    """X whose subcircuit is not there: a part with pins by position. The name is the last word."""
    words = element.words.positional[1:]
    if len(words) < 2:
        return None
    try:
        params = _params(element, place)
    except NotAQuantity:
        params = {}
    return new_part(element, place, words[:-1], params=params, value=words[-1], model=words[-1])


def _behavioural(reason: str, count: int) -> Callable[[Element, Place], Part | None]:
    return lambda element, place: unknown_part(element, place, reason, count=count)


def _other(element: Element, place: Place) -> Part | None:
    """A letter without meaning in SPICE text (`U2 ...`): all words but the last are taken for nodes."""
    words = element.words.positional[1:]
    if len(words) < (2 if place.lists_pads() else 3):
        return None
    reason = f"elements of letter {element.letter} are not understood; the words are taken for nodes and a name"
    return new_part(element, place, words[:-1], params={}, value=words[-1], model=words[-1], unknown=reason)


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
    "E": _controlled,
    "G": _controlled,
    "F": _controlled,
    "H": _controlled,
    "B": _controlled,
    "T": _line,
    "O": _lossy,
    "X": _instance,
    "S": _behavioural("a voltage-controlled switch is not modelled", 4),
    "W": _behavioural("a current-controlled switch is not modelled", 2),
}
