"""Which subjects a rule is shown, and which stages each is about: rules are found by configuration, not
tried.
"""

from __future__ import annotations

from collections.abc import Iterator
from typing import Any

from checker.rulekit import Applies, Board, TargetIntent
from checker.shape import frozen
from checker.stages.types import Stage


@frozen
class Subject:
    """`item` is what `judge` gets; `name` as the report calls it; `stages` those it concerns."""

    item: Any
    name: str
    stages: tuple[str, ...]


def subjects(board: Board, ports: tuple[str, ...], applies: Applies) -> Iterator[Subject]:
    """The subjects of a kind that the selection lets through, in the board's order."""
    if applies.kind == "stage":
        for stage in board.recognition.stages:
            if _fits(stage, applies):
                yield Subject(item=stage, name=stage.id, stages=(stage.id,))
    elif applies.kind == "port":
        for name in ports:
            found = board.stage_at_port(name)
            if found is None or _fits(found, applies):
                yield Subject(item=board.port(name), name=name, stages=() if found is None else (found.id,))
    elif applies.kind == "capacitor":
        for use in board.capacitors():
            if _fits(board.recognition.stage(use.stage), applies):
                yield Subject(item=use, name=use.part, stages=(use.stage,))
    else:
        for target in board.targets():
            name = target.stage or target.group or f"{target.source}->{target.to}"
            yield Subject(item=target, name=name, stages=_of_target(board, target))


def _fits(stage: Stage, applies: Applies) -> bool:
    by_label = not applies.configurations or stage.configuration in applies.configurations
    return by_label and (not applies.roles or stage.role in applies.roles)


def _of_target(board: Board, target: TargetIntent) -> tuple[str, ...]:
    """A target between ports concerns every stage on the way."""
    if target.stage:
        return (target.stage,)
    if target.group:
        return tuple(target.group.split("+"))
    way = (target.source, target.to)
    return tuple(stage.id for stage in board.recognition.stages if (stage.port_in, stage.port_out) == way)
