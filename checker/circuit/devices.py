"""Bipolars, field-effect transistors and diodes in the draft; what is missing where one cannot be solved."""

from __future__ import annotations

import re
from collections.abc import Iterable
from typing import Final

from checker.cards.types import Card
from checker.circuit.draft import Draft
from checker.circuit.entry import leave_out, place_device
from checker.circuit.identity import (
    BIPOLAR,
    DIODE,
    FET,
    JUNCTION_FET,
    Identity,
    card_by_value,
    generic,
    identify,
    polarity_of,
    special,
)
from checker.circuit.models import (
    Parameters,
    bipolar_parameters,
    diode_parameters,
    jfet_parameters,
    mosfet_parameters,
)
from checker.circuit.parameters import LEFT_OUT
from checker.circuit.parts import symbol_name
from checker.circuit.pins import Unit, kicad_terminals, spice_terminals
from checker.netlist.types import Part
from checker.pattern import lazy
from checker.quantity.parse import parse_engineering
from checker.trouble import NotAQuantity

_SUPPRESSOR: Final = lazy(
    r"(?:(?P<standoff>SM[ABC]J|SMF|SA|[35]KP)|(?:P[46](?:KE|SM[AB])|1[.,]5(?:KE|SMC)))(?P<volts>\d+(?:\.\d+)?)A?(?![\dC])",
    re.IGNORECASE,
)
"""One-way suppressors by type number, after their stand-off or their breakdown voltage (common practice)."""
_ABOVE_STANDOFF: Final = 1.17
"""Nominal breakdown over stand-off voltage of such parts: their tables give 1.11 to 1.23 (from memory)."""
_MODEL_WANTED: Final = 'a .model, a known part number, or [[part]] card = "…"'
_SIZES: Final = frozenset({"w", "l", "ad", "as", "pd", "ps", "nrd", "nrs"})
_TAKEN: Final = {
    **dict.fromkeys("QDJ", frozenset({"area", "m"})),
    "M": _SIZES | {"m"},
}
"""Letter -> what is taken into account of what stands beside the model's name."""
_VOLTS: Final = lazy(r"(?<!\d)(?:\d++(?:\.\d++)?V\d*|\d++[.,]?\d*+ ?V)", re.IGNORECASE)


def add_bipolar(draft: Draft, part: Part) -> None:
    """Put a bipolar transistor (or each of a dual) in the draft, or say what is missing."""
    known = identify(draft, part, BIPOLAR)
    lacking = _lacking(draft, part, known)
    if known is None or lacking is not None:
        datum, supply = lacking or (
            f"model of {part.ref}",
            _MODEL_WANTED,
        )
        leave_out(draft, part, "bipolar", datum, supply)
        return
    if known.kind not in BIPOLAR:
        add_fet(draft, part)
        return
    units = _terminals(draft, part, "bipolar", known)
    if not units:
        leave_out(draft, part, "bipolar", f"pin order of {part.ref}", "pin names B, C, E on the symbol, or Sim.Pins")
        return
    parameters = bipolar_parameters(known.written, area=part.params.get("area", 1.0), count=part.params.get("m", 1.0))
    _tell_unused(draft, part, known, parameters)
    for unit in units:
        for inner, each in _inside(draft, part, unit, known):
            order = (inner.nets["C"], inner.nets["B"], inner.nets["E"], _substrate(draft, unit))
            own = parameters if each is known else bipolar_parameters(each.written, area=1.0, count=1.0)
            place_device(draft, "bipolar", part, inner, order, each, own)


def _inside(draft: Draft, part: Part, unit: Unit, known: Identity) -> Iterable[tuple[Unit, Identity]]:
    """The transistors of one unit: itself, or what a pre-biased or Darlington transistor holds."""
    if known.model is not None or known.card is None or not (known.card.resistors or known.card.driver):
        return ((unit, known),)
    from checker.circuit.compound import parts_of

    return parts_of(draft, part, unit, known, known.card)


