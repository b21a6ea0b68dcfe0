"""Which device a part is: the model written for it, the card of its part number, and what the symbol says."""

from __future__ import annotations

import re
from collections.abc import Collection, Mapping
from dataclasses import replace
from typing import Final

from checker.cards.find import find_card, generic_card
from checker.cards.load import squeeze
from checker.cards.types import Card, CardKind
from checker.circuit.draft import Draft
from checker.circuit.parts import symbol_name
from checker.netlist.types import Model, Part
from checker.pattern import lazy
from checker.shape import frozen
from checker.trouble import InputTrouble

BIPOLAR: Final[tuple[CardKind, ...]] = ("npn", "pnp")
JUNCTION_FET: Final[tuple[CardKind, ...]] = ("njf", "pjf")
FET: Final[tuple[CardKind, ...]] = (*JUNCTION_FET, "nmos", "pmos")
DIODE: Final[tuple[CardKind, ...]] = ("diode", "zener", "led")
_MODEL_KIND: Final[Mapping[str, CardKind]] = {
    "npn": "npn",
    "pnp": "pnp",
    "lpnp": "pnp",
    "d": "diode",
    "njf": "njf",
    "pjf": "pjf",
    "nmos": "nmos",
    "pmos": "pmos",
}
_FET_WORD: Final = lazy(
    r"(?<![A-Z])([NP])[-_ ]?(?:channel|ch)?(?:(?:[\s-]++\w++){0,6}?[\s-]++\w*?)?[\s_-]*(JFET|JF|D?MOS|FET)",
    re.IGNORECASE,
)
_FET_WORD_LAST: Final = lazy(r"(JFET|MOS(?:FET)?|FET)_?([NP])(?![A-Z])", re.IGNORECASE)
_WORD: Final = lazy(r"NPN|PNP", re.IGNORECASE)
_JIS: Final = lazy(r"Q?2S([ABCD])\d", re.IGNORECASE)
"""2SA and 2SB are PNP, 2SC and 2SD NPN (JIS C 7012, from memory)."""
_PLACEHOLDER: Final = lazy(r"[~?*]*|Q\??|D\??|NPN|PNP|LED|DIODE|ZENER|D_\w+|Q_\w+|BJT|TRANSISTOR\w*", re.IGNORECASE)
_SPECIAL: Final = (
    ("darlington", "a model of the Darlington {ref}"),
    ("pre-?bias|digital transistor|built-in bias|bias resistor", "the base resistors of {ref}"),
    ("photo|opto", "the light on {ref}"),
)
_PREBIASED: Final = lazy(r"(?:L?MUN[25]\d|P?DT[ABC]\w?\d|UMD|RN[12]\d{3}|BCR1\d\d)\w*", re.IGNORECASE)


@frozen
class Identity:
    """`card` gives ratings, and the model where `model` is None; `source` says in words where the model is
    from."""

    kind: CardKind
    card: Card | None
    model: Model | None = None
    source: str = ""

    @property
    def written(self) -> Mapping[str, float]:
        """Model parameters as written."""
        return self.model.params if self.model is not None else self.card.model if self.card is not None else {}


def intended_card(draft: Draft, part: Part) -> Card | None:
    """The card that the intent names for a part, else the project's own card of its value or model.

    Raises InputTrouble for a card that does not exist.
    """
    said = draft.said(part.ref)
    if said is None or not said.card:
        names = (part.model, part.value) if draft.own_cards else ()
        return next((draft.own_cards[squeeze(name)] for name in names if squeeze(name) in draft.own_cards), None)
    card = draft.own_cards.get(squeeze(said.card)) or find_card(said.card)
    if card is None:
        message = f"[[part]] {part.ref!r}: no card is called {said.card!r}; see `stageproof parts`"
        raise InputTrouble(message, file=said.origin.file, line=said.origin.line)
    return card


def card_by_value(part: Part) -> Card | None:
    """The card of the part number that the value or model name carries, also behind a letter
    (`Q2N3904`, `D1N4148`)."""
    texts = [part.model, part.fields.get("Sim.Name", ""), part.fields.get("Spice_Model", ""), part.value]
    if re.fullmatch(r"BZ[XVTG]\w+", symbol_name(part), re.IGNORECASE):
        texts.insert(0, symbol_name(part) + part.value)  # a Zener series as symbol, its voltage as value
    for text in dict.fromkeys(texts):
        bare = text[1:] if text[:1] in "QqDd" else ""
        for candidate in (text, text.split()[0] if text.split() else "", bare):
            if candidate and not _PLACEHOLDER.fullmatch(candidate):
                card = find_card(candidate)
                if card is not None:
                    return card
    return None


