"""What a part is: from its simulation fields, symbol, pins and value; the letter of the reference comes last.

Symbol names are those of the editor's own libraries and of common private ones (common practice, no source).
"""

from __future__ import annotations

import re
from collections.abc import Mapping
from typing import Final, Literal

from checker.netlist.types import Part
from checker.pattern import lazy

Kind = Literal[
    "resistor",
    "capacitor",
    "inductor",
    "coupling",
    "voltage",
    "current",
    "diode",
    "bipolar",
    "fet",
    "potentiometer",
    "coaxial",
    "connector",
    "open",
    "closed",
    "mechanical",
    "controlled",
    "line",
    "battery",
    "array",
    "transformer",
    "optocoupler",
    "unmodelled",
]

_SPICE: Final[dict[str, Kind]] = {
    "R": "resistor",
    "C": "capacitor",
    "L": "inductor",
    "K": "coupling",
    "V": "voltage",
    "I": "current",
    "D": "diode",
    "Q": "bipolar",
    "J": "fet",
    "M": "fet",
    "Z": "fet",
    "E": "controlled",
    "F": "controlled",
    "G": "controlled",
    "H": "controlled",
    "B": "controlled",
    "T": "line",
    "O": "line",
}
_DEVICE: Final[dict[str, Kind]] = {
    "R": "resistor",
    "C": "capacitor",
    "L": "inductor",
    "D": "diode",
    "V": "voltage",
    "I": "current",
    "NPN": "bipolar",
    "PNP": "bipolar",
    "Q": "bipolar",
    "NJFET": "fet",
    "PJFET": "fet",
    "NMOS": "fet",
    "PMOS": "fet",
    "NMES": "fet",
    "PMES": "fet",
}
"""Words of the simulation fields (`Sim.Device`, `Spice_Primitive`). The older field's J and M are not among
them: it repeats the letter of the reference, so every connector J1 would be a transistor."""

COAXIAL: Final = lazy(
    r"COAX|(?<![A-Z0-9])(?:HD-?BNC|BNC|TNC|SMA|SMB|SMC|SMP3?|4[.,]3-10|MCX|MMCX|UFL|U\.FL|IPEX|RF[-_ ]?CONN)(?![A-Z])",
    re.IGNORECASE,
)
_SMA_DIODE: Final = lazy(r"(?:^|[:_\[ -])D(?:O-?214A[CB])?_?(?:SM[ABC])|DIODE", re.IGNORECASE)
"""Diode cases are called SMA, SMB and SMC too."""

