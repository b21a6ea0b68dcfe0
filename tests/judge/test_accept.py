"""Signed findings: what matches, what has ended, what is no longer there."""

from __future__ import annotations

import datetime

import pytest

from checker.intent.types import AcceptedIntent, Intent
from checker.judge.accept import sort_accepted
from checker.quantity.value import Origin
from checker.record.finding import Finding
from checker.trouble import InputTrouble
from tests.judge.samples import named

TODAY = datetime.date(2026, 12, 1)
RULES = (named("input-mismatch"), named("coupling-loss"))


def finding(rule: str = "input-mismatch", *subject: str, mark: str = "abc") -> Finding:
    """A finding."""
    return Finding(
        rule=rule,
        outcome="violates",
        severity="must-fix",
        subject=subject or ("Q1", "J1"),
        message="",
        fingerprint=mark,
    )


def intent(**entry: object) -> Intent:
    """One [[accepted]] table on line 30."""
    origin = Origin(kind="intent", file="a.toml", line=30)
    return Intent(
        path="a.toml",
        accepted=(AcceptedIntent(reason="matched far off", by="RF", origin=origin, **entry),),  # type: ignore[arg-type]
    )


@pytest.mark.parametrize(
    "entry",
    [
        {"rule": "input-mismatch", "subject": "Q1"},
        {"rule": "input-mismatch", "subject": "J1"},
        {"fingerprint": "abc"},
        {"fingerprint": "abc", "until": TODAY},
    ],
)
def test_accepted(entry: dict[str, object]) -> None:
    parted = sort_accepted([finding()], intent(**entry), RULES, TODAY)
    assert parted.open == ()
    assert (parted.accepted[0].reason, parted.accepted[0].by) == ("matched far off", "RF")
    assert parted.cautions == ()


@pytest.mark.parametrize("entry", [{"rule": "input-mismatch", "subject": "Q2"}, {"fingerprint": "abd"}])
def test_an_entry_that_matches_nothing_is_told(entry: dict[str, object]) -> None:
    parted = sort_accepted([finding()], intent(**entry), RULES, TODAY)
    assert len(parted.open) == 1
    assert "a.toml:30" in parted.cautions[0]
    assert "no longer there" in parted.cautions[0]


def test_an_entry_that_has_ended_accepts_nothing() -> None:
    parted = sort_accepted(
        [finding()], intent(fingerprint="abc", until=TODAY - datetime.timedelta(days=1)), RULES, TODAY
    )
    assert len(parted.open) == 1
    assert "ended on 2026-11-30" in parted.cautions[0]


def test_the_last_day_is_written() -> None:
    parted = sort_accepted([finding()], intent(fingerprint="abc", until=TODAY), RULES, TODAY)
    assert parted.accepted[0].until == "2026-12-01"


def test_a_rule_that_does_not_exist_stops_the_run() -> None:
    with pytest.raises(InputTrouble, match=r"a\.toml:30: .*did you mean 'coupling-loss'"):
        sort_accepted([], intent(rule="couplng-loss", subject="C1"), RULES, TODAY)
