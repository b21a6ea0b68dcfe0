"""Bipolars and diodes in the draft, with ratings and gain spread; what is missing where one cannot be
solved."""

from __future__ import annotations

import math
import re
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import fields, replace
from typing import Final, Literal

from checker.cards.types import Ratings
from checker.circuit.draft import Draft, DraftDevice
from checker.circuit.identity import BIPOLAR, DIODE, Identity, card_by_value, generic, hints_of, identify, special
from checker.circuit.models import Parameters, bipolar_parameters, diode_parameters
from checker.circuit.parts import symbol_name
from checker.circuit.pins import Unit, kicad_terminals, letter_of, spice_terminals
from checker.circuit.types import Agreement, PartFact, PartKind
from checker.netlist.types import Part
from checker.pattern import lazy
from checker.quantity.parse import parse_engineering
from checker.trouble import NotAQuantity

ASSUMED_SPREAD: Final = (0.5, 2.0)
"""Gain limits as multiples of the model's gain, where no card gives a gain group (common practice, no
source)."""
_NO_FET: Final = ("a bipolar model", "field-effect transistors are not solved yet")
_SUPPRESSOR: Final = lazy(
    r"(?:(?P<standoff>SM[ABC]J|SMF|SA|[35]KP)|(?:P[46](?:KE|SM[AB])|1[.,]5(?:KE|SMC)))(?P<volts>\d+(?:\.\d+)?)A?(?![\dC])",
    re.IGNORECASE,
)
"""One-way suppressors by type number, after their stand-off or their breakdown voltage (common practice)."""
_ABOVE_STANDOFF: Final = 1.17
"""Nominal breakdown over stand-off voltage of such parts: their tables give 1.11 to 1.23 (from memory)."""
_VOLTS: Final = lazy(r"\d+(?:\.\d+)?V\d*|\d+[.,]?\d* ?V", re.IGNORECASE)