_SYMBOLS: Final[tuple[tuple[Kind, str], ...]] = (
    (
        "mechanical",
        r"TEST(?:_?P(?:OIN)?T|POINT\w*|_?PAD)?|TST|TP|\w*MOUNT\w*HOLE\w*|HOLE\w*|FIDUCIAL\w*|\w*LOGO\w*|MX_STAB",
    ),
    (
        "closed",
        r"(?:SOLDER)?_?JUMPER\w*(?:NC|BRIDGED|CLOSED)\w*|\w*FUSE(?!D)\w*|FERRITE\w*|BEAD|FB|FILTER|NET-?TIE\w*",
    ),
    ("open", r"(?:SOLDER)?_?JUMPER\w*|SW_PUSH\w*|PUSHBUTTON\w*|CRYSTAL\w*|XTAL\w*|\w*XTAL4PIN"),
    ("potentiometer", r"R_?POT\w*|POT(?:ENTIOMETER)?(?:[-_]\w+)?|TRIM_?POT\w*|R_TRIM\w*|R_VARIABLE\w*"),
    ("array", r"R_?PACK\d+\w*"),
    ("unmodelled", r"R_?(?:NETWORK|ARRAY|PHOTO)\w*|R_SHUNT\w*|THERM\w*|VARISTOR\w*|LDR\w*|VTL5C\w*"),
    (
        "optocoupler",
        r"(?:PC|LTV-?|EL|HCPL-?|KB)817\w*|PC123\w*|4N[23][5-8]\w*|CNY17\w*(?:-\d)?|SFH61[07]A?-\d\w*|TLP\d{3}(?:-1)?",
    ),
    ("transformer", r".*TRANSFORMER.*|.*TRANSF|.*TRAFO.*|XMFR.*|.*BALUN.*|.*BIFILAR.*"),
    ("resistor", r"R(?:ES(?:ISTOR)?)?(?:[-_ ]\w++)*+"),
    ("capacitor", r"CP?1?(?:[-_](?:SMALL|POL\w*|US\w*|EU\w*|ALUM\w*|DEVICE|TRIM\w*|VARIABLE|\d+)[\w.-]*)?"),
    ("capacitor", r"CAP(?:ACITOR)?(?:[-_]\w++)*+|C_?TRIM\w*|CPOL\w*"),
    (
        "inductor",
        r"L(?:[-_](?:SMALL|CORE|IRON|FERRITE|US|DEVICE|\d)\w*+)*+|IND(?:UCTOR)?(?:_SMALL|_IRON\w*)?|CHOKE",
    ),
    ("voltage", r"V(?:SOURCE|DC|AC|SIN|PULSE|PWL)"),
    ("current", r"I(?:SOURCE|DC|AC|SIN|PULSE|PWL)"),
    ("battery", r"BATTERY\w*|BAT"),
    ("diode", r"(?:IR_?)?LED(?:[-_](?:SMALL|ALT|FILLED|US|PAD|DEVICE|\d)\w*+)*+|LD271"),
    (
        "diode",
        r"D(?:[-_](?:SMALL|ALT|ZENER|SCHOTTKY|TVS|PHOTO|FILLED|DEVICE)\w*+)*+|DIODE(?:SCH)?|ZENER\w*|SCHOTTKY\w*",
    ),
    ("diode", r"1N\d{2,4}\w*|1SS\d+\w*|F?D?LL4148\w*|S[1-5][A-M]|SS[1-3]\d|BZX\w+|BAT8[1-6]\w*"),
    ("bipolar", r"(?:Q_|TRANSISTOR_|BJT_)?(?:NPN|PNP)(?!.*DARL)(?:_[BCES]{3,4}|_SMALL)?"),
    (
        "fet",
        r"(?:Q_)?[NP](?:MOS|JFET|MOSFET)\w*|MOS(?:FET)?_?[NP]\w*|FET_[NP]\w*|JFET_[NP]\w*|DGMOS|\w*MOSFET\w*",
    ),
    (
        "connector",
        r"(?:CONN|HEADER|HEAD|BORNIER|SCREW_?TERMINAL|USB|BARREL_?JACK|\w*JACK|DB\d|DIN)\w*+(?:[- ]\w++)*+",
    ),
    ("connector", r"PHONES\w*|PJ301[\w-]*|\w*JACK\w*+(?:-\w++)*+|M0\dX\w*|EURO_PWR\w*"),
)
USUAL: Final[dict[str, Kind]] = {
    **dict.fromkeys(("R", "R_Small", "R_US", "R_Small_US"), "resistor"),
    **dict.fromkeys(("C", "C_Small", "C_Polarized", "C_Polarized_Small", "CP", "CP1"), "capacitor"),
    **dict.fromkeys(("L", "L_Small"), "inductor"),
    **dict.fromkeys(("D", "LED", "D_Zener", "D_Schottky", "1N4148"), "diode"),
    **{f"Conn_01x{count:02}{tail}": "connector" for count in range(1, 21) for tail in ("", "_Pin", "_Socket")},
}
"""The commonest of what the patterns above say, so that a small board need not compile them."""
_COMPILED: Final = tuple((kind, lazy(pattern, re.IGNORECASE)) for kind, pattern in _SYMBOLS)
_RESCUE: Final = lazy(
    r"-(?:RESCUE\b.*|device|conn|transistors?|diode|linear|mechanical|custom_lib|Transistor_\w+)$",
    re.IGNORECASE,
)
_LETTERS: Final[tuple[tuple[Kind, str], ...]] = (
    ("resistor", r"R|RES"),
    ("capacitor", r"C|CAP"),
    ("inductor", r"L"),
    ("diode", r"D|CR|DZ|ZD|LED"),
    ("closed", r"F|FB|JUMP"),
    ("connector", r"J|P|CN|CON|X|XP|XS"),
    ("mechanical", r"TP|MH|H|FID|HOLE"),
    ("open", r"Y|XTAL|QZ"),
    ("bipolar", r"Q|VT"),
)
"""Used where the export carries no symbol at all."""


