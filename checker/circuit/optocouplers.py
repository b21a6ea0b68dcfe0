"""Optocouplers of one channel: an infrared diode, and a transistor whose base takes what the light releases.

The photocurrent flows from collector to base, for each ampere in the diode the transfer ratio over the current gain, so
that IC = CTR IF until the transistor saturates. Transfer ratios are typical ones of data sheets at some milliamperes,
from memory; they fall off at small currents and with age, which is not modelled. Insulation is no matter of this
program.
"""

from __future__ import annotations

import re
from typing import Final

from checker.circuit.draft import Draft, DraftDevice, DraftFourPole
from checker.circuit.models import Parameters, bipolar_parameters, diode_parameters
from checker.circuit.others import add_unmodelled
from checker.circuit.parts import symbol_name
from checker.circuit.types import PartFact
from checker.netlist.types import Part

TYPES: Final[tuple[tuple[str, float, float, float], ...]] = (
    (r"(?:PC|LTV-?|EL|HCPL-?|KB)817", 0.5, 1.0, 6.0),
    (r"PC123|TLP(?:785|621)|TLP521-1\b", 0.5, 1.0, 6.0),
    (r"4N2[5-8]", 0.2, 0.5, 2.0),
    (r"4N3[5-8]", 1.0, 1.5, 3.0),
    (r"CNY17F?-?1|SFH61[07]A?-1", 0.4, 0.6, 0.8),
    (r"CNY17F?-?2|SFH61[07]A?-2", 0.63, 0.9, 1.25),
    (r"CNY17F?-?3|SFH61[07]A?-3", 1.0, 1.4, 2.0),
    (r"CNY17F?-?4|SFH61[07]A?-4", 1.6, 2.3, 3.2),
    (r"TLP(?:181|185|281|291)", 0.5, 1.0, 6.0),
)
"""Type; least, typical and most of the current transfer ratio."""
DIODE: Final = {"is": 1.4e-14, "n": 1.7, "bv": 6.0}
"""An infrared diode of 1.2 V at 10 mA (common practice, no source)."""
GAIN: Final = 300.0
_USUAL: Final = {4: {"A": "1", "K": "2", "E": "3", "C": "4"}, 6: {"A": "1", "K": "2", "E": "4", "C": "5", "B": "6"}}
"""Pads by their number of pins, where the symbol names none (common practice of these types)."""


def transfer_ratio(part: Part) -> tuple[float, float, float] | None:
    """Least, typical and most CTR by the part's value or symbol; None for a type that is not known."""
    for name in (part.value, symbol_name(part)):
        for pattern, *ratios in TYPES:
            if re.match(pattern, name, re.IGNORECASE):
                return ratios[0], ratios[1], ratios[2]
    return None


def add_optocoupler(draft: Draft, part: Part) -> None:
    """Diode, sense and transistor; a type or pins that are not known leave the part unmodelled."""
    ratio, nets = transfer_ratio(part), _nets(draft, part)
    if ratio is None or nets is None:
        add_unmodelled(draft, part)
        return
    low, typical, high = ratio
    inner, base, sense = f"{part.ref}.a", nets.get("B", f"{part.ref}.b"), f"{part.ref}.sense"
    if not draft.tie(sense, nets["A"], inner, 0.0):
        add_unmodelled(draft, part)
        return
    _place(draft, "diode", f"{part.ref}.led", (inner, nets["K"]), diode_parameters(DIODE))
    transistor = bipolar_parameters({"bf": GAIN, "vaf": 100.0, "is": 1e-14})
    _place(draft, "bipolar", part.ref, (nets["C"], base, nets["E"], draft.ground), transistor)
    share = (typical / GAIN, 0.0, 0.0, 0.0)
    ends = (nets["C"], base, draft.ground, draft.ground)
    draft.place_four_pole(f"{part.ref}.light", DraftFourPole(kind="F", nets=ends, sense=sense, value=share))
    draft.facts[part.ref] = PartFact(
        ref=part.ref,
        kind="bipolar",
        terminals={name: nets[name] for name in ("C", "E", *(("B",) if "B" in nets else ()))},
        origin=part.origin,
        model_source="optocoupler",
        footprint=part.footprint,
    )
    words = f"optocoupler with a transfer ratio of {typical:g} ({low:g} to {high:g}, from memory), at every current"
    draft.notes.add("models", words, part.ref)


def _place(draft: Draft, kind: str, name: str, nets: tuple[str, ...], parameters: Parameters) -> None:
    device = DraftDevice(
        nets=nets, polarity=1.0, params=parameters.values, tnom_k=parameters.tnom_k, rth_kpw=float("nan")
    )
    draft.place(kind, name, device)


def _nets(draft: Draft, part: Part) -> dict[str, str] | None:
    """Terminal -> net, by pin names, else by the pads of the usual case."""
    words = {"ANODE": "A", "CATHODE": "K", "COLLECTOR": "C", "EMITTER": "E", "BASE": "B"}
    named = {words.get(pin.function.upper(), pin.function.upper()): pin.net for pin in part.pins}
    if {"A", "K", "C", "E"} <= named.keys():
        return {name: draft.net(net) for name, net in named.items() if name in "AKCEB"}
    usual = _USUAL.get(4 if len(part.pins) == 4 else 6)
    by_number = {pin.number: pin.net for pin in part.pins}
    if usual is None or len(part.pins) not in (4, 5, 6) or any(usual[name] not in by_number for name in "AKCE"):
        return None
    return {name: draft.net(by_number[pad]) for name, pad in usual.items() if pad in by_number}
