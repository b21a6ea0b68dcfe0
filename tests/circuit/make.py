"""Netlists and intents written by hand, so that circuit tests need no reader."""

from __future__ import annotations

import re
from collections.abc import Iterable, Mapping
from typing import Any

from checker.circuit.build import build_circuit
from checker.circuit.types import Circuit
from checker.intent.types import Intent
from checker.netlist.types import Model, Net, Netlist, Part, Pin, Source
from checker.quantity.value import Origin

HERE = Origin(kind="netlist", file="board", line=1)
SAID = Origin(kind="intent", file="board.intent.toml", line=7)


def spice_part(ref: str, nets: str, value: float | None = None, **more: Any) -> Part:
    """A SPICE element: letter from the reference, pins numbered from 1."""
    pins = tuple(Pin(number=str(place), net=net) for place, net in enumerate(nets.split(), start=1))
    text = more.pop("text", "" if value is None else f"{value:g}")
    letter = more.pop("letter", ref.rsplit(".", 1)[-1][0].upper())
    return Part(ref=ref, letter=letter, value=text, pins=pins, origin=HERE, number=value, **more)


def volts(ref: str, nets: str, dc: float | None, **more: Any) -> Part:
    """An independent voltage source."""
    return spice_part(ref, nets, source=Source(dc=dc, **more))


def bipolar(ref: str, nets: str, model: str, **params: float) -> Part:
    """A SPICE Q element."""
    return spice_part(ref, nets, text=model, model=model, params=params)


def kicad_part(ref: str, symbol: str, value: str, pins: Mapping[str, str], **more: Any) -> Part:
    """A schematic part; `pins`: number -> net, or "net|function|kind"."""
    made = []
    for number, text in pins.items():
        net, function, kind = (*text.split("|"), "", "")[:3]
        made.append(Pin(number=number, net=net, function=function, kind=kind))
    found = re.match(r"[A-Za-z]+", ref)
    letter = more.pop("letter", found[0] if found else "")
    return Part(ref=ref, letter=letter, value=value, symbol=symbol, pins=tuple(made), origin=HERE, **more)


def model(name: str, kind: str, **params: float) -> Model:
    """A `.model` card."""
    return Model(name=name, kind=kind, params=params, origin=HERE)


def netlist(parts: Iterable[Part], *, models: Iterable[Model] = (), **more: Any) -> Netlist:
    """A netlist of these parts; SPICE with ground 0 unless `format` says otherwise."""
    listed = tuple(parts)
    nets = {pin.net: Net(key=pin.net, name=pin.net) for part in listed for pin in part.pins}
    form = more.pop("format", "spice")
    ground = more.pop("ground", ("0",) if form == "spice" else ())
    return Netlist(
        path="board",
        format=form,
        sha256="",
        title="",
        parts=listed,
        nets=nets,
        models={entry.name.lower(): entry for entry in models},
        ground=ground,
        **more,
    )


def spice(*parts: Part, models: Iterable[Model] = (), intent: Intent | None = None, **more: Any) -> Circuit:
    """The circuit of SPICE parts."""
    return build_circuit(netlist(parts, models=models, **more), intent or Intent())


def kicad(*parts: Part, intent: Intent | None = None, **more: Any) -> Circuit:
    """The circuit of schematic parts."""
    return build_circuit(netlist(parts, format="kicad", **more), intent or Intent())


def value_of(circuit: Circuit, name: str) -> float:
    """Nominal value of a two-terminal element."""
    for table in (circuit.resistors, circuit.capacitors, circuit.inductors, circuit.voltages, circuit.currents):
        if name in table.names:
            return float(table.value[0, table.names.index(name)])
    raise AssertionError(f"no element {name}")


def ends_of(circuit: Circuit, name: str) -> tuple[str, str]:
    """Nets of a two-terminal element."""
    for table in (circuit.resistors, circuit.capacitors, circuit.inductors, circuit.voltages, circuit.currents):
        if name in table.names:
            first, second = table.nodes[table.names.index(name)]
            return circuit.nets[first], circuit.nets[second]
    raise AssertionError(f"no element {name}")


def assumed(circuit: Circuit, *words: str) -> bool:
    """Whether one assumption line holds all the words."""
    return any(all(word in line for word in words) for line in circuit.assumptions)


RES, CAP, DIODE, LED = "Device:R", "Device:C", "Device:D", "Device:LED"


def resistor(ref: str, first: str, second: str, value: str = "1k") -> Part:
    """A schematic resistor."""
    return kicad_part(ref, RES, value, {"1": first, "2": second})


def capacitor(ref: str, first: str, second: str, value: str = "100n") -> Part:
    """A schematic capacitor."""
    return kicad_part(ref, CAP, value, {"1": first, "2": second})
