"""Card data: one JSON file a family, one part a line, read only when asked for.

JSON and not TOML: reading the index and one family is then a few milliseconds, while the TOML reader alone
takes some twenty to import. A family file is `{"defaults": {...}, "parts": [...]}`; a row has what the
defaults lack, or `like` names a row above it (of the same file) whose figures it shares but for its own.
"""

from __future__ import annotations

import json
from collections.abc import Mapping
from functools import cache
from importlib import import_module
from pathlib import Path
from typing import Any, Final

from checker.cards.types import Card, Ratings

DATA: Final = Path(__file__).with_name("data")
INDEX: Final = "index.json"

_MODELS: Final = {
    **dict.fromkeys(("npn", "pnp"), "bipolar:bipolar_model"),
    **dict.fromkeys(("diode", "zener", "led"), "diode:diode_model"),
    **dict.fromkeys(("njf", "pjf"), "fet:jfet_model"),
    **dict.fromkeys(("nmos", "pmos"), "fet:mosfet_model"),
}
"""Kind of part to "module:function" of this package that makes its model from a row; imported on use."""
_RATINGS: Final = ("v_max_v", "v_control_max_v", "i_max_a", "p_max_w", "tj_max_c", "rth_ja_kpw")
_RESISTORS: Final = ("r1", "r2", "be1", "be2")
_OWN: Final = ("aliases", "packages", "note", "source")
"""What a row does not take over from the row it is like."""


def squeeze(name: str) -> str:
    """A part name as the index holds it: upper case, letters and digits only."""
    if name.isascii() and name.isalnum():
        return name.upper()
    return "".join(letter for letter in name.upper() if letter.isascii() and letter.isalnum())


@cache
def index() -> Mapping[str, str]:
    """Squeezed part name or alias -> family."""
    names: dict[str, str] = json.loads((DATA / INDEX).read_text("utf-8"))
    return names


def families() -> tuple[str, ...]:
    """Every family that has a file, sorted."""
    return tuple(sorted(path.stem for path in DATA.glob("*.json") if path.name != INDEX))


@cache
def rows(family: str) -> Mapping[str, Mapping[str, Any]]:
    """Squeezed name and alias -> whole row of a family, defaults and likeness resolved."""
    content = json.loads((DATA / f"{family}.json").read_text("utf-8"))
    found: dict[str, Mapping[str, Any]] = {}
    for raw in content["parts"]:
        base = content["defaults"]
        if "like" in raw:
            base = {key: value for key, value in found[squeeze(raw["like"])].items() if key not in _OWN}
            base = {**base, "source": content["defaults"]["source"]}
        row = {**base, **raw}
        for name in (row["name"], *row.get("aliases", ())):
            found[squeeze(name)] = row
    return found


def card_from(row: Mapping[str, Any], group: str = "") -> Card:
    """The card of a row, of one gain group where `group` names it."""
    name = row["name"]
    if group:
        row = {**row, "gain": [*row["groups"][group], *row["gain"][3:]]}
        name = _grouped(name, group)
    gain = row.get("gain")
    return Card(
        name=name,
        kind=row["kind"],
        model=_model(row),
        source=row["source"],
        ratings=Ratings(**{key: row.get(key) for key in _RATINGS}),
        gain_min=float(gain[0]) if gain else None,
        gain_max=float(gain[2]) if gain and gain[2] is not None else None,
        packages={package: _pads(pins) for package, pins in row.get("packages", {}).items()},
        aliases=tuple(row.get("aliases", ())),
        assumed=bool(row.get("assumed", False)),
        note=row.get("note", ""),
        resistors={key: float(row[key]) for key in _RESISTORS if row.get(key)},
        driver=_inner(row, "driver", name),
        free_wheel=bool(row.get("free_wheel", False)),
        upper=_inner(row, "upper", name),
        spread=_spread(row),
    )


def _spread(row: Mapping[str, Any]) -> tuple[Mapping[str, float], Mapping[str, float]] | None:
    """Ends of a field-effect transistor's range as factors on its model; None for another part."""
    if _MODELS[row["kind"]].startswith("fet"):
        from checker.cards.fet import spread

        return spread(row)
    return None


def _model(row: Mapping[str, Any]) -> Mapping[str, float]:
    module, name = _MODELS[row["kind"]].split(":")
    made: Mapping[str, float] = getattr(import_module(f"checker.cards.{module}"), name)(row)
    return made


def _inner(row: Mapping[str, Any], key: str, name: str) -> Card | None:
    """Another transistor of the same part, by its key: what its own figures leave open is as in the part; no
    ratings."""
    if key not in row:
        return None
    own = {name: value for name, value in row.items() if name not in (key, "packages", "aliases", *_RATINGS)}
    return card_from({**own, **row[key], "name": f"{name} ({key})"})


def _grouped(name: str, group: str) -> str:
    """BC547 + B, BC817 + 25 -> BC817-25; the W of the small outline stays last: BC847W + B -> BC847BW."""
    base, small = (name[:-1], "W") if name.endswith("W") else (name, "")
    return base + (f"-{group}" if group.isdigit() else group) + small


def _pads(pins: str) -> dict[str, str]:
    """Pad number -> terminal, from "EBC" or, with units, "E1 B1 C2 E2 B2 C1"; "-" is an unconnected pad."""
    terminals = pins.split() if " " in pins else list(pins)
    return {str(pad): terminal for pad, terminal in enumerate(terminals, start=1) if terminal != "-"}
