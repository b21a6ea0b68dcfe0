"""Coaxial connector families and their nominal impedance.

Source: the titles of the sectional specifications in IEC 61169, from memory; part numbers to be checked
against the standard. A text that states 50 or 75 outranks the family.
"""

from __future__ import annotations

import re
from typing import Final

from checker.circuit.parts import symbol_name
from checker.netlist.types import Part
from checker.pattern import lazy
from checker.shape import frozen
from checker.words import PortRole


@frozen
class Family:
    """One connector family: nominal impedance [ohm], None where it has none; `also` a second one in use."""

    name: str
    pattern: str
    ohm: float | None
    source: str
    also: float | None = None


FAMILIES: Final = (
    Family(name="HD-BNC", pattern=r"HD[-_ ]?BNC", ohm=75.0, source="IEC 61169-70"),
    Family(name="SMP3", pattern=r"SMP[-_ ]?3", ohm=50.0, source="IEC 61169-69"),
    Family(name="4.3-10", pattern=r"4[.,_]?3[-/_]10", ohm=50.0, source="IEC 61169-54"),
    Family(name="BNC", pattern=r"BNC", ohm=50.0, also=75.0, source="IEC 61169-8"),
    Family(name="TNC", pattern=r"TNC", ohm=50.0, source="IEC 61169-17"),
    Family(name="SMA", pattern=r"SMA", ohm=50.0, source="IEC 61169-15"),
    Family(name="SMB", pattern=r"SMB", ohm=50.0, also=75.0, source="IEC 61169-10"),
    Family(name="SMC", pattern=r"SMC", ohm=50.0, source="IEC 61169-9"),
    Family(name="MMCX", pattern=r"MMCX", ohm=50.0, source="IEC 61169-52"),
    Family(name="MCX", pattern=r"MCX", ohm=50.0, also=75.0, source="IEC 61169-36"),
    Family(name="N", pattern=r"N[-_]?TYPE|TYPE[-_]?N|CONN_N", ohm=50.0, also=75.0, source="IEC 61169-16"),
    Family(
        name="F",
        pattern=r"F[-_]?TYPE|TYPE[-_]?F|F[-_]?CONN(?:ECTOR)?|CONN_F",
        ohm=75.0,
        source="IEC 61169-24",
    ),
    Family(
        name="TV (9,52)",
        pattern=r"BELLING[-_ ]?LEE|IEC[-_ ]?61169[-_]2|PAL|TV",
        ohm=75.0,
        source="IEC 61169-2",
    ),
    Family(name="U.FL", pattern=r"U\.?FL|IPEX", ohm=50.0, source="common practice, no source"),
    Family(name="cinch", pattern=r"RCA|CINCH", ohm=None, source="no nominal impedance"),
)
_COMPILED: Final = tuple(
    (family, lazy(rf"(?<![A-Z0-9.])(?:{family.pattern})(?![A-Z])", re.IGNORECASE)) for family in FAMILIES
)
_STATED: Final = lazy(r"(?<![\d.])(50|75|93|100)(?:[\s_-]*(?:ohms?|Ω|R))?(?![\d.%])", re.IGNORECASE)
_IN: Final = lazy(
    r"(?:RF|AF|AUDIO|SIG(?:NAL)?|V)?[-_]?(?:IN(?:PUT)?\d?|ANT(?:ENNA)?\d?|RX(?:IN)?|SRC|SOURCE)",
    re.IGNORECASE,
)
_OUT: Final = lazy(
    r"(?:RF|AF|AUDIO|SIG(?:NAL)?|LINE|V)?[-_]?(?:OUT(?:PUT)?\d?|TX(?:OUT)?|SPK|SPEAKER|PHONES?)|IF(?:OUT)?|LOAD",
    re.IGNORECASE,
)
_SPLIT: Final = lazy(r"[\s_/().,:-]+")


@frozen
class Nominal:
    """Impedance of a connector [ohm] (None: none) and the words that say where it is from."""

    ohm: float | None
    working: str


def nominal(part: Part) -> Nominal:
    """Nominal impedance of a coaxial connector by what value, model, symbol and footprint say."""
    texts = (part.value, part.model, symbol_name(part), part.footprint.rsplit(":", 1)[-1])
    family = next((family for family, pattern in _COMPILED for text in texts if pattern.search(text)), None)
    for text in texts[:3]:
        stated = _STATED.search(text)
        if stated is not None:
            return Nominal(ohm=float(stated[1]), working=f"{stated[1]} ohm as its text says")
    if family is None or family.ohm is None:
        return Nominal(ohm=None, working="no nominal impedance known")
    working = f"{family.ohm:g} ohm, nominal of a {family.name} connector ({family.source})"
    if family.also is not None:
        working += f"; the family also exists in {family.also:g} ohm"
    return Nominal(ohm=family.ohm, working=working)


def role_by_name(*texts: str) -> PortRole | None:
    """Direction that net, value or reference names tell; None where they tell none or both."""
    roles: set[PortRole] = set()
    for text in texts:
        last = "" if text.startswith(("Net-(", "Net-_")) else text.rsplit("/", 1)[-1]
        for word in (last, *_SPLIT.split(last)):
            if _IN.fullmatch(word):
                roles.add("input")
            elif _OUT.fullmatch(word):
                roles.add("output")
    return roles.pop() if len(roles) == 1 else None


def role_of_net(net: str) -> PortRole | None:
    """Direction that a net's own name tells: IN, RF_OUT; not a name that merely contains such a word, and not
    the TX and RX of a data bus."""
    last = net.rsplit("/", 1)[-1]
    if re.fullmatch(r"[TR]X|IF", last, re.IGNORECASE):
        return None
    return "input" if _IN.fullmatch(last) else "output" if _OUT.fullmatch(last) else None


def signal_net(part: Part, known: frozenset[str]) -> str | None:
    """Net of the inner conductor: the one net of the connector that is not in `known` (ground and rails)."""
    nets = list(dict.fromkeys(pin.net for pin in part.pins if pin.net not in known))
    if len(nets) == 1:
        return nets[0]
    inner = [pin.net for pin in part.pins if pin.function.upper() in ("IN", "CENTER", "CENTRE", "SIG", "RF", "INNER")]
    return inner[0] if len(set(inner)) == 1 else None
