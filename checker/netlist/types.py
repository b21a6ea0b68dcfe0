"""What both readers return. No electrical meaning here: letters, texts, pins, nets and where they stand."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import field

from checker.quantity.value import Origin
from checker.shape import frozen
from checker.words import Format


@frozen
class Pin:
    """One pin of a part. `number` as exported ("1", "A1"; SPICE text: position from 1); `function` and `kind`
    (electrical type) only where the export carries them; `net` is a key of `Netlist.nets`."""

    number: str
    net: str
    function: str = ""
    kind: str = ""


@frozen
class Source:
    """What an independent V or I element, or a value field of that form, says.

    `dc` [V or A], None where none is written (a pure signal source; its DC is then 0, or the waveform's rest
    value in `rest`); `ac` magnitude [V or A] and `ac_deg`, None where no AC part; `waveform` the word written
    (`sin`, `pulse`, ...) with its numbers in `shape`.
    """

    dc: float | None = None
    ac: float | None = None
    ac_deg: float = 0.0
    waveform: str = ""
    shape: tuple[float, ...] = ()
    rest: float | None = None


@frozen
class Part:
    """One element of the netlist.

    `ref`: the reference as an engineer says it (`Q21`, in a subcircuit `X1.Q3`; a tool's `Q_Q21` is `Q21`).
    `letter`: SPICE element letter, upper case; of a KiCad part the leading letters of its reference.
    `value`: text as written. `number`: SI value where SPICE text gave one (its `M` is milli), else None.
    `model`: model or subcircuit name as written. `params`: evaluated instance parameters, keys lower case.
    `fields`: KiCad fields, and `Sim.*`. `symbol`: "library:name". `controls`: names of sources an F, H or K
    element refers to. `unknown`: a sentence where the line was not understood.
    """

    ref: str
    letter: str
    value: str
    pins: tuple[Pin, ...]
    origin: Origin
    number: float | None = None
    model: str = ""
    params: Mapping[str, float] = field(default_factory=dict)
    fields: Mapping[str, str] = field(default_factory=dict)
    footprint: str = ""
    symbol: str = ""
    description: str = ""
    source: Source | None = None
    controls: tuple[str, ...] = ()
    do_not_fit: bool = False
    unknown: str = ""


@frozen
class Net:
    """`key` is unique (KiCad: the name, made unique by code where repeated or empty); `name` as exported."""

    key: str
    name: str


@frozen
class Model:
    """A `.model` card: `kind` lower case (`npn`, `pnp`, `d`, `njf`, ...); numeric parameters, keys lower case."""

    name: str
    kind: str
    params: Mapping[str, float]
    origin: Origin


@frozen
class Remark:
    """Something the reader saw and could not use, or passed over on purpose; `parts` it may touch.

    `lost`: the line is not understood, and what it says is missing from the netlist; `nets`: keys of the nets that it
    bears on, as far as can be told. `model`: lower-case key of the model that it is about; `everywhere`: it bears on
    the whole board. Both serve the reader to find `nets`.
    """

    text: str
    origin: Origin
    parts: tuple[str, ...] = ()
    lost: bool = False
    nets: tuple[str, ...] = ()
    model: str = ""
    everywhere: bool = False


@frozen
class Netlist:
    """A whole board as read. `models` is keyed by lower-case name. `ground`: the keys that the format itself
    fixes as the reference (SPICE text: net `0`); KiCad exports fix none."""

    path: str
    format: Format
    sha256: str
    title: str
    parts: tuple[Part, ...]
    nets: Mapping[str, Net]
    models: Mapping[str, Model] = field(default_factory=dict)
    temperature_c: float | None = None
    ground: tuple[str, ...] = ()
    remarks: tuple[Remark, ...] = ()
