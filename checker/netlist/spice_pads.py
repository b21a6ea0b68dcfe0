"""Files that list pads in number order under the name of SPICE text.

Some exporters write every part as `REF node node ... value`, integrated circuits and connectors among them,
with the nodes in the order of the symbol's pads. Such a file shows itself by elements of letters that SPICE
text does not have. Which node of its transistors and diodes is which terminal cannot be told, so it is not
guessed; the values of its resistors, capacitors and coils are a schematic's (`1M5`, `k51`, `1k 1%`) and are left to
those who read schematics.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import replace

from checker.netlist.spice_deck import Definition
from checker.netlist.types import Model, Part
from checker.pattern import lazy

REFERENCE = lazy(r"([A-Za-z]+)\d+[A-Za-z]?")
"""A reference as schematics have them; its letters say what the part is."""
_LEAST = 3
"""Words that are too few to be a part with two pins and a value."""
_ORDERED = frozenset("QJMD")
_LETTERS = frozenset("ABCDEFGHIJKLMNOQRSTVWXYZ")
"""Letters with a meaning in some dialect of SPICE-style text; U and P, say, are not among them."""


def sign_of_pads(board: Definition) -> str:
    """The reference that gives such a file away; empty where the board itself (not a subcircuit) holds none."""
    for each in board.elements:
        if each.letter not in _LETTERS and len(each.words.positional) > _LEAST and REFERENCE.fullmatch(each.ref):
            return each.ref
    return ""


def without_guesses(parts: Sequence[Part], models: Mapping[str, Model], sign: str) -> list[Part]:
    """`parts`, in which devices without a model in the file are marked as not understood, for the `sign` that the file
    gave. A device with a model was written with its nodes in the model's order."""
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
