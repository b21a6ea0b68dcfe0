"""Targets that name what the board does not have: a slip in the intent file, not a fault of the board."""

from __future__ import annotations

from collections.abc import Collection, Mapping

from checker.intent.hints import unknown
from checker.intent.types import TargetIntent
from checker.measure.registry import REGISTRY, Subject
from checker.stages.types import Recognition
from checker.trouble import InputTrouble

_WORDS: Mapping[Subject, str] = {"stage": "a stage", "group": "a group", "gain": "a path from port to port"}


def check_targets(targets: Collection[TargetIntent], recognition: Recognition, ports: Collection[str]) -> None:
    """Every target must name devices or ports that are there, and a quantity that its sort of owner has.

    Raises `InputTrouble` with the target's line. A group of known devices that was not recognised passes: whether it is
    one is the board's matter.
    """
    stages = [stage.id for stage in recognition.stages]
    for target in targets:
        where = f"{target.origin.file}", target.origin.line
        if target.stage:
            _known((target.stage,), stages, "stage of a target", *where)
        elif target.group:
            _known(tuple(target.group.split("+")), stages, "device in a target's group", *where)
        else:
            _known((target.source, target.to), ports, "port of a target", *where)
        owner: Subject = "stage" if target.stage else "group" if target.group else "gain"
        if (target.quantity, owner) not in REGISTRY:
            there = sorted(name for name, subject in REGISTRY if subject == owner)
            message = unknown(target.quantity, there, f"quantity of {_WORDS[owner]}")
            raise InputTrouble(message, file=where[0], line=where[1])


def _known(names: tuple[str, ...], there: Collection[str], what: str, file: str, line: int) -> None:
    for name in names:
        if name not in there:
            raise InputTrouble(unknown(name, there, what), file=file, line=line)