def identify(draft: Draft, part: Part, family: Collection[CardKind]) -> Identity | None:
    """Model and card of a semiconductor; None where not even the kind is known.

    `.model` outranks the card for the model, never for ratings. The value outranks the symbol. Where no card
    fits, the generic card of the kind stands in, marked `assumed`.
    """
    card = intended_card(draft, part) or card_by_value(part)
    model = draft.netlist.models.get((part.model or part.value).lower())
    if model is not None and model.kind in _MODEL_KIND:
        return Identity(kind=_MODEL_KIND[model.kind], card=card, model=model, source=f".model {model.name}")
    hints = hints_of(part)
    if card is not None:
        _compare(draft, part, card, hints, family)
        if draft.netlist.format == "spice":
            draft.notes.add("models", f"no .model {part.model}; the card {card.name} is used", part.ref)
        return Identity(kind=card.kind, card=card, source=f"card {card.name}")
    kind = next((kind for _, kind in hints if kind in family), None)
    return None if kind is None else generic(draft, part, kind)


def generic(draft: Draft, part: Part, kind: CardKind) -> Identity:
    """The generic card of a kind in place of an unknown part, noted."""
    card = replace(generic_card(kind), assumed=True)
    name = part.model or part.value
    shown = kind.upper() if kind in (*BIPOLAR, *FET) else "LED" if kind == "led" else kind
    draft.notes.add("models", f"no card for {name!r}; generic {shown} figures used", part.ref)
    return Identity(kind=kind, card=card, source=f"generic {shown} card")


def polarity_of(kind: CardKind) -> float:
    """-1 for PNP and P channel, else +1."""
    return -1.0 if kind in ("pnp", "pjf", "pmos") else 1.0


def _fet_word(text: str) -> CardKind | None:
    """The kind of field-effect transistor that a text names: "Q_NMOS_GDS", "N-channel JFET", "MOSFET_P"."""
    found, last = _FET_WORD.search(text), _FET_WORD_LAST.search(text)
    if found is None and last is None:
        return None
    channel, sort = found.groups() if found is not None else last.groups()[::-1]  # type: ignore[union-attr]
    if channel.upper() == "N":
        return "njf" if sort.upper().startswith("J") else "nmos"
    return "pjf" if sort.upper().startswith("J") else "pmos"


def special(part: Part) -> str | None:
    """The datum that a Darlington, pre-biased or light-driven transistor lacks, None for an ordinary one."""
    for pattern, datum in _SPECIAL:
        if re.search(pattern, f"{part.description} {symbol_name(part)} {part.value}", re.IGNORECASE):
            return datum.format(ref=part.ref)
    if _PREBIASED.match(part.value) or _PREBIASED.match(symbol_name(part)):
        return _SPECIAL[1][1].format(ref=part.ref)
    return None


def hints_of(part: Part) -> list[tuple[str, CardKind]]:
    """What else tells the kind: (who says so, kind), the most trustworthy first."""
    found: list[tuple[str, CardKind]] = []
    fields = f"{part.fields.get('Sim.Device', '')} {part.fields.get('Sim.Type', '')}"
    texts = [("the simulation field", fields), ("the model name", part.model), ("the value", part.value)]
    texts += [("the symbol", symbol_name(part)), ("the description", part.description)]
    for who, text in texts:
        word = _WORD.search(text)
        japanese = _JIS.match(text)
        fet = _fet_word(text)
        if fet is not None:
            found.append((who, fet))
        elif word is not None:
            found.append((who, "npn" if word[0].upper() == "NPN" else "pnp"))
        elif japanese is not None:
            found.append((who, "pnp" if japanese[1].upper() in "AB" else "npn"))
        elif who == "the symbol" and text and not _PLACEHOLDER.fullmatch(text):
            card = find_card(text)
            if card is not None:
                found.append((who, card.kind))
    return found


def _compare(
    draft: Draft, part: Part, card: Card, hints: list[tuple[str, CardKind]], family: Collection[CardKind]
) -> None:
    """Note every hint that contradicts the part number."""
    for who, kind in hints:
        if kind in family and card.kind in family and kind != card.kind and family == BIPOLAR:
            text = f"{card.name} is {card.kind.upper()}, but {who} says {kind.upper()}; the part number is used"
            draft.notes.add("models", text, part.ref)
