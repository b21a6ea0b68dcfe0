"""From the value text of a schematic to a card: "BC847BLT1G", "2n3904 (NPN)", "BC 547 B".

A name is known whole, or with a gain group and the makers' endings for tape, plating and outline behind it.
Anything else behind a known name may be another device, so it is no match: better no card than a wrong one.
"""

from __future__ import annotations

import re
from typing import Final

from checker.cards.load import card_from, index, rows, squeeze
from checker.cards.types import Card, CardKind
from checker.pattern import lazy

MAX_NAME: Final = 80
"""Longer texts are descriptions; the name stands at their head."""

_ENDINGS: Final = lazy(
    r"(?:TO92|TO18|TO220|TO126|SOT23(?:3)?|SOT323|SOT363|SOT223|SC70|DO35|DO41|SOD\d{2,3}|SMA|SMD|THT)?"
    r"(?:"
    r"L?T[13]G?|RL(?:RA|RP|RM)?G?|ZL1G?|TFR?|TAR?|TR|TRL|BU|TP|AP|G|LF"  # tape, reel, bulk, plating
    r"|7F?|13F?|[1-3][13]5|113|E3|GS[01]8|D\d\dZ"
    r"|[EH]6327|E6433|(?:[EH]6327)?[HX]TSA1"
    r"|(?:TR|TRL)?PBF"
    r")?Q?"
)
_MAKERS: Final = lazy(r"(?:JANTXV|JANTX|JAN|NSV|S)(?=(?:2N|1N|MMBT|BC8)\d?)")
_CUT: Final = lazy(r"[^A-Za-z0-9 ._/|-]")
_ABBREVIATED: Final = lazy(r"\s*[A-Za-z0-9]{1,2}\s*")
"""The end of a second name whose head is left out; only the ending E3 has a slash of its own (E3/54)."""
_LETTER_I: Final = lazy(r"^\s*[Ii][Nn](?=\d{3})")
"""IN4148 for 1N4148: a common slip."""
_POLARITIES: Final = {"NPN": "npn", "PNP": "pnp"}


def find_card(value: str) -> Card | None:
    """The card that `value` names, None where that is in doubt.

    Several names ("BC547/BC548") count only if all that are known are of one kind; "2N3904/6" names two types
    and none for certain. A polarity written beside the name must agree with the card.
    """
    text = _CUT.split(value[:MAX_NAME].strip(), maxsplit=1)[0].strip()
    names = re.split(r"[/|]", text)
    found = [card for card in map(_one, names) if card is not None]
    if any(_ABBREVIATED.fullmatch(name) for name in names[1:]) and not names[0].upper().endswith("E3"):
        return None
    if not found or any(card.kind != found[0].kind for card in found):
        return None
    said = {kind for word, kind in _POLARITIES.items() if word in value.upper()}
    if found[0].kind in _POLARITIES.values() and said and found[0].kind not in said:
        return None
    return found[0]


def generic_card(kind: CardKind) -> Card:
    """A typical small device of `kind` for a part whose type is not known; `assumed` is set."""
    return card_from(rows("generic")[squeeze(f"generic-{kind}")])


def all_names() -> tuple[str, ...]:
    """Every part name with a card, sorted; gain groups and aliases not listed."""
    names = {row["name"] for family in set(index().values()) for row in rows(family).values()}
    return tuple(sorted(names))


def _one(text: str) -> Card | None:
    text = _LETTER_I.sub("1N", text)
    words = text.replace("_", " ").split()
    if not words:
        return None
    return _lookup(squeeze(text)) or (_lookup(squeeze(words[0])) if len(words) > 1 else None)


def _lookup(name: str) -> Card | None:
    """Longest known name first; what follows it must be a gain group and an ending."""
    known = index()
    maker = _MAKERS.match(name) if name[:1] in "JNS" else None
    for candidate in (name, name[maker.end() :]) if maker is not None else (name,):
        for length in range(len(candidate), 1, -1):
            family = known.get(candidate[:length])
            if family is not None:
                card = _with_rest(family, candidate[:length], candidate[length:])
                if card is not None:
                    return card
    return None


def _with_rest(family: str, name: str, rest: str) -> Card | None:
    row = rows(family)[name]
    for group in sorted(row.get("groups", {}), key=len, reverse=True):
        if not rest.startswith(group):
            continue
        ending = rest[len(group) :]
        if not ending or _ENDINGS.fullmatch(ending):
            return card_from(row, group)
        small = rows(family).get(name + "W")  # the smaller outline is written behind the group: BC847BW
        if ending.startswith("W") and small is not None and _ENDINGS.fullmatch(ending[1:]):
            return card_from(small, group)
    taped = rest == "T" and name.startswith("1N")  # behind other names a T is a smaller outline
    return card_from(row) if taped or not rest or _ENDINGS.fullmatch(rest) else None