def add_bipolar(draft: Draft, part: Part) -> None:
    """Put a bipolar transistor (or each of a dual) in the draft, or say what is missing."""
    known = identify(draft, part, BIPOLAR)
    lacking = _lacking(draft, part, known)
    if known is None or lacking is not None:
        datum, supply = lacking or (
            f"model of {part.ref}",
            'a .model, a known part number, or [[part]] card = "…"',
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
    _tell_unused(draft, known, parameters)
    for unit in units:
        for inner, each in _inside(draft, part, unit, known):
            order = (inner.nets["C"], inner.nets["B"], inner.nets["E"], _substrate(draft, unit))
            own = parameters if each is known else bipolar_parameters(each.written, area=1.0, count=1.0)
            _place(draft, "bipolar", part, inner, order, each, own)


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
    _tell_unused(draft, known, parameters)
    for unit in units:
        _place(draft, "diode", part, unit, (unit.nets["A"], unit.nets["K"]), known, parameters)


def add_fet(draft: Draft, part: Part) -> None:
    """Name a field-effect transistor as unsolved, unless its part number is a bipolar's."""
    card = card_by_value(part)
    if card is not None and card.kind in BIPOLAR:
        draft.notes.add("models", f"{card.name} is a bipolar; the part number is used, not the symbol", part.ref)
        add_bipolar(draft, part)
        return
    leave_out(draft, part, "fet", *_NO_FET)


def leave_out(draft: Draft, part: Part, kind: PartKind, datum: str, supply: str, *, blocks_dc: bool = True) -> None:
    """Record a part that cannot be solved; a FET's gate is taken as drawing no current."""
    nets = [pin.net for pin in part.pins if kind != "fet" or letter_of(pin.function)[0] != "G"]
    if kind == "fet" and draft.netlist.format == "spice":
        nets = [pin.net for place, pin in enumerate(part.pins) if place != 1]
    draft.loose(part.ref, nets, datum, supply, blocks_dc=blocks_dc)
    draft.foreign.update(draft.net(pin.net) for pin in part.pins)
    draft.facts[part.ref] = bare_fact(draft, part, kind)


def bare_fact(draft: Draft, part: Part, kind: PartKind) -> PartFact:
    """A fact of which only pins and place are known; pins go by number."""
    return PartFact(
        ref=part.ref,
        kind=kind,
        terminals={pin.number: draft.net(pin.net) for pin in part.pins},
        origin=part.origin,
        footprint=part.footprint,
    )


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


def _tell_unused(draft: Draft, known: Identity, parameters: Parameters) -> None:
    if known.model is not None and parameters.unused:
        text = f".model {known.model.name}: not used: {', '.join(parameters.unused)}"
        draft.notes.add("models", text)


def _place(
    draft: Draft,
    kind: Literal["bipolar", "diode"],
    part: Part,
    unit: Unit,
    nets: Sequence[str],
    known: Identity,
    parameters: Parameters,
) -> None:
    """Enter one device and its fact."""
    name = part.ref + unit.suffix
    ratings = _ratings(draft, part, known)
    device = DraftDevice(
        nets=tuple(draft.net(net) for net in nets),
        polarity=-1.0 if known.kind == "pnp" else 1.0,
        params=parameters.values,
        tnom_k=parameters.tnom_k,
        rth_kpw=math.nan if ratings.rth_ja_kpw is None else ratings.rth_ja_kpw,
    )
    draft.place(kind, name, device)
    used = set(device.nets)
    gain_min, gain_max = _gain(draft, name, known, parameters.values)
    draft.facts[name] = PartFact(
        ref=name,
        kind="bipolar" if known.kind in BIPOLAR else "diode",
        terminals={letter: draft.net(net) for letter, net in unit.nets.items() if draft.net(net) in used},
        origin=part.origin,
        card=known.card,
        model_source=known.source,
        ratings=ratings,
        gain_min=gain_min,
        gain_max=gain_max,
        footprint=part.footprint,
        agreement=_agreement(draft, part, unit, known),
    )


def _agreement(draft: Draft, part: Part, unit: Unit, known: Identity) -> Agreement:
    """Whether symbol, number and package fit; asked once a part, and only of exports that show pads and packages."""
    if draft.netlist.format == "spice":
        text = "pin order, polarity and package of parts are not checked: SPICE text shows neither pads nor packages"
        draft.notes.add("pins", text)
        return Agreement(judged=False)
    inner = known.card is not None and known.card.name.endswith("(driver)")
    again = unit.suffix not in ("", ".A") and not (known.card is not None and known.card.driver)
    if known.kind not in BIPOLAR or inner or again:
        return Agreement(judged=False)
    from checker.circuit.conflicts import agreement_of

    kinds = tuple((who, kind) for who, kind in hints_of(part) if kind in BIPOLAR and who != "the description")
    return agreement_of(part, known.card, kinds)


def _gain(draft: Draft, name: str, known: Identity, values: Mapping[str, float]) -> tuple[float | None, float | None]:
    """Limits of the current gain of this type, from the card, else assumed around the model's."""
    if known.kind not in BIPOLAR:
        return None, None
    stated = None if known.card is None or known.card.assumed else known.card
    low = values["bf"] * ASSUMED_SPREAD[0] if stated is None or stated.gain_min is None else stated.gain_min
    high = values["bf"] * ASSUMED_SPREAD[1] if stated is None or stated.gain_max is None else stated.gain_max
    if stated is None or stated.gain_min is None or stated.gain_max is None:
        times = f"{ASSUMED_SPREAD[0]:g} and {ASSUMED_SPREAD[1]:g} times"
        draft.notes.add("tolerances", f"unstated limits of current gain taken as {times} the model's", name)
    return low, high


def _ratings(draft: Draft, part: Part, known: Identity) -> Ratings:
    """The card's ratings, overridden by the intent's."""
    ratings = known.card.ratings if known.card is not None else Ratings()
    said = draft.said(part.ref)
    if said is None:
        return ratings
    names = {entry.name for entry in fields(Ratings)}
    return replace(ratings, **{name: value for name, value in said.ratings.items() if name in names})
