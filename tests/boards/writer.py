"""Turns the sample boards' SPICE-style text into the schematic editor's export, version E.

For sample and test boards only: plain elements R, C, D, Q and unknown subcircuits (connectors, coils). It
shares no code with the readers, so that a board in both formats tests them. Run as a script it rewrites the
`.net` files of `sample_schematics/` from the `.cir` beside them.
"""

from __future__ import annotations

import uuid
from collections.abc import Iterator
from dataclasses import dataclass
from pathlib import Path

SAMPLES = Path(__file__).resolve().parents[2] / "sample_schematics"
_SPACE = uuid.UUID("6f9d7f0e-5b0b-4f6e-9a39-2c1f4c1f8a11")


@dataclass(frozen=True, slots=True, kw_only=True)
class Symbol:
    """A library symbol. `pins`: (number, name, electrical type) in the order of the nodes in SPICE text."""

    library: str
    name: str
    description: str
    footprint: str
    pins: tuple[tuple[str, str, str], ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class Placed:
    """A part of the board: its nets in the order of its symbol's pins."""

    ref: str
    value: str
    symbol: Symbol
    nets: tuple[str, ...]


_TWO = (("1", "", "passive"), ("2", "", "passive"))
_RESISTOR = Symbol(
    library="Device", name="R", description="Resistor", footprint="Resistor_SMD:R_0805_2012Metric", pins=_TWO
)
_CAPACITOR = Symbol(
    library="Device",
    name="C",
    description="Unpolarized capacitor",
    footprint="Capacitor_SMD:C_0805_2012Metric",
    pins=_TWO,
)
_ELECTROLYTIC = Symbol(
    library="Device",
    name="C_Polarized",
    description="Polarized capacitor",
    footprint="Capacitor_THT:CP_Radial_D8.0mm_P3.50mm",
    pins=_TWO,
)


def _transistor(name: str, kind: str, footprint: str, cbe: str) -> Symbol:
    base = ("B", "input")
    names = {"C": ("C", "passive"), "B": base, "E": ("E", "passive")}
    pins = tuple((number, *names[letter]) for letter, number in zip("CBE", cbe, strict=True))
    return Symbol(
        library="Transistor_BJT",
        name=name,
        description=f"{kind} bipolar transistor",
        footprint=f"Package_TO_SOT_{footprint}",
        pins=pins,
    )


def _header(name: str, count: int) -> Symbol:
    pins = tuple((str(n), f"Pin_{n}", "passive") for n in range(1, count + 1))
    return Symbol(
        library="Connector",
        name=name,
        description=f"Pin header, {count} positions",
        footprint=f"Connector_PinHeader_2.54mm:PinHeader_1x{count:02d}_P2.54mm_Vertical",
        pins=pins,
    )


_COAX = Symbol(
    library="Connector",
    name="Conn_Coaxial",
    description="Coaxial connector",
    footprint="Connector_Coaxial:BNC_PanelMountable_Vertical",
    pins=(("1", "In", "passive"), ("2", "Ext", "passive")),
)
SYMBOLS: dict[str, Symbol] = {
    "2N3904": _transistor("2N3904", "NPN", "THT:TO-92_Inline", "321"),
    "2N3906": _transistor("2N3906", "PNP", "THT:TO-92_Inline", "321"),
    "MMBT3904": _transistor("MMBT3904", "NPN", "SMD:SOT-23", "312"),
    "MMBTH10": _transistor("MMBTH10", "NPN", "SMD:SOT-23", "312"),
    "1N4148": Symbol(
        library="Diode",
        name="1N4148",
        description="Switching diode",
        footprint="Diode_THT:D_DO-35_SOD27_P7.62mm_Horizontal",
        pins=(("2", "A", "passive"), ("1", "K", "passive")),
    ),
    "CONN_COAX_50": _COAX,
    "CONN_COAX_75": _COAX,
    "CONN_01X02": _header("Conn_01x02_Pin", 2),
    "CONN_01X03": _header("Conn_01x03_Pin", 3),
    "RELAY_COIL": Symbol(
        library="harbour-radio",
        name="RELAY_COIL",
        description="Relay coil",
        footprint="harbour-radio:RELAY_COIL",
        pins=(("A1", "A1", "passive"), ("A2", "A2", "passive")),
    ),
}
"""By value; resistors and capacitors go by their letter."""


def _symbol(letter: str, value: str) -> Symbol:
    if letter == "R":
        return _RESISTOR
    if letter == "C":
        return _ELECTROLYTIC if value.endswith("u") else _CAPACITOR
    return SYMBOLS[value]


def placed_parts(text: str) -> list[Placed]:
    """The parts of a SPICE-style text [title line first, one element a line, ground `0` written as `GND`].

    Raises KeyError for a value without a symbol, ValueError where the node count does not fit the symbol.
    """
    parts = []
    for line in text.splitlines()[1:]:
        words = line.split()
        if not words or words[0].startswith(("*", ".")):
            continue
        name, *nodes, value = words
        symbol = _symbol(name[0], value)
        if len(nodes) != len(symbol.pins):
            raise ValueError(f"{name}: {len(nodes)} nodes, {symbol.name} has {len(symbol.pins)} pins")
        nets = tuple("GND" if node == "0" else node for node in nodes)
        shown = value.replace("meg", "M")  # a schematic's M is mega, SPICE text's is milli
        parts.append(Placed(ref=name.removeprefix("X"), value=shown, symbol=symbol, nets=nets))
    return sorted(parts, key=lambda part: (part.ref[0], int(part.ref[1:])))


def _design(name: str, title: str) -> Iterator[str]:
    yield f'  (design\n    (source "{name}.kicad_sch")\n    (date "2025-03-14T10:00:00+0000")'
    yield '    (tool "schematic editor 8.0.4")\n    (sheet (number "1") (name "/") (tstamps "/")\n      (title_block'
    yield f'        (title "{title}")\n        (company)\n        (rev "1")\n        (date "2025-03-14")'
    yield f'        (source "{name}.kicad_sch")'
    comments = "\n".join(f'        (comment (number "{n}") (value ""))' for n in range(1, 10))
    yield comments + ")))"


def _component(name: str, part: Placed) -> str:
    symbol = part.symbol
    stamp = uuid.uuid5(_SPACE, f"{name}/{part.ref}")
    return f"""    (comp (ref "{part.ref}")
      (value "{part.value}")
      (footprint "{symbol.footprint}")
      (datasheet "~")
      (description "{symbol.description}")
      (fields
        (field (name "Footprint") "{symbol.footprint}")
        (field (name "Datasheet") "~")
        (field (name "Description") "{symbol.description}"))
      (libsource (lib "{symbol.library}") (part "{symbol.name}") (description "{symbol.description}"))
      (property (name "Sheetname") (value "Root"))
      (property (name "Sheetfile") (value "{name}.kicad_sch"))
      (sheetpath (names "/") (tstamps "/"))
      (tstamps "{stamp}"))"""


def _libpart(symbol: Symbol, letter: str) -> str:
    pins = sorted(symbol.pins)
    rows = "\n".join(f'        (pin (num "{no}") (name "{name}") (type "{kind}"))' for no, name, kind in pins)
    return f"""    (libpart (lib "{symbol.library}") (part "{symbol.name}")
      (description "{symbol.description}")
      (docs "~")
      (fields
        (field (name "Reference") "{letter}")
        (field (name "Value") "{symbol.name}")
        (field (name "Footprint") "{symbol.footprint}")
        (field (name "Datasheet") "~")
        (field (name "Description") "{symbol.description}"))
      (pins
{rows}))"""


def _nets(parts: list[Placed]) -> Iterator[str]:
    nodes: dict[str, list[str]] = {}
    for part in parts:
        for net, (number, name, kind) in zip(part.nets, part.symbol.pins, strict=True):
            function = f' (pinfunction "{name}")' if name else ""
            row = f'      (node (ref "{part.ref}") (pin "{number}"){function} (pintype "{kind}"))'
            nodes.setdefault(net, []).append(row)
    for code, net in enumerate(sorted(nodes), start=1):
        rows = "\n".join(sorted(nodes[net]))
        yield f'    (net (code "{code}") (name "{net}") (class "Default")\n{rows})'


def kicad_export(name: str, text: str) -> str:
    """The board `name` of the SPICE-style `text` as an export of version E, ending in a newline."""
    parts = placed_parts(text)
    letters = {part.symbol.library + ":" + part.symbol.name: (part.symbol, part.ref[0]) for part in parts}
    blocks = [
        "\n".join(_design(name, text.splitlines()[0].removeprefix("* "))),
        "  (components\n" + "\n".join(_component(name, part) for part in parts) + ")",
        "  (libparts\n" + "\n".join(_libpart(*letters[key]) for key in sorted(letters)) + ")",
        "  (nets\n" + "\n".join(_nets(parts)) + ")",
    ]
    return '(export (version "E")\n' + "\n".join(blocks) + ")\n"


def main() -> None:
    """Write `NAME.net` beside every `NAME.cir` of the sample boards."""
    for path in sorted(SAMPLES.glob("*/*.cir")):
        path.with_suffix(".net").write_text(kicad_export(path.stem, path.read_text("utf-8")), "utf-8")


if __name__ == "__main__":
    main()
