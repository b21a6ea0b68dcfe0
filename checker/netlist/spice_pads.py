"""Files that list pads in number order under the name of SPICE text.

Some exporters write every part as `REF node node ... value`, integrated circuits and connectors among them,
with the nodes in the order of the symbol's pads. Such a file shows itself by elements of letters that SPICE
text does not have. Which node of its transistors and diodes is which terminal cannot be told, so it is not
guessed.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import replace

from checker.netlist.types import Model, Part

_ORDERED = frozenset("QJMD")
_LETTERS = frozenset("ABCDEFGHIJKLMNOQRSTVWXYZ")
"""Letters with a meaning in some dialect of SPICE-style text; U and P, say, are not among them."""


def without_guesses(parts: Sequence[Part], models: Mapping[str, Model]) -> list[Part]:
    """`parts`, in which devices without a model in the file are marked as not understood where the file gives
    itself away. A device with a model was written with its nodes in the model's order."""
    sign = next((part.ref for part in parts if part.letter not in _LETTERS), "")
    if not sign:
        return list(parts)
    reason = (
        f"the file lists pads in number order (see {sign}), so which node is which terminal cannot be told; "
        "give a .model or export the terminals"
    )
    return [
        replace(part, unknown=part.unknown or reason)
        if part.letter in _ORDERED and part.model.lower() not in models
        else part
        for part in parts
    ]
