"""Semiconductors entered in the draft with ratings and gain spread, and parts left out with what they lack."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import fields, replace
from typing import Final, Literal

from checker.cards.types import Ratings
from checker.circuit.draft import Draft, DraftDevice
from checker.circuit.identity import BIPOLAR, DIODE, FET, Identity, hints_of, polarity_of
from checker.circuit.models import Parameters
from checker.circuit.pins import Unit, letter_of
from checker.circuit.types import Agreement, PartFact, PartKind
from checker.netlist.types import Part

ASSUMED_SPREAD: Final = (0.5, 2.0)
"""Gain limits as multiples of the model's gain, where no card gives a gain group (common practice, no
source)."""
_FACT_KIND: Final[Mapping[str, PartKind]] = {"bipolar": "bipolar", "jfet": "fet", "mosfet": "fet", "diode": "diode"}


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


def place_device(
    draft: Draft,
    kind: Literal["bipolar", "jfet", "mosfet", "diode"],
    part: Part,
    unit: Unit,
    nets: Sequence[str],
    known: Identity,
    parameters: Parameters,
) -> None:
    """Enter one device of a family, and its fact."""
    name = part.ref + unit.suffix
    ratings = _ratings(draft, part, known)
    device = DraftDevice(
        nets=tuple(draft.net(net) for net in nets),
        polarity=polarity_of(known.kind),
        params=parameters.values,
        tnom_k=parameters.tnom_k,
        rth_kpw=math.nan if ratings.rth_ja_kpw is None else ratings.rth_ja_kpw,
        chip=part.ref if unit.shares_chip else "",
    )
    draft.place(kind, name, device)
    used = set(device.nets)
    gain_min, gain_max = _gain(draft, name, known, parameters.values)
    if kind in ("jfet", "mosfet") and (known.card is None or known.card.spread is None or known.source[:4] != "card"):
        what = "cut-off voltage and IDSS" if kind == "jfet" else "threshold"
        draft.notes.add("tolerances", f"spread of the {what} is not stated; every corner keeps the model's", name)
    draft.facts[name] = PartFact(
        ref=name,
        kind=_FACT_KIND[kind],
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
    if known.kind in DIODE or inner or again:
        return Agreement(judged=False)
    from checker.circuit.conflicts import agreement_of

    family = BIPOLAR if known.kind in BIPOLAR else FET
    kinds = tuple((who, kind) for who, kind in hints_of(part) if kind in family and who != "the description")
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
