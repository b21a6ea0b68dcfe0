"""What recognition finds: stages, links, groups, each with its evidence."""

from __future__ import annotations

from typing import Literal

from checker.shape import frozen
from checker.words import Configuration, GroupLabel, Role, Terminal


@frozen
class Link:
    """What carries the signal across a boundary: a part (capacitor, winding) or a device terminal.

    `part`: reference; `terminal`: of the device where the link is direct, else "". `stage_node` is the node on the
    stage's side, `far_node` the other (the same for a direct link). `other`: id of the stage or port at the far end.
    """

    kind: Literal["capacitor", "winding", "direct", "port"]
    part: str
    stage_node: int
    far_node: int
    other: str
    terminal: Terminal | Literal[""] = ""


@frozen
class Stage:
    """One device. `entry`, `exit` are device terminals; `input_ref`, `output_ref` nodes; None where it has none.

    `port_in`, `port_out`: names of the ports its path joins. `confidence` 0..1.
    """

    id: str
    device: str
    index: int
    configuration: Configuration
    role: Role
    confidence: float
    reason: str = ""
    entry: Terminal | None = None
    exit: Terminal | None = None
    input_link: Link | None = None
    output_link: Link | None = None
    port_in: str = ""
    port_out: str = ""
    groups: tuple[str, ...] = ()
    evidence: tuple[str, ...] = ()


@frozen
class Group:
    """Several devices that act as one. Id: device ids joined by "+", sorted."""

    id: str
    configuration: GroupLabel
    devices: tuple[str, ...]
    entry: tuple[str, Terminal] | None = None
    exit: tuple[str, Terminal] | None = None
    input_link: Link | None = None
    output_link: Link | None = None
    port_in: str = ""
    port_out: str = ""
    evidence: tuple[str, ...] = ()


@frozen
class Recognition:
    """All stages sorted by id, all groups, and the signal paths (input port, output port) that were followed."""

    stages: tuple[Stage, ...]
    groups: tuple[Group, ...]
    paths: tuple[tuple[str, str], ...]
    assumptions: tuple[str, ...] = ()

    def stage(self, ident: str) -> Stage:
        """The stage of that id. Raises KeyError."""
        for stage in self.stages:
            if stage.id == ident:
                return stage
        raise KeyError(ident)
