"""Netlist and intent to circuit: every part is placed, named as unknown, or left out with a remark."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from typing import Final

from checker.cards.types import Card
from checker.circuit.assemble import assemble
from checker.circuit.devices import add_bipolar, add_diode, add_fet
from checker.circuit.draft import Draft
from checker.circuit.drives import add_drives
from checker.circuit.elements import (
    add_array,
    add_battery,
    add_coupling,
    add_current,
    add_declared,
    add_ends,
    add_passive,
    add_potentiometer,
    add_voltage,
    two_ends,
)
from checker.circuit.entry import bare_fact, leave_out
from checker.circuit.grounds import find_ground
from checker.circuit.identity import BIPOLAR, DIODE, card_by_value, intended_card
from checker.circuit.notes import Notes
from checker.circuit.order import natural_key
from checker.circuit.others import (
    add_closed,
    add_connector,
    add_open,
    add_unmodelled,
    settle,
)
from checker.circuit.parts import Kind, classify
from checker.circuit.ports import add_ports
from checker.circuit.rails import add_rails
from checker.circuit.supplies import find_unsupplied
from checker.circuit.types import Circuit, PartKind
from checker.circuit.values import written_value
from checker.constants import DEFAULT_AMBIENT_C, ZERO_CELSIUS_K
from checker.intent.hints import unknown
from checker.intent.types import Intent
from checker.netlist.types import Netlist, Part
from checker.trouble import InputTrouble, NotAQuantity

_Adder = Callable[[Draft, Part], None]

_ADDERS: Final[dict[Kind, _Adder]] = {
    "resistor": lambda draft, part: add_passive(draft, part, "resistor"),
    "capacitor": lambda draft, part: add_passive(draft, part, "capacitor"),
    "inductor": lambda draft, part: add_passive(draft, part, "inductor"),
    "coupling": add_coupling,
    "voltage": add_voltage,
    "current": add_current,
    "diode": add_diode,
    "bipolar": add_bipolar,
    "fet": add_fet,
    "potentiometer": add_potentiometer,
    "coaxial": lambda draft, part: _add_coaxial(draft, part),
    "connector": add_connector,
    "open": add_open,
    "closed": add_closed,
    "mechanical": lambda draft, part: _add_mechanical(draft, part),
    "controlled": lambda draft, part: _add_four_pole(draft, part),
    "line": lambda draft, part: _add_four_pole(draft, part),
    "battery": add_battery,
    "array": add_array,
    "transformer": lambda draft, part: _add_transformer(draft, part),
    "optocoupler": lambda draft, part: _add_optocoupler(draft, part),
    "unmodelled": add_unmodelled,
}
_UNIT: Final[dict[str, tuple[Kind, str]]] = {"C": ("capacitor", "F"), "L": ("inductor", "H")}
"""A symbol of unknown name with the letter, value and two used pins of a capacitor or coil is one."""
_FIRST: Final[tuple[Kind, ...]] = ("voltage", "battery")
_LAST: Final[tuple[Kind, ...]] = ("coupling", "unmodelled")
"""Sources come before what may only repeat them (0 ohm parts); couplings after the inductors they name, and
parts whose coil is found by the diode across it after the diodes."""
_FACT_KINDS: Final[dict[Kind, PartKind]] = {
    "resistor": "resistor",
    "capacitor": "capacitor",
    "inductor": "inductor",
    "voltage": "source",
    "current": "source",
    "controlled": "source",
    "diode": "diode",
    "bipolar": "bipolar",
    "fet": "fet",
    "potentiometer": "resistor",
    "array": "resistor",
    "battery": "source",
}
"""Kinds that an export which the reader did not understand leaves unusable."""
_ENTER: Final = frozenset(
    {
        "m",
        "area",
        "tol",
        "rser",
        "lser",
        "rpar",
        "cpar",
        "w",
        "l",
        "ad",
        "as",
        "pd",
        "ps",
        "nrd",
        "nrs",
        "r",
        "c",
        "value",
        "val",
        "ic",
        "off",
    }
)
"""Pairs of SPICE elements that are used, and two that only start a simulation."""
_VALUED: Final[tuple[Kind, ...]] = ("resistor", "capacitor", "inductor", "potentiometer", "array")
"""Kinds whose adder takes the intent's value itself."""


def build_circuit(netlist: Netlist, intent: Intent, own_cards: Mapping[str, Card] | None = None) -> Circuit:
    """The circuit of a board, with one scenario, the nominal one.

    Node 0 is ground; elements and nets are in natural order of their names, so that the order of lines in
    the file changes nothing. `own_cards`: the project's, by squeezed name; they outrank the library. Nets on which
    no element ends have no node; `Unknown.nets` names only nets that have one. Raises InputTrouble where the intent
    names a net, part, pin or card that does not exist.
    """
    notes = Notes()
    ground = find_ground(netlist, intent, notes)
    draft = Draft(
        netlist=netlist, intent=intent, ground=ground.name, merged=ground.keys, own_cards=own_cards or {}, notes=notes
    )
    draft.touches.update(draft.net(pin.net) for part in netlist.parts for pin in part.pins)
    _check_names(draft)
    for kind, part in _sorted(netlist, draft):
        if part.params and kind in _FACT_KINDS:
            _tell_unused(draft, part)
        if part.unknown and kind in _FACT_KINDS:
            leave_out(
                draft, part, _FACT_KINDS[kind], f"what {part.ref} is", part.unknown, blocks_dc=kind != "capacitor"
            )
        elif kind in _VALUED or not add_declared(draft, part):
            _add(draft, kind, part)
    add_ends(draft)
    _add_surroundings(draft)
    if ground.found:
        find_unsupplied(draft)
    else:
        _no_ground(draft)
    settle(draft)
    return assemble(draft, _temperature_k(netlist, intent))


