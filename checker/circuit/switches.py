"""Switches and relays: contacts at rest, and the other position as a state of the board.

A contact is a resistor that a state closes or opens, so that every position is one more row of the same solve. Pin
numbers are those of editor symbols and of data sheets (common practice, from memory).
"""

from __future__ import annotations

import re
from collections.abc import Iterator, Mapping, Sequence
from typing import Final

from checker.circuit.draft import Draft
from checker.circuit.order import last_segment
from checker.circuit.parts import symbol_name
from checker.circuit.rails import volts_of_name
from checker.circuit.types import Change, Scenario
from checker.netlist.types import Part
from checker.pattern import lazy
from checker.shape import frozen

CLOSED_OHM: Final = 0.05
"""A closed contact (data sheets of small relays and switches give 0.05 to 0.1 ohm; from memory)."""
OPEN_OHM: Final = 1e12
MOST_STATES: Final = 6
"""More switches than this on a board stay in their rest position: a keyboard is no list of states."""
COIL_W: Final = 0.4
"""Power that a relay coil takes at its nominal voltage, where nothing tells its resistance (common practice)."""

_SPST: Final = lazy(r"SW_(?:SPST|DIP_x01|REED)\w*|SPST|SW_NO", re.IGNORECASE)
_SPDT: Final = lazy(r"SW_SPDT(?!_312|_XKB)[\w-]*|SPDT|SWITCH_INV", re.IGNORECASE)
_DPDT: Final = lazy(r"SW_DPDT(?:_x2)?[\w-]*", re.IGNORECASE)
_RELAYS: Final[Mapping[str, tuple[tuple[str, str], tuple[tuple[str, str, str], ...]]]] = {
    "G5V-2": (("1", "16"), (("4", "6", "8"), ("13", "11", "9"))),
    "G5V-1": (("2", "9"), (("5", "1", "10"),)),
    "G5LE": (("2", "5"), (("1", "4", "3"),)),
    "HJR-4102": (("2", "5"), ()),
}
"""Type -> coil pins, (common, closed at rest, open at rest) of each contact set."""
_OLD: Final = {"C": "common", "R": "rest", "T": "work"}
"""Pin names of an old editor library: C1 common, R1 at rest, T1 at work."""
_VOLTS: Final = lazy(r"(?<![A-Z0-9.])(?:DC)?[-_ ]?(\d{1,2}(?:[.,]\d)?) ?V(?:DC)?(?![A-Z0-9])|DC(\d{1,2})(?!\d)", re.I)


@frozen
class Contact:
    """One change-over contact by nets; "" where a side is missing."""

    common: str
    rest: str
    work: str


def is_switch(part: Part) -> bool:
    """A toggle or slide switch whose pins are known."""
    name = symbol_name(part)
    return any(pattern.fullmatch(name) for pattern in (_SPST, _SPDT, _DPDT)) and bool(contacts_of_switch(part))


def contacts_of_switch(part: Part) -> tuple[Contact, ...]:
    """The contacts of a switch; the first position of an editor's symbol is its pin 1."""
    name = symbol_name(part)
    nets = {pin.number: pin.net for pin in part.pins}
    if _SPST.fullmatch(name) and len(part.pins) == 2:
        first, second = (pin.net for pin in part.pins)
        return (Contact(common=first, rest="", work=second),)
    sets: Sequence[tuple[str, str, str]] = ()
    if _SPDT.fullmatch(name):
        sets = (("2", "1", "3"),)
    elif _DPDT.fullmatch(name):
        sets = (("2", "1", "3"), ("5", "4", "6"))
    return tuple(Contact(common=nets[c], rest=nets.get(r, ""), work=nets.get(w, "")) for c, r, w in sets if c in nets)


def is_relay(part: Part) -> bool:
    """A part with a coil and contacts, by its letter, library or value."""
    library = part.symbol.split(":", 1)[0].lower()
    return part.letter.upper() in ("K", "RL", "RLY", "RY") or library == "relay"


def add_contacts(draft: Draft) -> None:
    """Contacts of switches and relays, coils of relays, in place of their loose pins."""
    loose = {pin.part for pin in draft.loose_pins}
    parts = [part for part in draft.netlist.parts if part.ref in loose and not part.do_not_fit]
    switches = [part for part in parts if is_switch(part)]
    for part in switches:
        _switch(draft, part, as_state=len(switches) <= MOST_STATES)
    for part in parts:
        if is_relay(part):
            _relay(draft, part)


# --- switches -----------------------------------------------------------------------------------------------


def _switch(draft: Draft, part: Part, *, as_state: bool) -> None:
    contacts = contacts_of_switch(part)
    _take(draft, part, {net for each in contacts for net in (each.common, each.rest, each.work)})
    if len(contacts) == 1 and not contacts[0].rest and _feeds(draft, contacts[0]):
        draft.notes.add("parts", "switch in a supply taken as closed", part.ref)
        draft.tie(part.ref, contacts[0].common, contacts[0].work, 0.0, link=True)
        return
    text = (
        "open switch taken as open"
        if not any(each.rest for each in contacts)
        else "switch taken in the position of pin 1"
    )
    other = f"{part.ref} switched over"
    draft.notes.add("parts", f'{text}; "{other}" is a state' if as_state else text, part.ref)
    changes = [change for place, each in enumerate(contacts) for change in _place(draft, f"{part.ref}.{place}", each)]
    if as_state and changes:
        draft.states.append(Scenario(name=other, kind="state", changes=tuple(changes)))


