"""Theme matching: what a port sees against the connector or line on it."""

from __future__ import annotations

from collections.abc import Iterable, Mapping

from checker.rulekit import Applies, Board, Bound, CannotTell, Evidence, Lever, Limit, Port, Rule, levers, require


class InputMismatch(Rule[Port]):
    """A receive input far from the impedance of its line reflects part of the signal: the level depends on
    the cable's length, a filter ahead of it loses its shape, and a common-base stage at the wrong current
    is the usual culprit.

    RL = -20 log10 |(Z - R) / (Z + R)|, Z at the port's plane, worst over the band. Judged only where a
    reference is known and the port is declared or coaxial. It cannot know of a match outside the board;
    accept it then.
    """

    id = "input-mismatch"
    summary = "an input presents the impedance of the connector or line it sits on"
    theme = "matching"
    weight = "must-fix"
    bench = "level and response change with the length of the cable; a filter ahead of the input is pulled"
    source = "return loss as in IEC 60050-702 (702-07-25); re' = VT/IE for a common-base input, common practice"
    applies = Applies(kind="port")
    limits = (
        Limit(
            name="return_loss_db",
            default=10.0,
            unit="dB",
            low=0.0,
            high=60.0,
            source="10 dB for a receive input: common practice, no source",
        ),
    )

    def judge(self, board: Board, subject: Port, limits: Mapping[str, Bound]) -> Iterable[Evidence]:
        """One check of the worst return loss in the band."""
        if subject.role != "input" or subject.reference_ohm is None or not (subject.declared or subject.coaxial):
            return ()
        stage = board.stage_at_port(subject.name)
        if stage is None and not subject.declared:
            raise CannotTell(f"what port {subject.name} feeds", "a [[port]] entry, or models for the parts behind it")
        parts = () if stage is None else (stage.id, *board.bias_parts(stage.id)[:1])
        turn: tuple[Lever, ...] = ()
        if stage is not None and stage.entry is not None:
            turn = levers(dict.fromkeys((*board.resistors_at(stage.id, stage.entry), *board.bias_parts(stage.id))))
        return [
            Evidence(
                check=require(board.ask("return_loss_db", subject.name), "at least", limits["return_loss_db"]),
                subject=(*parts[:1], subject.part or subject.name),
                message=f"input {subject.name} presents {{impedance}} to a {subject.reference_ohm:g} "
                f"Ω line: return "
                "loss {value} at {frequency}, at least {limit} wanted",
                figures={"impedance": board.ask("impedance_ohm", subject.name)},
                levers=turn,
            )
        ]