def symbol_name(part: Part) -> str:
    """The symbol's own name, without library and without the tail that a rescue library adds: the library that the
    symbol was rescued from, or its own name."""
    library, _, name = part.symbol.rpartition(":")
    if "-" not in name:
        return name
    bare = _RESCUE.sub("", name.removesuffix(f"-{library}"))
    return name.rpartition("-")[0] if bare == name and library.lower().endswith("-rescue") else bare


def classify(part: Part, *, spice: bool) -> Kind:
    """Sort one part; anything that is not recognised is "unmodelled"."""
    if spice:
        return _spice_kind(part)
    field = part.fields.get("Sim.Device") or part.fields.get("Spice_Primitive") or ""
    if field.upper() in _DEVICE:
        return _DEVICE[field.upper()]
    if is_coaxial(part):
        return "coaxial"
    by_pins = _by_functions(part)
    if by_pins is not None:
        return by_pins
    kind = by_symbol(symbol_name(part))
    if kind is not None:
        return kind
    if part.symbol:
        return _by_library(part)
    return next((kind for kind, letters in _LETTERS if re.fullmatch(letters, part.letter.upper())), "unmodelled")


def by_symbol(name: str, usual: Mapping[str, Kind] = USUAL) -> Kind | None:
    """The kind that a symbol's own name tells, None where it tells none."""
    known = usual.get(name)
    return known or next((kind for kind, pattern in _COMPILED if pattern.fullmatch(name)), None)


def is_coaxial(part: Part) -> bool:
    """Whether symbol, footprint, model or value names a coaxial connector."""
    if part.letter.upper() in ("R", "C", "L", "D", "Q", "U", "IC"):
        return False
    texts = (part.symbol.rsplit(":", 1)[-1], part.footprint, part.model, part.value)
    return any(COAXIAL.search(text) and not _SMA_DIODE.search(text) for text in texts)


_CONNECTOR: Final = lazy(r"(?<![A-Z])(?:CONN|HEADER|\w*JACK|TERMINAL)", re.IGNORECASE)


def _spice_kind(part: Part) -> Kind:
    letter = part.letter.upper()
    if letter == "X" and is_coaxial(part):
        return "coaxial"
    if letter in "XJCP" and _CONNECTOR.search(f"{part.model} {part.value}"):
        return "connector"
    return _SPICE.get(letter, "unmodelled")


def _by_functions(part: Part) -> Kind | None:
    """Transistors by the names of their pins, whatever the symbol is called."""
    names = {re.sub(r"[\d_]+$", "", pin.function.upper().strip("~")) for pin in part.pins} - {""}
    if not names or part.letter.upper() in ("U", "IC", "J", "P", "K", "RL"):
        return None
    if {"G", "D", "S"} <= names or {"GATE", "DRAIN", "SOURCE"} <= names or {"G", "C", "E"} == names:
        return "fet"
    if names in ({"B", "C", "E"}, {"BASE", "COLLECTOR", "EMITTER"}, {"B", "C", "E", "S"}):
        return "bipolar"
    return None


def _by_library(part: Part) -> Kind:
    """By the library's name or the description, for symbols named after a part number."""
    library = part.symbol.split(":", 1)[0].lower() if ":" in part.symbol else ""
    text = f"{part.description} {symbol_name(part)}"
    if library.startswith("connector") or library in ("conn", "connectors"):
        return "connector"
    if part.letter.upper() in ("U", "IC", "A", "M", "PS", "K", "RL", "TR") or "amplifier_op" in library:
        return "unmodelled"
    if re.search(r"\b(?:N|P)[- ]?(?:channel|MOS|JFET)|MOSFET|\bJ?FET\b|IGBT", text, re.IGNORECASE):
        return "fet"
    if re.search(r"photo|opto", part.description, re.IGNORECASE):
        return "unmodelled"
    if "bjt" in library or re.search(r"\b(?:NPN|PNP)\b", text, re.IGNORECASE):
        return "bipolar"
    if library in ("diode", "led", "diodes") or re.search(r"\b(?:diode|LED)\b", part.description, re.IGNORECASE):
        return "diode"
    if part.letter.upper() in ("Q", "VT"):
        return "bipolar"
    return "connector" if part.letter.upper() in ("J", "CN", "CON") else "unmodelled"