def _feeds(draft: Draft, contact: Contact) -> bool:
    """Whether a two-pin switch stands between a known supply and a net that nothing else feeds."""
    known = [_volts(draft, net) for net in (contact.common, contact.work)]
    return sorted(volts is None for volts in known) == [False, True] and any(known)


def _volts(draft: Draft, net: str) -> float | None:
    """Volts of a net that a source holds, that the intent declares or that its name states."""
    key = draft.net(net)
    known = draft.known_volts(key)
    said = {rail.net: rail.volts for rail in draft.intent.rails}
    return known if known is not None else said.get(last_segment(key), said.get(key, volts_of_name(key)))


def _place(draft: Draft, name: str, contact: Contact) -> Iterator[Change]:
    """Put a contact in the draft at rest; what would switch it over."""
    for side, net, at_rest in (("rest", contact.rest, CLOSED_OHM), ("work", contact.work, OPEN_OHM)):
        element = f"{name}.{side}"
        if not net or draft.net(net) == draft.net(contact.common):
            continue
        draft.wire("resistors", element, contact.common, net, at_rest)
        over = OPEN_OHM if at_rest == CLOSED_OHM else CLOSED_OHM
        yield Change(part=element, property="r_ohm", value=over)


# --- relays -------------------------------------------------------------------------------------------------


def _relay(draft: Draft, part: Part) -> None:
    coils, contacts = _relay_pins(draft, part)
    for place, coil in enumerate(coils):
        ohm, text = _coil_ohm(draft, part, coil)
        if ohm is not None:
            draft.notes.add("parts", text, part.ref)
            draft.wire("resistors", f"{part.ref}.coil" + (str(place + 1) if len(coils) > 1 else ""), *coil, ohm)
            _take(draft, part, set(coil))
    if not contacts:
        return
    _take(draft, part, {net for each in contacts for net in (each.common, each.rest, each.work)})
    changes = [change for place, each in enumerate(contacts) for change in _place(draft, f"{part.ref}.{place}", each)]
    if changes:
        other = f"{part.ref} pulled in"
        draft.notes.add("parts", f'relay contacts at rest; "{other}" is a state', part.ref)
        draft.states.append(Scenario(name=other, kind="state", changes=tuple(changes)))


def _relay_pins(draft: Draft, part: Part) -> tuple[tuple[tuple[str, str], ...], tuple[Contact, ...]]:
    """(nets of each coil, contacts), from the pins' names, the type, or the diodes across coils."""
    nets = {pin.number.upper(): pin.net for pin in part.pins}
    for text in (part.value, symbol_name(part)):
        for name, (coil, sets) in _RELAYS.items():
            if name in text.upper() and set(coil) <= nets.keys():
                return ((nets[coil[0]], nets[coil[1]]),), _contacts(nets, sets)
    named = {**nets, **{pin.function.upper(): pin.net for pin in part.pins if pin.function not in ("", "~")}}
    if {"A1", "A2"} <= named.keys():
        sets = tuple((f"{n}1", f"{n}2", f"{n}4") for n in "1234" if f"{n}1" in named)
        return ((named["A1"], named["A2"]),), _contacts(named, sets)
    old = [pin for pin in part.pins if re.fullmatch(r"[CRT]\d", pin.function.upper())]
    rest = [pin.net for pin in part.pins if pin not in old]
    if len(old) >= 2 and len(rest) == 2:
        sets = tuple((f"C{n}", f"R{n}", f"T{n}") for n in "1234" if f"C{n}" in named)
        return ((rest[0], rest[1]),), _contacts(named, sets)
    return _by_diode(draft, part), ()


def _contacts(nets: Mapping[str, str], sets: Sequence[tuple[str, str, str]]) -> tuple[Contact, ...]:
    return tuple(Contact(common=nets[c], rest=nets.get(r, ""), work=nets.get(w, "")) for c, r, w in sets if c in nets)


def _by_diode(draft: Draft, part: Part) -> tuple[tuple[str, str], ...]:
    """Every pair of nets of the part that a diode joins: a coil with its free-wheel diode."""
    own = {draft.net(pin.net) for pin in part.pins}
    across = sorted({device.nets for device in draft.devices["diode"].values() if set(device.nets) <= own})
    if across:
        draft.notes.add("pins", "a coil is taken to be on two pins that a diode joins", part.ref)
    return tuple((cathode, anode) for anode, cathode in across)


def _coil_ohm(draft: Draft, part: Part, coil: tuple[str, str]) -> tuple[float | None, str]:
    """Resistance of a coil [ohm] and the words for it: U^2/0.4 W at the volts of its name, else of its supply."""
    found = _VOLTS.search(re.sub(r"[_-]", " ", part.value)) or _VOLTS.search(re.sub(r"[_-]", " ", part.symbol))
    volts = float((found[1] or found[2]).replace(",", ".")) if found else None
    whence = "the volts of its name"
    if volts is None:
        known = [abs(v) for v in (_volts(draft, net) for net in coil) if v]
        volts, whence = (known[0], "its supply") if len(known) == 1 else (None, "")
    if not volts:
        return None, ""
    ohm = volts**2 / COIL_W
    return ohm, (
        f"relay coil taken as {ohm:.3g} ohm, {COIL_W:g} W at {volts:g} V, {whence} (common practice, no source); "
        "[[part]] resistance makes it exact"
    )


def _take(draft: Draft, part: Part, nets: set[str]) -> None:
    draft.driven_pins.update((part.ref, pin.number) for pin in part.pins if pin.net in nets)
