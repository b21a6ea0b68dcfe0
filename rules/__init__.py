"""The built-in rules: one theme a file, one class a rule, their circuits under `circuits/` as data."""

from __future__ import annotations

CATALOGUE: tuple[str, ...] = (
    "rules.bias:BetaDependentBias",
    "rules.bias:CutOffAtRest",
    "rules.bias:NoBasePath",
    "rules.bias:ReverseActive",
    "rules.bias:SaturatedAtRest",
    "rules.bias:SoftDivider",
    "rules.common_base:BaseNotGrounded",
    "rules.coupling:BypassLoss",
    "rules.coupling:CouplingLoss",
    "rules.matching:InputMismatch",
    "rules.pins:PackageMismatch",
    "rules.pins:PartPolarity",
    "rules.pins:PinOrder",
    "rules.slips:DecadeSlip",
    "rules.stress:Dissipation",
    "rules.stress:JunctionTemperature",
    "rules.targets:TargetMissed",
)
"""All of them as "module:Class"; read by `checker.judge.discover`."""
