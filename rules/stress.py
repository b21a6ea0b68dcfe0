"""Theme stress: what a device is rated for, in whatever condition the board is."""

from __future__ import annotations

from collections.abc import Iterable, Mapping

from checker.rulekit import Applies, Board, Bound, Evidence, Limit, Rule, Stage, ceiling, levers, require

_SHARE = Limit(
    name="share",
    default=1.0,
    unit="%",
    low=0.1,
    high=1.0,
    source="the rating itself (data sheet of the part); house rules for derating set less",
)


def _current_setters(board: Board, stage: Stage) -> tuple[str, ...]:
    """Resistors that turn the stage's current: the emitter's first."""
    return tuple(dict.fromkeys((*board.resistors_at(stage.id, "emitter"), *board.bias_parts(stage.id))))


class Dissipation(Rule[Stage]):
    """A device past its rated dissipation ages fast or fails; small cases reach it at a few hundred
    milliwatts.

    P = IC VCE + IB VBE at rest, against the rating at 25 degC derated in a straight line to zero at the
    highest junction temperature. The rating holds for the data sheet's mounting; copper around the part is
    unknown here.
    """

    id = "dissipation"
    summary = "no device dissipates more than it is rated for at the ambient temperature"
    theme = "stress"
    weight = "must-fix"
    bench = "too hot to touch; current creeps up after switching on; early failures"
    source = "P = IC VCE + IB VBE; linear derating (Bell, 5th ed., example 8.11, 625 mW and 5 mW/K, as transcribed)"
    applies = Applies(kind="stage")
    limits = (_SHARE,)
    always = True

    def judge(self, board: Board, subject: Stage, limits: Mapping[str, Bound]) -> Iterable[Evidence]:
        """One check of the power against the derated rating."""
        rating = board.ask("power_limit_w", subject.id)
        return [
            Evidence(
                check=require(
                    board.ask("power_w", subject.id), "at most", ceiling(rating, share=limits["share"].value)
                ),
                subject=(subject.id,),
                message=f"{subject.id} dissipates {{value}}, rated for {{rating}} at this ambient temperature",
                figures={"rating": rating},
                levers=levers(_current_setters(board, subject)),
            )
        ]


class JunctionTemperature(Rule[Stage]):
    """A junction over its highest temperature is outside all that the data sheet promises.

    Tj = Ta + P Rth, solved together with the device's own heating. Rth is the data sheet's for its own
    mounting.
    """

    id = "junction-temperature"
    summary = "no junction is hotter than the data sheet allows"
    theme = "stress"
    weight = "must-fix"
    bench = "current and temperature climb together; the case discolours the board"
    source = "Tj = Ta + P Rth (Malvino, 7th ed., example 12-14, as transcribed)"
    applies = Applies(kind="stage")
    limits = (
        Limit(
            name="margin_k",
            default=0.0,
            unit="K",
            low=0.0,
            high=150.0,
            source="the rating itself (data sheet of the part); house rules for derating keep 40 K",
        ),
    )
    always = True

    def judge(self, board: Board, subject: Stage, limits: Mapping[str, Bound]) -> Iterable[Evidence]:
        """One check of the self-heated junction."""
        highest = board.ask("tj_max_c", subject.id)
        return [
            Evidence(
                check=require(
                    board.ask("tj_c", subject.id), "at most", ceiling(highest, less=limits["margin_k"].value)
                ),
                subject=(subject.id,),
                message=f"the junction of {subject.id} reaches {{value}} at {{power}}, at most {{limit}} allowed",
                figures={"power": board.ask("power_w", subject.id)},
                levers=levers(_current_setters(board, subject)),
            )
        ]
