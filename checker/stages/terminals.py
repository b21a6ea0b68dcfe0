"""The three terminals that every transistor has: output, control and common, by the words of its kind."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Final

from checker.shape import frozen
from checker.words import Region, Terminal

OUTPUT, CONTROL, COMMON = range(3)
"""Columns of a device's nets and of its block."""

WORDS: Final[Mapping[str, tuple[Terminal, Terminal, Terminal]]] = {
    "bipolar": ("collector", "base", "emitter"),
    "jfet": ("drain", "gate", "source"),
    "mosfet": ("drain", "gate", "source"),
}
"""Family -> words for output, control and common terminal."""


@frozen
class Terms:
    """How a transistor's terminals and its figures at rest are called: words of output, control and common terminal;
    quantities `current` into the output, `bias` current into the control terminal, `across` output to common, `drive`
    control to common, `sense` the voltage whose sign says which way round it runs. `symbols` of `across`, `drive` and
    `current`. `on`: the region in which it no longer holds its current; `backwards`: that of a device the wrong way
    round."""

    output: Terminal
    control: Terminal
    common: Terminal
    current: str
    bias: str
    across: str
    drive: str
    sense: str
    symbols: tuple[str, str, str]
    on: Region
    backwards: Region


_FET: Final = Terms(
    output="drain",
    control="gate",
    common="source",
    current="id_a",
    bias="ig_a",
    across="vds_v",
    drive="vgs_v",
    sense="forward_v",
    symbols=("VDS", "VGS", "ID"),
    on="ohmic",
    backwards="body-conducting",
)
TERMS: Final[Mapping[str, Terms]] = {
    "bipolar": Terms(
        output="collector",
        control="base",
        common="emitter",
        current="ic_a",
        bias="ib_a",
        across="vce_v",
        drive="vbe_v",
        sense="vce_v",
        symbols=("VCE", "VBE", "IC"),
        on="saturated",
        backwards="reverse-active",
    ),
    "jfet": _FET,
    "mosfet": _FET,
}
"""By device family."""

NUMBER: Final[Mapping[Terminal, int]] = {
    word: number for words in (WORDS["bipolar"], WORDS["mosfet"]) for number, word in enumerate(words)
}
