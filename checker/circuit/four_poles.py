"""Controlled sources and transmission lines, put into the draft."""

from __future__ import annotations

import math

from checker.circuit.draft import Draft, DraftFourPole
from checker.circuit.entry import bare_fact
from checker.netlist.types import Part

QUARTER = 0.25
"""Wavelengths of a line whose F is given and whose NL is not (rule of the SPICE 2G6 guide, from memory)."""


def add_controlled(draft: Draft, part: Part) -> None:
    """A linear source controlled by a voltage (E, G) or by the current of a voltage source (F, H)."""
    draft.facts[part.ref] = bare_fact(draft, part, "source")
    outputs = [draft.net(pin.net) for pin in part.pins]
    sense = part.controls[0] if part.controls else ""
    if sense and sense not in draft.voltages:
        supply = f"a voltage source {sense} that stands in the circuit, for its current"
        draft.loose(part.ref, outputs, f"what controls {part.ref}", supply)
        return
    if part.number is None or len(outputs) != (2 if sense else 4):
        draft.loose(part.ref, outputs[:2], f"a solved model of {part.ref}", "a linear controlled source")
        return
    a, b, c, d = (*outputs, draft.ground, draft.ground)[:4]
    if a == b:
        draft.notes.add("parts", "both ends on one net; left out", part.ref)
        return
    letter = part.letter.upper()
    gain = part.number * (part.params.get("m", 1.0) if letter in "FG" else 1.0)
    draft.place_four_pole(
        part.ref,
        DraftFourPole(kind=letter, nets=(a, b, c, d), sense=sense, value=(gain, 0.0, 0.0, 0.0)),
    )


def add_line(draft: Draft, part: Part) -> None:
    """A line of four nodes, lossless (T) or with losses spread over it (O); its ends are coaxial."""
    draft.facts[part.ref] = bare_fact(draft, part, "unmodelled")
    nets = [draft.net(pin.net) for pin in part.pins]
    whole = _lossless(part) if part.letter.upper() == "T" else _spread(draft, part)
    z0 = part.params.get("z0", part.params.get("zo")) if whole is None else math.sqrt(whole[1] / whole[3])
    for net in nets:
        draft.lines[net] = z0
    if whole is None or len(nets) != 4:
        wanted = "Z0 and TD (or F)" if part.letter.upper() == "T" else "a .model LTRA with L, C and LEN"
        draft.loose(part.ref, nets, f"a solved model of {part.ref}", wanted)
        return
    ports = (nets[0], nets[1], nets[2], nets[3])
    draft.place_four_pole(part.ref, DraftFourPole(kind="line", nets=ports, sense="", value=whole))


def _lossless(part: Part) -> tuple[float, float, float, float] | None:
    """(0, Z0 TD, 0, TD/Z0); the delay is TD, else NL/F."""
    z0 = part.params.get("z0", part.params.get("zo", 0.0))
    delay_s, f_hz = part.params.get("td", 0.0), part.params.get("f", 0.0)
    if delay_s <= 0.0 and f_hz > 0.0:
        delay_s = part.params.get("nl", QUARTER) / f_hz
    return (0.0, z0 * delay_s, 0.0, delay_s / z0) if z0 > 0.0 and delay_s > 0.0 else None


def _spread(draft: Draft, part: Part) -> tuple[float, float, float, float] | None:
    """R, L, G, C of a unit of length times the length."""
    model = draft.netlist.models.get(part.model.lower())
    given = model.params if model is not None and model.kind == "ltra" else {}
    length = given.get("len", 0.0)
    whole = {key: given.get(key, 0.0) * length for key in "rlgc"}
    sound = min(whole.values()) >= 0.0 and whole["l"] > 0.0 and whole["c"] > 0.0
    return (whole["r"], whole["l"], whole["g"], whole["c"]) if sound else None
