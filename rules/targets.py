"""Theme targets: what the intent file asks of a stage, a group or a path."""

from __future__ import annotations

from collections.abc import Iterable, Mapping

from checker.rulekit import Applies, Board, Bound, CannotTell, Evidence, Relation, Rule, TargetIntent, levers, require


class TargetMissed(Rule[TargetIntent]):
    """The board does not do what the intent file asks: gain, impedance, corner, swing or any other quantity
    by name.

    The figure is the one that the report prints; a complex one is judged by its magnitude.
    """

    id = "target-missed"
    summary = "every target of the intent file is met"
    theme = "targets"
    weight = "must-fix"
    bench = "the board misses its specification"
    source = "the intent file"
    applies = Applies(kind="target")

    def judge(self, board: Board, subject: TargetIntent, limits: Mapping[str, Bound]) -> Iterable[Evidence]:
        """One check a target."""
        if subject.group and subject.group not in {group.id for group in board.recognition.groups}:
            raise CannotTell(
                f"whether {subject.group} act as one: they were not recognised as a group", "a target a stage"
            )
        stages = _stages(board, subject)
        name = subject.stage or subject.group or f"{subject.source}->{subject.to}"
        figure = board.ask(subject.quantity, name)
        relation = _relation(subject)
        where = f"{subject.origin.file}:{subject.origin.line}, a target"
        bound = Bound(unit=figure.unit, source=where, low=subject.minimum, high=subject.maximum)
        return [
            Evidence(
                check=require(figure, relation, bound),
                subject=(stages if subject.stage or subject.group else (subject.source, subject.to))[:3],
                message=f"{subject.quantity} of {name} is {{value}}, wanted {relation} {{limit}}",
                levers=levers(_resistors(board, stages)),
            )
        ]


def _relation(target: TargetIntent) -> Relation:
    """By which ends the target has."""
    if target.minimum is not None and target.maximum is not None:
        return "within"
    return "at most" if target.minimum is None else "at least"


def _stages(board: Board, target: TargetIntent) -> tuple[str, ...]:
    """The stages a target is about; of a path those at its ends."""
    if target.stage or target.group:
        return (target.stage,) if target.stage else tuple(target.group.split("+"))
    ends = (board.stage_at_port(target.source), board.stage_at_port(target.to))
    return tuple(dict.fromkeys(stage.id for stage in ends if stage is not None))


def _resistors(board: Board, stages: Iterable[str]) -> tuple[str, ...]:
    """What turns the figures of these stages: collector, emitter and bias resistors."""
    found: dict[str, None] = {}
    for stage in stages:
        around = (*board.resistors_at(stage, "collector"), *board.resistors_at(stage, "emitter"))
        found |= dict.fromkeys((*around, *board.bias_parts(stage)))
    return tuple(found)
