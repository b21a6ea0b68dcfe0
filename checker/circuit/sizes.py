"""What a resistor or capacitor bears, from its value text, its fields, and the size of its footprint.

Power and voltage by size are common practice of thick-film chips and of axial resistors, no source; makers differ.
"""

from __future__ import annotations

import re
from typing import Final

from checker.cards.types import Ratings
from checker.netlist.types import Part
from checker.pattern import lazy
from checker.quantity.parse import parse_engineering
from checker.trouble import NotAQuantity

CHIP: Final = {
    "0201": (0.05, 25.0), "0402": (0.063, 50.0), "0603": (0.1, 75.0), "0805": (0.125, 150.0), "1206": (0.25, 200.0),
    "1210": (0.5, 200.0), "1812": (0.75, 200.0), "2010": (0.75, 200.0), "2512": (1.0, 200.0),
}  # fmt: skip
"""Size in hundredths of an inch -> power [W], voltage [V] of a chip resistor."""
AXIAL: Final = {"0204": 0.25, "0207": 0.25, "0309": 0.5, "0411": 1.0, "0414": 1.0, "0516": 2.0, "0617": 2.0}
"""Size of an axial resistor (diameter and length in tenths of millimetres, DIN) -> power [W]."""
PRACTICE: Final = "common practice, no source"
_SIZE: Final = lazy(r"(?<!\d)(0201|0402|0603|0805|1206|1210|1812|2010|2512)(?!\d)")
_DIN: Final = lazy(r"(?:AXIAL_DIN|DIN)(\d{4})", re.IGNORECASE)
_WATTS: Final = lazy(r"(?<![\w.])(?:(\d)/(\d)|(\d+(?:[.,]\d+)?)\s*(m)?)\s*W(?![A-Z0-9])", re.IGNORECASE)
_DIELECTRIC: Final = lazy(
    r"(?<![A-Z0-9])(?:[CN][0P][G0]|X[5-8][RST]|Y5V|Z5U|U2J|PET|PPS|PEN|MKP|MKT|MKS|FKP|film|mica|ceramic|tantal(?:um)?"
    r"|electrolytic|polymer|polyester|polypropylene|polystyrene)(?![A-Z0-9])",
    re.IGNORECASE,
)
_POLARIZED: Final = lazy(r"C_?POL|CP\d?(?:_|$|\W)|POLARIZED", re.IGNORECASE)
_FIELDS: Final = ("Voltage", "Rated Voltage", "Voltage Rating", "V", "Rating")


def chip_size(footprint: str) -> str:
    """The size of a chip by its footprint's name ("0805"); empty where it tells none."""
    found = _SIZE.search(footprint.rpartition(":")[2])
    return found[1] if found else ""


def ratings_of(part: Part, kind: str) -> tuple[Ratings, str]:
    """(ratings, where they are from) of a resistor or capacitor; empty text where nothing tells any."""
    texts = (("value", part.value), *((f"field {key}", part.fields.get(key, "")) for key in (*_FIELDS, "Power")))
    watts = next(((w, who) for who, text in texts if (w := stated_watts(text)) is not None), None)
    volts = next(((v, who) for who, text in texts if (v := _stated_volts(text, kind)) is not None), None)
    size, axial = chip_size(part.footprint), _DIN.search(part.footprint)
    said = []
    if kind == "resistor" and watts is None:
        practice = CHIP[size][0] if size else AXIAL.get(axial[1]) if axial else None
        watts = None if practice is None else (practice, f"footprint, {PRACTICE}")
    if kind == "resistor" and volts is None and size:
        volts = CHIP[size][1], f"footprint, {PRACTICE}"
    for what, rated in (("power", watts), ("voltage", volts)):
        if rated is not None:
            said.append(f"{what} by the {rated[1]}")
    ratings = Ratings(p_max_w=watts[0] if watts else None, v_max_v=volts[0] if volts else None)
    return ratings, "; ".join(said)


def dielectric_of(part: Part) -> str:
    """What a capacitor is made with and where that is said; class letters as in EIA-198 (from memory)."""
    fields = [(f"field {key}", part.fields.get(key, "")) for key in ("Dielectric", "Type", "Description")]
    for who, text in (("value", part.value), *fields, ("description", part.description)):
        # Most values are a number and a letter; the long pattern is for the others.
        plain = not text or (who == "value" and text.isalnum())
        found = None if plain else _DIELECTRIC.search(text)
        if found is not None:
            return f"{found[0].upper() if len(found[0]) < 4 else found[0].lower()} by the {who}"
    polarized = "P" in part.symbol.upper() and _POLARIZED.search(part.symbol) is not None
    return "electrolytic by the symbol" if polarized else ""


def stated_watts(text: str) -> float | None:
    """Power [W] that a text states: "1/2W", "0.25 W", "100mW"."""
    found = _WATTS.search(text) if "W" in text.upper() else None
    if found is None:
        return None
    if found[1]:
        return float(found[1]) / float(found[2]) if found[2] != "0" else None
    return float(found[3].replace(",", ".")) * (1e-3 if found[4] else 1.0)


def _stated_volts(text: str, kind: str) -> float | None:
    """Rated voltage [V] behind a value, or a field that is a voltage alone."""
    for unit in ("F" if kind == "capacitor" else "ohm", "V"):
        try:
            reading = parse_engineering(text, unit)
        except NotAQuantity:
            continue
        if unit == "V" and re.search(r"\d\s*k?V", text, re.IGNORECASE):
            return reading.si
        if unit != "V" and reading.rating_v is not None:
            return reading.rating_v
    return None
