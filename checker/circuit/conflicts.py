"""Does a transistor's symbol fit the part and the package that are to be soldered?

Three questions; the answer to each is what contradicts, or what is missing, or nothing.

Pads are compared by terminal letter, so that two pads of one terminal (a tab) count as one. Order of pins by package:
`Card.packages`.
"""

from __future__ import annotations

from collections.abc import Mapping
from typing import Final

from checker.cards.pins import package_of, pin_map
from checker.cards.types import Card, CardKind
from checker.circuit.pins import pads_of_symbol
from checker.circuit.types import Agreement
from checker.netlist.types import Part

ORDER: Final = "pin-order"
POLARITY: Final = "part-polarity"
PACKAGE: Final = "package-mismatch"

_SURFACE: Final = frozenset(
    {"SOT-23", "SOT-323", "SOT-363", "SOT-343", "SOT-143", "SOT-143R", "SOT-223", "SOT-89", "SC-59", "TO-252", "TO-263"}
)
_SMALL_CANS: Final = frozenset({"TO-92", "TO-18", "TO-39", "TO-72"})
"""Leaded outlines in which one type number is often sold: no conflict among these."""
_NAME: Final = 5
"""Leading characters of a type number by which a footprint is known to be made for it."""
_SYMMETRIC: Final = ("njf", "pjf")
"""Kinds whose drain and source may be exchanged (data sheets of most junction FETs say so)."""


def agreement_of(part: Part, card: Card | None, kinds: tuple[tuple[str, CardKind], ...]) -> Agreement:
    """What contradicts in a schematic part. `kinds`: (who says so, kind) of everything but the part number."""
    wrong: dict[str, str] = {}
    unknown: dict[str, tuple[str, str]] = {}
    name = f"{part.ref} ({part.value})"
    if card is None or card.assumed:
        datum = f"which part {part.ref} is", "a part number with a card, or [[part]] card"
        return Agreement(wrong={}, unknown=dict.fromkeys((ORDER, POLARITY, PACKAGE), datum))
    # The first letter is the polarity: a junction FET drawn with an insulated gate is another matter.
    other = next((f"{who} is {kind.upper()}" for who, kind in kinds if kind[0] != card.kind[0]), "")
    if other:
        wrong[POLARITY] = f"{name}: {card.name} is {card.kind.upper()}, but {other}"
    package = package_of(part.footprint)
    if package is None:
        missing = f"the package of {part.ref}", "a footprint whose name tells it (SOT-23, TO-92, …)"
        unknown |= {ORDER: missing, PACKAGE: missing}
        return Agreement(wrong=wrong, unknown=unknown)
    if _not_made(card, package):
        made = ", ".join(sorted(card.packages))
        wrong[PACKAGE] = f"{name}: {card.name} is made in {made}, but the footprint is {package}"
    _compare_pads(part, card, package, wrong, unknown)
    return Agreement(wrong=wrong, unknown=unknown)


def _not_made(card: Card, package: str) -> bool:
    """Whether the part is surely not made in a package: a surface-mounted number in another outline, or the reverse."""
    known = set(card.packages)
    if not known or package in known or (package == "SC-59" and "SOT-23" in known):
        return False
    if package in _SURFACE or known <= _SURFACE:
        return True
    return (package in _SMALL_CANS) != bool(known & _SMALL_CANS)


def _compare_pads(
    part: Part, card: Card, package: str, wrong: dict[str, str], unknown: dict[str, tuple[str, str]]
) -> None:
    true = pin_map(card, part.footprint)
    shown = pads_of_symbol(part)
    if true is None:
        unknown[ORDER] = f"the pin order of {card.name} in {package}", "a card that lists this package"
    elif _made_for(part):
        unknown[ORDER] = f"how the footprint {part.footprint.rpartition(':')[2]} numbers its pads", "its drawing"
    elif not shown or not shown.keys() <= true.keys():
        unknown[ORDER] = f"which pad of {part.ref} is which terminal by its symbol", "pin names on the symbol"
    else:
        exchanged = {pad for pad, letter in shown.items() if letter != true[pad][:1]}
        if not exchanged or (card.kind in _SYMMETRIC and {shown[pad] for pad in exchanged} == {"D", "S"}):
            return
        if _counted_from_the_other_end(card, package, shown):
            makers = f"from which end the maker of {card.name} counts its leads"
            unknown[ORDER] = makers, "the maker's drawing; makers of this type differ"
        else:
            wrong[ORDER] = _sentence(part, card, package, shown, true)


def _made_for(part: Part) -> bool:
    """Whether a footprint bears the part's own name: its pads may be numbered to suit the symbol."""
    name, own = part.footprint.rpartition(":")[2].upper(), part.value.upper()[:_NAME]
    return len(own) == _NAME and own in name


def _counted_from_the_other_end(card: Card, package: str, shown: Mapping[str, str]) -> bool:
    """The C-B-E types in TO-92 are numbered from either end: the mirror image proves nothing."""
    true = card.packages.get(package, {})
    order = "".join(true[pad] for pad in sorted(true))
    return package == "TO-92" and order == "CBE" and "".join(shown[pad] for pad in sorted(shown)) == "EBC"


def _sentence(part: Part, card: Card, package: str, shown: Mapping[str, str], true: Mapping[str, str]) -> str:
    def listed(pads: Mapping[str, str]) -> str:
        return ", ".join(f"{pads[pad][:1]} on {pad}" for pad in sorted(shown))

    return (
        f"{part.ref} ({part.value}, {package}): the symbol has {listed(shown)}; "
        f"{card.name} in this package has {listed(true)}"
    )
