"""Theme bias: where a stage rests, and what its collector current rides on."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import replace
from math import inf

from checker.rulekit import (
    LINEAR,
    Applies,
    Board,
    Bound,
    CannotTell,
    Check,
    Configuration,
    Evidence,
    Limit,
    Rule,
    Stage,
    levers,
    magnitude,
    require,
    where_code,
)

_RESTING: tuple[Configuration, ...] = (*LINEAR, "unclassified")
"""Those that are asked how they rest. A device that no signal path was found through is asked too, but its
rest accuses nobody: it may be a switch that is off, or wait for a fault.
"""

_ROOM = Bound.at(0.5, "V", "half a volt over saturation, common practice")
"""What a remedy of saturation has to reach."""
_DRAWN_DOWN = 0.75
"""Share of the voltage over a device that is cut off which may remain once it conducts."""
_FORWARD = Bound.at(0.0, "V", "sense of the collector current")
_PATH = Bound.at(1.0, "", "Kirchhoff's current law")


def _rests(
    board: Board, stage: Stage, check: Check, goal: Check | None, words: str, turned: Iterable[str]
) -> list[Evidence]:
    """Evidence that a stage rests where it should not. Raises `CannotTell` for one whose work is unknown."""
    if stage.configuration == "unclassified" and check.failed.any():
        raise CannotTell(
            f"what {stage.id} is for: it {words}, and no signal path through it was found",
            "[[port]] entries where the signal enters and leaves, or an [[accepted]] entry",
        )
    terms = board.terms(stage.id)
    across, drive, current = terms.symbols
    turn = tuple(dict.fromkeys((*turned, *board.bias_parts(stage.id))))
    return [
        Evidence(
            check=check,
            subject=(stage.id, *turn)[:2],
            message=f"{stage.id} {words}: {across} {{across}}, {drive} {{drive}}, {current} {{current}}",
            figures={name: board.ask(getattr(terms, name), stage.id) for name in ("across", "drive", "current")},
            levers=levers(turn),
            goal=goal,
        )
    ]


class SaturatedAtRest(Rule[Stage]):
    """IC RC exceeds what the supply leaves: the collector sits at the emitter, and one half of the signal
    is gone.

    Saturated: VBC > 0 and IC/IB under 0.9 of its value at VBC = 0 (certified operating point). A
    field-effect transistor: VDS under the overdrive VGS - VTH, the ohmic region. Switches rest so on
    purpose and are not asked. A stage that merely comes close is judged by its swing, not here.
    """

    id = "saturated-at-rest"
    summary = "a linear stage does not rest in saturation"
    theme = "bias"
    weight = "must-fix"
    bench = "next to no gain; the collector stands a few tenths of a volt above the emitter and hardly moves"
    source = "definition: forward base-collector junction with forced gain; device equations at the operating point"
    applies = Applies(kind="stage", configurations=_RESTING)
    limits = (
        Limit(
            name="headroom_v",
            default=0.0,
            unit="V",
            low=0.0,
            high=10.0,
            source="the edge of saturation itself; a house rule may keep half a volt (common practice)",
        ),
    )

    def judge(self, board: Board, subject: Stage, limits: Mapping[str, Bound]) -> Iterable[Evidence]:
        """One check of the headroom, wherever the device is not cut off or reversed."""
        headroom = board.ask("headroom_v", subject.id)
        region = board.ask("region_code", subject.id)
        terms = board.terms(subject.id)
        asked = (board.region_code("active"), board.region_code(terms.on))
        check = require(where_code(headroom, region, asked, inf), "at least", limits["headroom_v"])
        goal = require(headroom, "at least", _ROOM)
        words = "rests in saturation" if terms.on == "saturated" else "rests in the ohmic region"
        return _rests(board, subject, check, goal, words, board.resistors_at(subject.id, "collector"))


class CutOffAtRest(Rule[Stage]):
    """The base divider gives less than a junction needs: without signal no collector current flows.

    Cut off: |IC| under 1e-3 of the current with collector and emitter joined and the device removed, and
    VBE under the limit: a large current beside a still larger one that could flow is no fault. A class C
    stage and a limiter that waits for a fault rest so on purpose; accept them.
    """

    id = "cut-off-at-rest"
    summary = "a linear stage does not rest cut off"
    theme = "bias"
    weight = "must-fix"
    bench = "the collector stands at the supply; small signals vanish, large ones come through as narrow peaks"
    source = "a silicon junction needs about half a volt for a small current (device equation)"
    applies = Applies(kind="stage", configurations=_RESTING)
    limits = (
        Limit(
            name="ic_a",
            default=10e-6,
            unit="A",
            low=1e-9,
            high=1e-3,
            source="what passes for a current in a stage of milliamperes: common practice, no source",
        ),
    )

    def judge(self, board: Board, subject: Stage, limits: Mapping[str, Bound]) -> Iterable[Evidence]:
        """One check of the collector current where the region is cut-off."""
        terms, off = board.terms(subject.id), (board.region_code("cut-off"),)
        current = magnitude(board.ask(terms.current, subject.id))
        check = require(where_code(current, board.ask("region_code", subject.id), off, inf), "at least", limits["ic_a"])
        vce = board.ask(terms.across, subject.id)
        goal = require(vce, "at most", Bound.at(_DRAWN_DOWN * abs(vce.nominal), "V", "a quarter for the load"))
        return _rests(board, subject, check, goal, "is cut off at rest", ())


class ReverseActive(Rule[Stage]):
    """Collector and emitter are exchanged, or their rails are: the device runs backwards with a current
    gain of a few, and its emitter junction takes the reverse voltage that it breaks down under at 5 to 7 V.

    Reverse-active: base-collector junction forward, base-emitter junction not. A MOSFET the wrong way round
    conducts through its body diode, whatever its gate does. A muting transistor used backwards on purpose
    looks the same; accept it.
    """

    id = "reverse-active"
    summary = "no device runs backwards"
    theme = "bias"
    weight = "must-fix"
    bench = "gain of a few at best; noise grows over months as the emitter junction is worn"
    source = "sign of both junction voltages (device equation)"
    applies = Applies(kind="stage", configurations=_RESTING)

    def judge(self, board: Board, subject: Stage, limits: Mapping[str, Bound]) -> Iterable[Evidence]:
        """One check of the collector-emitter voltage where the region is reverse-active; no value mends
        it.
        """
        terms = board.terms(subject.id)
        backwards = (board.region_code(terms.backwards),)
        sense = board.ask(terms.sense, subject.id)
        check = require(where_code(sense, board.ask("region_code", subject.id), backwards, inf), "at least", _FORWARD)
        words = f"runs backwards, as with {terms.output} and {terms.common} exchanged"
        return [
            replace(evidence, subject=(subject.id,), levers=())
            for evidence in _rests(board, subject, check, None, words, ())
        ]


class SoftDivider(Rule[Stage]):
    """Base current loads the divider, so the collector current is not what the simple formula says and
    drifts with gain.

    Shift = |IC / IC(base current taken as zero) - 1|; about Rth / ((beta + 1) RE). Judged by its effect,
    not by the ratio of resistances, and only where a divider sets the base.
    """

    id = "soft-divider"
    summary = "the base divider carries the base current without giving way"
    theme = "bias"
    weight = "review"
    bench = "collector current well under the calculated one, and different from unit to unit"
    source = (
        "r = Rth / ((beta + 1) RE); 0.1 is firm, 0.01 stiff (Malvino, 7th ed., examples 8-3 and 8-4, as transcribed)"
    )
    applies = Applies(kind="stage", configurations=LINEAR)
    limits = (
        Limit(
            name="shift",
            default=0.1,
            unit="%",
            low=0.01,
            high=1.0,
            source="a firm divider (Malvino, 7th ed., example 8-3, as transcribed)",
        ),
    )

    def judge(self, board: Board, subject: Stage, limits: Mapping[str, Bound]) -> Iterable[Evidence]:
        """One check of the shift that the base current makes."""
        divider = board.resistors_at(subject.id, "base")
        return [
            Evidence(
                check=require(board.ask("divider_shift", subject.id), "at most", limits["shift"]),
                subject=(subject.id, *divider)[:3],
                message=f"base current moves the collector current of {subject.id} to {{ic}}, "
                f"{{value}} from what its "
                "divider alone would set; at most {limit} wanted",
                figures={"ic": board.ask("ic_a", subject.id)},
                levers=levers(divider, "down"),
                in_step=True,
            )
        ]


class BetaDependentBias(Rule[Stage]):
    """The collector current is set by the current gain, which differs two- or threefold within one type: it
    works with one reel and saturates with the next.

    Ratio = IC at the highest gain of the part's group / IC at the lowest, by two bias solutions; for a
    single base resistor it is the ratio of the gains themselves. Where the spread of the part is unknown it
    cannot tell.
    """

    id = "beta-dependent-bias"
    summary = "the collector current does not ride on the current gain"
    theme = "bias"
    weight = "review"
    bench = "some boards saturate or distort and others do not, with the same values fitted"
    source = "IC = beta (V - VBE)/RB; Bell, 5th ed., example 5.4 (VCE 13.95 V at 50, 1.80 V at 200, as transcribed)"
    applies = Applies(kind="stage", configurations=LINEAR)
    limits = (
        Limit(
            name="gain_spread_ratio",
            default=2.0,
            unit="",
            low=1.0,
            high=20.0,
            source="a spread of 2:1 to 3:1 maps one to one into IC (application note AN1293, as transcribed)",
        ),
    )

    def judge(self, board: Board, subject: Stage, limits: Mapping[str, Bound]) -> Iterable[Evidence]:
        """One check of the two collector currents."""
        parts = board.bias_parts(subject.id)
        return [
            Evidence(
                check=require(board.ask("gain_spread_ratio", subject.id), "at most", limits["gain_spread_ratio"]),
                subject=(subject.id, *parts)[:2],
                message=f"collector current of {subject.id} spreads {{value}} to 1 over the current "
                f"gain of the part, at "
                "most {limit} to 1 wanted",
                levers=levers(parts),
            )
        ]


class NoBasePath(Rule[Stage]):
    """A base or gate that touches capacitors alone gets no direct current: leakage decides where it drifts to.

    Structure: a path of resistors, windings, sources or junctions other than the device's own from the base
    to a net of known voltage. A pin of a circuit that has no model may supply it; then it cannot tell.
    """

    id = "no-base-path"
    summary = "every base and gate has a path for its direct current"
    theme = "bias"
    weight = "must-fix"
    bench = "the stage works for a moment after touching the base, then drifts to a rail"
    source = "structure: Kirchhoff's current law at the base"
    applies = Applies(kind="stage")

    def judge(self, board: Board, subject: Stage, limits: Mapping[str, Bound]) -> Iterable[Evidence]:
        """One check of the structure."""
        return [
            Evidence(
                check=require(board.ask("base_dc_path", subject.id), "equals", _PATH),
                subject=(subject.id,),
                message=f"the {board.terms(subject.id).control} of {subject.id} has no path for direct current",
            )
        ]
