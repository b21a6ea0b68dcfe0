"""The shared vocabulary: literal sets that every layer and the report use, one meaning each.

All are fixed by the report schema; a new word is a new schema entry, never a respelling.
"""

from __future__ import annotations

from typing import Literal

Format = Literal["spice", "kicad"]
"""Netlist dialects that the readers understand."""

OriginKind = Literal["netlist", "field", "footprint", "intent", "card", "assumed"]
"""Where a datum came from; `assumed` is always listed in the report."""

Configuration = Literal[
    "common-emitter",
    "common-base",
    "common-collector",
    "common-source",
    "common-gate",
    "common-drain",
    "phase-splitter",
    "switch",
    "current-source",
    "diode-connected",
    "vbe-multiplier",
    "regulator",
    "clamp",
    "variable-resistor",
    "oscillator",
    "mixer",
    "noise-source",
    "unclassified",
]
"""Label of one device."""

GroupLabel = Literal[
    "cascode",
    "darlington",
    "complementary-feedback-pair",
    "differential-pair",
    "current-mirror",
    "push-pull",
    "direct-coupled-pair",
    "series-feedback-pair",
    "latch",
    "multivibrator",
    "h-bridge",
]
"""Label of several devices that act as one."""

Role = Literal["signal", "bias", "switch"]
Terminal = Literal["base", "emitter", "collector", "gate", "source", "drain"]
Region = Literal["active", "saturated", "cut-off", "reverse-active", "ohmic", "body-conducting", "gate-conducting"]
"""Bipolars: the first four. Field-effect transistors: active, ohmic, cut-off and the last two."""
Outcome = Literal["violates", "may-violate"]
Severity = Literal["must-fix", "review", "note"]
Relation = Literal["at most", "at least", "within", "equals"]
Gate = Literal["must-fix", "review", "note", "never"]
PortRole = Literal["input", "output"]
Search = Literal["exhaustive", "partial"]

SEVERITIES: tuple[Severity, ...] = ("must-fix", "review", "note")
"""Worst first."""
