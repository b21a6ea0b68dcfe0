"""Transistors with built-in parts: pre-biased ones and Darlingtons, drawn as what they hold."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import replace

from checker.cards.find import generic_card
from checker.cards.types import Card
from checker.circuit.draft import Draft, DraftDevice
from checker.circuit.identity import Identity
from checker.circuit.models import diode_parameters
from checker.circuit.pins import Unit
from checker.netlist.types import Part


def parts_of(draft: Draft, part: Part, unit: Unit, known: Identity, card: Card) -> Iterator[tuple[Unit, Identity]]:
    """The transistors that one unit of a part holds, after its built-in resistors and diode are in the draft.

    `card` has built-in parts. A pre-biased transistor has its base on an inner net
    behind R1; a Darlington is ".A", the driver, and ".B", with their common net between them.
    """
    if card.driver is None:
        yield _pre_biased(draft, part, unit, card), known
    else:
        yield from _darlington(draft, part, unit, known, card)


def _pre_biased(draft: Draft, part: Part, unit: Unit, card: Card) -> Unit:
    name = part.ref + unit.suffix
    base = f"{name}.b"
    draft.wire("resistors", f"{name}.r1", unit.nets["B"], base, card.resistors["r1"])
    if "r2" in card.resistors:
        draft.wire("resistors", f"{name}.r2", base, unit.nets["E"], card.resistors["r2"])
    draft.notes.add("models", "built-in base resistors taken at their nominal values", part.ref)
    return replace(unit, nets={**unit.nets, "B": base})


def _darlington(draft: Draft, part: Part, unit: Unit, known: Identity, card: Card) -> Iterator[tuple[Unit, Identity]]:
    name = part.ref + unit.suffix
    middle = f"{name}.n"
    for key, first, second in (("be1", unit.nets["B"], middle), ("be2", middle, unit.nets["E"])):
        if key in card.resistors:
            draft.wire("resistors", f"{name}.{key}", first, second, card.resistors[key])
    if card.free_wheel:
        _free_wheel(draft, name, unit, polarity=-1.0 if card.kind == "pnp" else 1.0)
    draft.notes.add("models", "Darlington taken as two transistors, .A driving .B, with typical resistors", part.ref)
    yield Unit(suffix=f"{unit.suffix}.A", nets={**unit.nets, "E": middle}), replace(known, card=card.driver)
    yield Unit(suffix=f"{unit.suffix}.B", nets={**unit.nets, "B": middle}), known


def _free_wheel(draft: Draft, name: str, unit: Unit, *, polarity: float) -> None:
    """The diode from emitter to collector (of a PNP the other way) that power Darlingtons have."""
    parameters = diode_parameters(generic_card("diode").model, area=1.0, count=1.0)
    ends = (unit.nets["E"], unit.nets["C"]) if polarity > 0 else (unit.nets["C"], unit.nets["E"])
    device = DraftDevice(
        nets=tuple(draft.net(net) for net in ends),
        polarity=1.0,
        params=parameters.values,
        tnom_k=parameters.tnom_k,
        rth_kpw=float("nan"),
    )
    draft.place("diode", f"{name}.d", device)
