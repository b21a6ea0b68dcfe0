"""What an intent file may hold: one declarative table, which drives checking, suggestions and messages.

`kind` of a key says how `checker.intent.values` reads it; `unit` is the SI unit of the number that comes out.
"""

from __future__ import annotations

from collections.abc import Mapping
from typing import Final, Literal

from checker.shape import frozen

Kind = Literal["text", "texts", "amount", "fraction", "flag", "level", "role", "day", "band", "map", "bound"]


@frozen
class Key:
    """One key of a section. `unit` is that of a bare number and of the value read."""

    kind: Kind
    unit: str = ""
    required: bool = False


RATING_KEYS: Final[Mapping[str, Key]] = {
    "v_max_v": Key(kind="amount", unit="V"),
    "v_control_max_v": Key(kind="amount", unit="V"),
    "i_max_a": Key(kind="amount", unit="A"),
    "p_max_w": Key(kind="amount", unit="W"),
    "tj_max_c": Key(kind="amount", unit="degC"),
    "rth_ja_kpw": Key(kind="amount", unit="K/W"),
}

SECTIONS: Final[Mapping[str, Mapping[str, Key]]] = {
    "band": {
        "low": Key(kind="amount", unit="Hz", required=True),
        "high": Key(kind="amount", unit="Hz", required=True),
    },
    "ambient": {
        "min": Key(kind="amount", unit="degC"),
        "nominal": Key(kind="amount", unit="degC"),
        "max": Key(kind="amount", unit="degC"),
    },
    "port": {
        "name": Key(kind="text", required=True),
        "role": Key(kind="role", required=True),
        "net": Key(kind="text"),
        "part": Key(kind="text"),
        "pin": Key(kind="text"),
        "impedance": Key(kind="amount", unit="ohm"),
        "attach": Key(kind="flag"),
        "level": Key(kind="level", unit="V"),
        "band": Key(kind="band"),
    },
    "state": {
        "name": Key(kind="text", required=True),
        "pins": Key(kind="map"),
        "absent": Key(kind="texts"),
    },
    "target": {
        "quantity": Key(kind="text", required=True),
        "stage": Key(kind="text"),
        "group": Key(kind="text"),
        "from": Key(kind="text"),
        "to": Key(kind="text"),
        "min": Key(kind="bound"),
        "max": Key(kind="bound"),
    },
    "part": {
        "ref": Key(kind="text", required=True),
        "card": Key(kind="text"),
        "tolerance": Key(kind="fraction"),
        "ratings": Key(kind="map"),
        "resistance": Key(kind="amount", unit="ohm"),
        "inductance": Key(kind="amount", unit="H"),
        "capacitance": Key(kind="amount", unit="F"),
        "series_resistance": Key(kind="amount", unit="ohm"),
        "series_inductance": Key(kind="amount", unit="H"),
        "self_resonance": Key(kind="amount", unit="Hz"),
        "quality": Key(kind="amount", unit=""),
        "quality_at": Key(kind="amount", unit="Hz"),
        **RATING_KEYS,
    },
    "accepted": {
        "reason": Key(kind="text", required=True),
        "by": Key(kind="text", required=True),
        "rule": Key(kind="text"),
        "subject": Key(kind="text"),
        "fingerprint": Key(kind="text"),
        "until": Key(kind="day"),
    },
}
"""Sections with a fixed set of keys. `rails` and `limits` hold names of the user's own and are not here."""

RAIL_KEYS: Final[Mapping[str, Key]] = {
    "volts": Key(kind="amount", unit="V", required=True),
    "tolerance": Key(kind="fraction"),
    "may_be_absent": Key(kind="flag"),
}
"""A rail written as a table."""

LISTS: Final = ("port", "state", "target", "part", "accepted")
"""Sections written with double brackets."""

TOP_LEVEL: Final = ("band", "ambient", "rails", "port", "state", "target", "limits", "part", "accepted")

QUANTITY_UNITS: Final[Mapping[str, str]] = {
    "db": "dB",
    "hz": "Hz",
    "ohm": "ohm",
    "a": "A",
    "v": "V",
    "vpp": "V",
    "w": "W",
    "s": "S",
    "f": "F",
    "h": "H",
    "c": "degC",
}
"""Last part of a quantity's key -> the unit in which its bounds may be written."""
