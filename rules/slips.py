"""Theme values: what was meant, and what was written."""

from __future__ import annotations

from collections.abc import Iterable, Mapping

from checker.rulekit import LINEAR, Applies, Board, Bound, Evidence, Limit, Rule, Stage, require


class DecadeSlip(Rule[Stage]):
    """A resistor off by a unit, k for M, R for k, a small m for M: the bias is dead or saturated.

    The stage rests cut off, saturated or at next to no current, and one resistor alone, a thousand times larger or
    smaller, lets it rest well. A slip that leaves the stage working, or that two parts could explain, is not seen; what
    a factor of ten mends is design, and the other rules speak of it. A device outside every signal path is asked only
    on a board whose ports are declared. Capacitors: see the losses of their own.
    """

    id = "decade-slip"
    summary = "no value is off by a unit"
    theme = "values"
    weight = "review"
    bench = "no bias at all, or no low end: the part is fitted as drawn and measures as drawn"
    source = (
        "stacked solution over the parts around the stage; a factor of thirty and more is no tolerance: common practice"
    )
    applies = Applies(kind="stage", configurations=(*LINEAR, "unclassified"))
    limits = (
        Limit(
            name="decades",
            default=1.5,
            unit="",
            low=0.5,
            high=2.9,
            source="a factor of thirty lies outside any plausible band: common practice, no source",
        ),
    )

    def judge(self, board: Board, subject: Stage, limits: Mapping[str, Bound]) -> Iterable[Evidence]:
        """One check of the powers of ten that one part's value is off by."""
        meant = {port.role for port in board.ports if port.declared} >= {"input", "output"}
        if subject.configuration == "unclassified" and not meant:
            return ()
        part, words = board.slip(subject.id)
        check = require(board.ask("slip_decades", subject.id), "at most", limits["decades"])
        return [Evidence(check=check, subject=tuple(filter(None, (part, subject.id))), message=words)]
