"""Verdicts and rules made by hand."""

from __future__ import annotations

from collections.abc import Iterable, Mapping

import numpy as np

from checker.judge.verdict import Verdict
from checker.quantity.figure import Figure
from checker.rulekit import Applies, Board, Bound, Evidence, Limit, Rule, Stage, require
from checker.words import Outcome, Severity
from tests.rules.fake import figure

LIMIT = Limit(name="most_v", default=1.0, unit="V", low=0.0, high=10.0, source="a test")


class Sample(Rule[Stage]):
    """VCE at most one volt: a rule for tests."""

    id = "sample-rule"
    summary = theme = bench = source = "a sample"
    weight = "must-fix"
    applies = Applies(kind="stage")
    limits = (LIMIT,)

    def judge(self, board: Board, subject: Stage, limits: Mapping[str, Bound]) -> Iterable[Evidence]:
        """One check."""
        check = require(board.ask("vce_v", subject.id), "at most", limits["most_v"])
        return [Evidence(check=check, subject=(subject.id,), message=f"{subject.id} has {{value}}, at most {{limit}}")]


SAMPLE_LIMITS = {"sample-rule": {"most_v": Bound.at(1.0, "V", "a test")}}


def named(ident: str, weight: Severity = "must-fix") -> Rule[Stage]:
    """A rule of any id."""
    return type("Named", (Sample,), {"id": ident, "weight": weight, "__doc__": "A rule of a test."})()


def verdict(
    rule: str = "sample-rule",
    subject: tuple[str, ...] = ("Q1",),
    *,
    stages: tuple[str, ...] | None = None,
    outcome: Outcome = "violates",
    judged: Figure | None = None,
    worst: int = 0,
) -> Verdict:
    """A verdict on VCE = 2 V, at most 1 V, over three scenarios."""
    check = require(judged or figure([2.0, 2.0, 2.0], quantity="vce_v"), "at most", Bound.at(1.0, "V", "a test"))
    return Verdict(
        rule=named(rule),
        evidence=Evidence(check=check, subject=subject, message="too much"),
        outcome=outcome,
        severity="must-fix" if outcome == "violates" else "review",
        worst=worst,
        name=None if outcome == "violates" else "hot",
        state=None,
        stages=subject[:1] if stages is None else stages,
        failed=np.array([True, True, True]),
    )