def add_diode(draft: Draft, part: Part) -> None:
    """Put a diode in the draft, or say what is missing."""
    known = identify(draft, part, DIODE)
    if known is None or known.kind not in DIODE:
        known = _unnamed_diode(draft, part)
    written = dict(known.written)
    if known.kind == "zener" and known.model is None:
        breakdown = _breakdown(part)
        if breakdown is None and (known.card is None or known.card.assumed):
            leave_out(
                draft,
                part,
                "diode",
                f"breakdown voltage of {part.ref}",
                "a value such as 5V1, or a known part number",
            )
            return
        written.update({} if breakdown is None else {"bv": breakdown})
    units = _terminals(draft, part, "diode", known)
    if not units:
        leave_out(draft, part, "diode", f"pin order of {part.ref}", "pin names A and K on a two-pin symbol")
        return
    parameters = diode_parameters(written, area=part.params.get("area", 1.0), count=part.params.get("m", 1.0))
    _tell_unused(draft, part, known, parameters)
    for unit in units:
        place_device(draft, "diode", part, unit, (unit.nets["A"], unit.nets["K"]), known, parameters)


def add_fet(draft: Draft, part: Part) -> None:
    """Put a field-effect transistor (or each of a dual) in the draft, or say what is missing."""
    card = card_by_value(part)
    if card is not None and card.kind in BIPOLAR:
        draft.notes.add("models", f"{card.name} is a bipolar; the part number is used, not the symbol", part.ref)
        add_bipolar(draft, part)
        return
    known = identify(draft, part, FET)
    if draft.netlist.format == "kicad" and _added_with_two_gates(draft, part, card, known):
        return
    lacking = _lacking_fet(part, known)
    if known is None or lacking is not None:
        leave_out(draft, part, "fet", *(lacking or (f"model of {part.ref}", _MODEL_WANTED)))
        return
    units = _terminals(draft, part, "fet", known)
    if not units:
        leave_out(draft, part, "fet", f"pin order of {part.ref}", "pin names D, G, S on the symbol, or Sim.Pins")
        return
    for unit in units:
        _add_one_fet(draft, part, unit, known)


def _added_with_two_gates(draft: Draft, part: Part, by_value: Card | None, known: Identity | None) -> bool:
    """Whether a part is a dual-gate MOSFET, which then is in the draft or named as lacking a model."""
    from checker.circuit.dual_gate import dual_gate_pins, halves

    nets = dual_gate_pins(part, by_value)
    if nets is None:
        return False
    card = None if known is None or known.model is not None else known.card
    if known is None or card is None or card.upper is None:
        leave_out(draft, part, "fet", f"a model of the dual-gate MOSFET {part.ref}", "a part number with a card")
        return True
    for half, own in halves(draft, part, nets, known, card, card.upper):
        _add_one_fet(draft, part, half, own)
    return True


def _add_one_fet(draft: Draft, part: Part, unit: Unit, known: Identity) -> None:
    order = (unit.nets["D"], unit.nets["G"], unit.nets["S"])
    count = part.params.get("m", 1.0)
    if known.kind in JUNCTION_FET:
        parameters = jfet_parameters(known.written, area=part.params.get("area", 1.0), count=count)
        place_device(draft, "jfet", part, unit, order, known, parameters)
    else:
        polarity = polarity_of(known.kind)
        size = part.params if known.model is not None else {}
        parameters = mosfet_parameters(known.written, polarity=polarity, size=size, count=count)
        place_device(draft, "mosfet", part, unit, (*order, unit.nets.get("B", unit.nets["S"])), known, parameters)
    _tell_unused(draft, part, known, parameters)


