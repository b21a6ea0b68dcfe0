"""`.model NAME KIND (p=1 q=2)` cards: numeric parameters evaluated, the rest named in a remark."""

from __future__ import annotations

from checker.netlist.spice_lines import Card
from checker.netlist.spice_scope import Scope
from checker.netlist.spice_words import split_words
from checker.netlist.types import Model, Remark
from checker.pattern import lazy
from checker.trouble import NotAQuantity

_COLON = lazy(r"(?<=[A-Za-z0-9_])\s*:\s*(?=[\d.+-])")
_ALIASES = {"vt0": "vto"}
"""Spellings with a zero for the letter O, common in real libraries."""
_NOTES = frozenset({"mfg", "manufacturer", "vendor", "type", "icrating", "vceo", "vds", "ron", "qg", "iave", "vpk"})
"""Parameters that describe the part and enter no equation; as text they are no loss."""


def model_name(card: Card) -> str:
    """The name a model card gives, as written."""
    words = split_words(card.text).positional
    return words[1] if len(words) > 1 else ""


def read_model(card: Card, scope: Scope, name: str) -> tuple[Model, list[Remark]]:
    """Evaluate a card in `scope`. `name` is the name it shall bear. A `:` for `=` (a slip seen in real
    libraries) is read as one."""
    body = _COLON.sub("=", card.text)
    words = split_words(body)
    kind = words.positional[2].lower() if len(words.positional) > 2 else ""
    remarks: list[Remark] = []

    def lost(text: str) -> Remark:
        return Remark(text=f"model {name[:40]}: {text}", origin=card.origin, lost=True)

    if not kind or ":" in kind:
        remarks.append(lost(f"names no kind that is understood: {kind[:40] or 'none'}"))
    params: dict[str, float] = {}
    for key, text in words.named.items():
        try:
            params[_ALIASES.get(key, key)] = scope.number(text)
        except NotAQuantity as error:
            if key not in _NOTES:
                remarks.append(lost(f"{key[:20]} is passed over: {error}"))
    loose = [word for word in words.positional[3:] if word.lower() not in ("nchan", "pchan")]
    if loose:
        remarks.append(lost(f"{' '.join(loose)[:60]!r} belongs to no parameter and is passed over"))
    # `VDMOS(pchan ...)` carries its polarity as a bare word.
    for word in words.positional[3:]:
        if word.lower() in ("nchan", "pchan"):
            params[word.lower()] = 1.0
    return Model(name=name, kind=kind, params=params, origin=card.origin), remarks