def _tell_unused(draft: Draft, part: Part) -> None:
    """Pairs behind an element that enter no equation."""
    unused = sorted(part.params.keys() - _ENTER)
    if unused:
        draft.notes.add("parts", f"written and not used: {', '.join(unused)}", part.ref)


def _add_optocoupler(draft: Draft, part: Part) -> None:
    from checker.circuit.optocouplers import add_optocoupler  # few boards have any

    add_optocoupler(draft, part)


def _add_transformer(draft: Draft, part: Part) -> None:
    from checker.circuit.transformers import add_transformer  # few boards have any

    add_transformer(draft, part)


def _add_four_pole(draft: Draft, part: Part) -> None:
    from checker.circuit.four_poles import add_controlled, add_line  # few boards have any

    (add_line if part.letter.upper() in ("T", "O") else add_controlled)(draft, part)


def _add(draft: Draft, kind: Kind, part: Part) -> None:
    """Put a part in the draft; one whose model has an impossible figure is left out, with that figure named."""
    try:
        _ADDERS[kind](draft, part)
    except NotAQuantity as unsound:
        leave_out(draft, part, _FACT_KINDS.get(kind, "unmodelled"), f"a sound model of {part.ref}", str(unsound))


def _add_surroundings(draft: Draft) -> None:
    """Rails, ports, driven pins, and what parts without a model do at their pins."""
    if all(pin.kind == "connector" for pin in draft.loose_pins):
        add_rails(draft)
        add_ports(draft)
        add_drives(draft)
        return
    from checker.circuit.boundaries import add_boundaries, add_logic, check_supplies

    add_boundaries(draft)
    add_rails(draft)
    check_supplies(draft)
    add_ports(draft)
    add_drives(draft)
    add_logic(draft)


def _sorted(netlist: Netlist, draft: Draft) -> list[tuple[Kind, Part]]:
    """Fitted parts with their kinds, sources first, couplings last, then in natural order."""
    spice = netlist.format == "spice"
    kinds: list[tuple[Kind, Part]] = []
    for part in netlist.parts:
        if part.do_not_fit:
            draft.notes.add("parts", "marked as not fitted; left out", part.ref)
        else:
            kinds.append((_kind(draft, part, spice=spice), part))

    def place(entry: tuple[Kind, Part]) -> tuple[int, object]:
        kind, part = entry
        return (0 if kind in _FIRST else 2 if kind in _LAST else 1), natural_key(part.ref)

    return sorted(kinds, key=place)


def _kind(draft: Draft, part: Part, *, spice: bool) -> Kind:
    """What a part is; an unrecognised one may still be a transistor or diode by its part number."""
    kind = classify(part, spice=spice)
    if kind != "unmodelled" or not 2 <= len(part.pins) <= 6:
        return kind
    if part.letter.upper() in _UNIT and two_ends(part) and written_value(part, _UNIT[part.letter.upper()][1]):
        return _UNIT[part.letter.upper()][0]
    card = intended_card(draft, part) or card_by_value(part)
    if card is None:
        return kind
    if card.kind in BIPOLAR:
        return "bipolar"
    return "diode" if card.kind in DIODE else "fet"


def _add_coaxial(draft: Draft, part: Part) -> None:
    """A coaxial connector: a candidate port; its pins draw nothing by themselves."""
    draft.facts[part.ref] = bare_fact(draft, part, "connector")
    draft.coaxial_parts.append(part)


def _add_mechanical(draft: Draft, part: Part) -> None:
    """Test points, holes, marks: nothing."""


def _check_names(draft: Draft) -> None:
    """The intent's [[part]] entries must name parts of the netlist."""
    refs = {part.ref for part in draft.netlist.parts}
    for said in draft.intent.parts:
        if said.ref not in refs and said.ref.rsplit(".", 1)[0] not in refs:
            message = f"[[part]]: {unknown(said.ref, refs, 'part')}"
            raise InputTrouble(message, file=said.origin.file, line=said.origin.line)


def _no_ground(draft: Draft) -> None:
    nets = sorted(draft.present() - {draft.ground}, key=natural_key)
    draft.loose("ground", nets, "ground", '[rails] "NET" = "0 V" for the net that is ground')


def _temperature_k(netlist: Netlist, intent: Intent) -> float:
    """Nominal temperature [K]: intent, else netlist, else the default."""
    for celsius in (intent.ambient.nominal_c, netlist.temperature_c):
        if celsius is not None:
            return celsius + ZERO_CELSIUS_K
    return DEFAULT_AMBIENT_C + ZERO_CELSIUS_K