def _lacking_fet(part: Part, known: Identity | None) -> tuple[str, str] | None:
    """(datum, supply) where a part is of a sort that neither Shichman-Hodges model describes."""
    if known is None:
        text = f"{part.description} {symbol_name(part)} {part.value}"
        igbt = re.search(r"\bIGBT|insulated", text, re.IGNORECASE)
        return (f"a model of the IGBT {part.ref}", "nothing: such parts are not modelled") if igbt else None
    if known.kind not in FET:
        return f"a field-effect model of {part.ref}", _MODEL_WANTED
    level = known.model.params.get("level", 1.0) if known.model is not None else 1.0
    return None if level == 1.0 else (f"a level-1 model of {part.ref}", "a .model of level 1, or a known part number")


def _lacking(draft: Draft, part: Part, known: Identity | None) -> tuple[str, str] | None:
    """(datum, supply) where a transistor is of a sort that one Gummel-Poon model does not describe."""
    if known is not None and known.model is not None:
        level = known.model.params.get("level", 1.0)
        return None if level == 1.0 else (f"a Gummel-Poon model of {part.ref}", "a .model of level 1")
    said = draft.said(part.ref)
    if (known is not None and known.card is not None and not known.card.assumed) or (said and said.card):
        return None
    datum = special(part)
    return None if datum is None else (datum, 'a part number with a card, or [[part]] card = "…"')


def _terminals(draft: Draft, part: Part, kind: str, known: Identity) -> tuple[Unit, ...]:
    if draft.netlist.format == "spice":
        if part.letter.upper() == "X":
            draft.notes.add("pins", f"subcircuit taken as a {kind} with its pins in that element's order", part.ref)
        return spice_terminals(part, kind)
    return kicad_terminals(part, kind, known.card, draft.notes)


def _substrate(draft: Draft, unit: Unit) -> str:
    """The substrate's net; ground where there is none or where the pin is left open."""
    net = unit.nets.get("S", draft.ground)
    return net if draft.touches[net] > 1 else draft.ground


def _unnamed_diode(draft: Draft, part: Part) -> Identity:
    """A diode of which only the symbol is known."""
    text = f"{symbol_name(part)} {part.description} {part.value} {part.letter}"
    if re.search(r"\bLED|light.emitting|^LED", text, re.IGNORECASE):
        return generic(draft, part, "led")
    if re.search(r"zener|tvs|suppress|\bDZ|\bZD|BZX|BZV", text, re.IGNORECASE):
        return generic(draft, part, "zener")
    return generic(draft, part, "diode")


def _breakdown(part: Part) -> float | None:
    """The breakdown voltage [V] that the value states: "6V2", "5.1V", "BZX84C4V7"; of a suppressor "SMCJ30A"."""
    suppressor = _SUPPRESSOR.match(part.value)
    if suppressor is not None:
        return float(suppressor["volts"]) * (_ABOVE_STANDOFF if suppressor["standoff"] else 1.0)
    found = _VOLTS.search(part.value)
    try:
        return None if found is None else parse_engineering(found[0].upper(), "V").si
    except NotAQuantity:
        return None


def _tell_unused(draft: Draft, part: Part, known: Identity, parameters: Parameters) -> None:
    """Remarks on what was written of a device, in its model or beside it, and is not taken into account."""
    beside = sorted(set(part.params) - _TAKEN[part.letter.upper()]) if part.letter.upper() in _TAKEN else []
    if known.model is None and known.kind in FET:
        beside = sorted({*beside, *part.params.keys() & _SIZES})
    # Initial conditions bear on a run in time alone.
    beside = [name for name in beside if not name.startswith("ic")]
    if beside:
        draft.notes.add("models", f"not used: {', '.join(beside)}", part.ref)
    if known.model is None:
        return
    rest = list(parameters.unused)
    for effect, names in LEFT_OUT.items() if known.kind in BIPOLAR else ():
        asked = [name for name in rest if name in names]
        if asked:
            draft.notes.add("models", f".model {known.model.name}: {effect} is left out: {', '.join(asked)} not used")
            rest = [name for name in rest if name not in names]
    if rest:
        draft.notes.add("models", f".model {known.model.name}: not used: {', '.join(rest)}")
