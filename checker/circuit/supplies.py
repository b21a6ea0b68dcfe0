"""Transistors on a schematic board that no known supply reaches: their rest is not zero volts, it is unknown."""

from __future__ import annotations

from checker.circuit.draft import Draft
from checker.circuit.order import listed, natural
from checker.circuit.types import TRANSISTOR_FAMILIES


def find_unsupplied(draft: Draft) -> None:
    """Block every part of the board that holds transistors and that only ground feeds.

    A schematic often brings its supply in through a connector under a net name that says nothing; solved as drawn,
    such a part would rest at 0 V and every stage would seem cut off. Where an unmodelled part may feed it, that part
    is named already. SPICE text is taken as written.
    """
    if draft.netlist.format != "kicad":
        return
    groups = _Groups(draft)
    for nets, devices in groups.unfed():
        at = sorted((net for net in nets if net in groups.doors), key=lambda net: -len(draft.ends.get(net, ())))
        where = f' (perhaps "{at[0]}")' if at else ""
        draft.loose(
            natural(devices)[0], nets, f"the supply of {listed(devices)}", f"the net that feeds it under [rails]{where}"
        )


class _Groups:
    """Nets joined by parts that carry direct current, cut at nets of known voltage."""

    def __init__(self, draft: Draft) -> None:
        self._draft = draft
        self._above: dict[str, str] = {}
        self._fed: set[str] = set()
        self._devices: dict[str, list[str]] = {}
        self.doors = {draft.net(pin.net) for part in draft.plain_connectors for pin in part.pins}
        for table in ("resistors", "inductors", "voltages"):
            for name, wire in draft.table(table).items():
                self._join((wire.first, wire.second), live=name.startswith(("drive:", "port:")))
        for wire in draft.currents.values():
            self._join((wire.first,), live=wire.value != 0.0)
            self._join((wire.second,), live=wire.value != 0.0)
        for kind, devices in draft.devices.items():
            for name, device in devices.items():
                # The gate of a MOSFET brings no current.
                nets = device.nets[:3:2] if kind == "mosfet" else device.nets[:3]
                self._join(nets, device=name if kind in TRANSISTOR_FAMILIES else "")

    def _root(self, net: str) -> str:
        while self._above.get(net, net) != net:
            self._above[net] = self._above.get(self._above[net], self._above[net])
            net = self._above[net]
        return net

    def _join(self, nets: tuple[str, ...], *, live: bool = False, device: str = "") -> None:
        known = {net: self._draft.known_volts(net) for net in nets}
        free = [net for net in nets if known[net] is None]
        if not free:
            return
        for net in free[1:]:
            self._above[self._root(net)] = self._root(free[0])
        self._above.setdefault(self._root(free[0]), self._root(free[0]))
        told = any(net in self._draft.nameless or net in self._draft.foreign for net in free)
        if live or told or any(known.values()):
            self._fed.add(free[0])
        if device:
            self._devices.setdefault(free[0], []).append(device)

    def unfed(self) -> list[tuple[list[str], list[str]]]:
        """(nets, transistors) of each group that nothing feeds, in natural order."""
        fed = {self._root(net) for net in self._fed}
        members: dict[str, list[str]] = {}
        for net in natural(self._above):
            members.setdefault(self._root(net), []).append(net)
        devices: dict[str, list[str]] = {}
        for net, names in self._devices.items():
            devices.setdefault(self._root(net), []).extend(names)
        return [(nets, devices[root]) for root, nets in members.items() if root in devices and root not in fed]
