"""A project's own cards, from a TOML file: parts that the library lacks, or knows otherwise.

[[card]]
name = "HOUSE-NPN-1"
like = "BC547B"                      # figures not given here are this card's
v_max_v = 60                         # ratings: v_max_v v_control_max_v i_max_a p_max_w tj_max_c rth_ja_kpw
gain = [200, 290, 450, 0.002, 5.0]   # least, typical, most, at amperes, at volts
packages = { "SOT-23" = "BEC" }      # terminal of pads 1, 2, 3
source = "maker's data sheet, rev 3"
"""

from __future__ import annotations

from collections.abc import Mapping
from pathlib import Path
from typing import Any, Final

from checker.cards.load import card_from, index, rows, squeeze
from checker.cards.types import Card
from checker.trouble import InputTrouble

LARGEST: Final = 1 << 20
"""Bytes of a card file."""
_NUMBERS: Final = frozenset(
    {
        "v_max_v",
        "v_control_max_v",
        "i_max_a",
        "p_max_w",
        "tj_max_c",
        "rth_ja_kpw",
        "vaf",
        "ikf",
        "rb",
        "rc",
        "re",
        "r1",
        "r2",
    }
)
_LISTS: Final[Mapping[str, int]] = {"gain": 5, "ft": 3, "vbe": 2}
_TEXTS: Final = frozenset({"name", "like", "source", "note"})


def read_cards(path: Path) -> Mapping[str, Card]:
    """Squeezed name -> card. Raises InputTrouble, naming the file, for what is not as the module's example."""
    import tomllib

    try:
        if path.stat().st_size > LARGEST:
            raise InputTrouble(f"larger than {LARGEST} bytes", file=str(path))
        content = tomllib.loads(path.read_text("utf-8"))
    except (OSError, UnicodeDecodeError, tomllib.TOMLDecodeError) as trouble:
        raise InputTrouble(f"cannot be read as TOML: {trouble}", file=str(path)) from trouble
    entries = content.get("card")
    if set(content) != {"card"} or not isinstance(entries, list):
        raise InputTrouble("expected [[card]] tables and nothing else", file=str(path))
    found: dict[str, Card] = {}
    for place, entry in enumerate(entries, start=1):
        card = _card(entry, f"[[card]] number {place}", str(path))
        if squeeze(card.name) in found:
            raise InputTrouble(f"[[card]] {card.name!r} stands there twice", file=str(path))
        found[squeeze(card.name)] = card
    return found


def _card(entry: Any, what: str, file: str) -> Card:
    if not isinstance(entry, dict) or not isinstance(entry.get("name"), str) or not squeeze(entry["name"]):
        raise InputTrouble(f"{what}: a name is missing", file=file)
    what = f"[[card]] {entry['name']!r}"
    like = entry.get("like")
    if not isinstance(like, str) or squeeze(like) not in index():
        raise InputTrouble(f"{what}: `like` must name a card of the library; `stageproof parts` lists them", file=file)
    for key, value in entry.items():
        _check(key, value, what, file)
    base = {key: value for key, value in rows(index()[squeeze(like)])[squeeze(like)].items() if key != "aliases"}
    own = {key: value for key, value in entry.items() if key != "like"}
    row = {**base, "groups": {}, "source": f"the project's card file, otherwise as {like}", "note": "", **own}
    try:
        return card_from(row)
    except (ValueError, ZeroDivisionError, OverflowError) as trouble:
        raise InputTrouble(f"{what}: its figures fit no model: {trouble}", file=file) from trouble


def _check(key: str, value: Any, what: str, file: str) -> None:
    """Raises InputTrouble for an unknown key or a value of the wrong form."""
    known = sorted({*_NUMBERS, *_LISTS, *_TEXTS, "packages"})
    if key not in known:
        raise InputTrouble(f"{what}: {key!r} is no key of a card; expected one of {', '.join(known)}", file=file)
    if key in _TEXTS:
        good = isinstance(value, str)
    elif key in _NUMBERS:
        good = _positive(value)
    elif key in _LISTS:
        good = isinstance(value, list) and len(value) == _LISTS[key] and all(map(_positive, value))
    else:
        good = isinstance(value, dict) and all(isinstance(pads, str) and pads.isascii() for pads in value.values())
    if not good:
        raise InputTrouble(f"{what}: {key} = {value!r} is not of the form that a card has", file=file)


def _positive(value: Any) -> bool:
    return isinstance(value, int | float) and not isinstance(value, bool) and 0.0 < value < 1e15
