"""Two reports side by side: what was edited, what it moved, and which findings came and went."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import field
from typing import Literal

from checker.record.base import Record
from checker.record.figures import Complex
from checker.record.finding import Finding
from checker.shape import frozen

COMPARISON: Literal["stageproof-comparison/1"] = "stageproof-comparison/1"

Figure = Complex | float | str | bool | None
"""A figure, or a word such as a region."""


@frozen
class Side(Record):
    """One of the two reports."""

    name: str
    """What the call named: a path, or REVISION:PATH."""
    path: str
    """The netlist."""
    sha256: str
    """Of the netlist's bytes."""
    checked: int
    """Stages checked."""
    of: int
    """Stages there are."""
    incomplete: bool = False
    """Something internal failed while it was made."""


@frozen
class Edit(Record):
    """One way in which a part differs."""

    what: Literal["value", "model", "data", "wiring", "added", "removed"]
    """data: ratings, tolerance or model parameters; wiring: a pin on another net."""
    part: str
    """Its reference in the new board; of a removed part in the old one."""
    kind: str
    """resistor, capacitor, bipolar and so on."""
    before: float | str | None = None
    """In `unit`, or a name."""
    after: float | str | None = None
    """In `unit`, or a name."""
    unit: str = ""
    """Unit of both; "" where they are names."""
    stages: tuple[str, ...] = ()
    """Ids of the stages that the part belongs to, in the new board; of a removed part in the old one."""


@frozen
class Condition(Record):
    """Something that is no part and moves figures or judgements all the same: band, temperature, limit, rail."""

    what: str
    """What it is."""
    before: str
    """As text."""
    after: str
    """As text."""


@frozen
class Moved(Record):
    """One figure that differs beyond the tolerance."""

    quantity: str
    """Key of the figure in the report."""
    before: Figure
    """In the old report; null where it had none."""
    after: Figure
    """In the new report; null where it has none."""


@frozen
class Changed(Record):
    """A stage, group, port or path whose figures differ."""

    kind: Literal["stage", "group", "port", "gain"]
    """What it is."""
    id: str
    """In the new board; of a removed one in the old board."""
    was: str | None
    """In the old board; null where it is new."""
    how: Literal["edited", "follows", "conditions", "added", "removed", "unexplained"]
    """edited: by a part of its own; follows: an edit elsewhere; conditions: of band, temperature and the like."""
    because: tuple[str, ...] = ()
    """The edited parts, or the conditions, that it is traced to."""
    figures: tuple[Moved, ...] = ()
    """In the order of the report."""


@frozen
class Comparison(Record):
    """Everything that differs between two reports."""

    old: Side
    """The earlier one."""
    new: Side
    """The later one."""
    schema: Literal["stageproof-comparison/1"] = COMPARISON
    """Names this contract."""
    tolerance: float = 0.01
    """Figures that differ by less than this fraction count as equal."""
    renumbered: Mapping[str, str] = field(default_factory=dict)
    """Old reference to new one, of parts matched by structure."""
    conditions: tuple[Condition, ...] = ()
    """What differs that is no part."""
    edits: tuple[Edit, ...] = ()
    """By part."""
    changed: tuple[Changed, ...] = ()
    """Stages, then groups, ports and paths."""
    new_findings: tuple[Finding, ...] = ()
    """Not in the old report, or there less severe."""
    cured: tuple[Finding, ...] = ()
    """In the old report alone."""
    unjudged: tuple[Finding, ...] = ()
    """In the old report alone, but only because the new one could not judge them."""
    unchanged: tuple[Finding, ...] = ()
    """In both, as the new report has them."""
