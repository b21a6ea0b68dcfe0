"""Root causes: one fault sets off several rules, and the report should say which came first.

A finding follows from another where both are about one stage, the tables below say that such a thing can be its cause,
and the cause is more certain or stands earlier in `PRIMACY`. Of several causes the first by that order counts.
"""

from __future__ import annotations

import math
from collections.abc import Sequence

from checker.judge.message import frequency_hz
from checker.judge.verdict import Verdict

REST = ("no-base-path", "reverse-active", "cut-off-at-rest", "saturated-at-rest")
"""A stage that rests wrongly does nothing right: all its other findings follow."""

PRIMACY = (
    *REST,
    "beta-dependent-bias",
    "soft-divider",
    "dissipation",
    "base-not-grounded",
    "bypass-loss",
    "coupling-loss",
    "input-mismatch",
)

CAUSES: dict[str, tuple[str, ...]] = {
    "reverse-active": ("no-base-path",),
    "cut-off-at-rest": ("no-base-path", "reverse-active", "beta-dependent-bias", "soft-divider"),
    "saturated-at-rest": ("no-base-path", "reverse-active", "beta-dependent-bias", "soft-divider"),
    "beta-dependent-bias": (*REST, "soft-divider"),
    "soft-divider": REST,
    "dissipation": ("reverse-active", "beta-dependent-bias"),
    "junction-temperature": ("dissipation", "reverse-active", "beta-dependent-bias"),
    "base-not-grounded": REST,
    "bypass-loss": (*REST, "base-not-grounded"),
    "coupling-loss": REST,
    "input-mismatch": (*REST, "base-not-grounded", "coupling-loss"),
    "target-missed": (*REST, "base-not-grounded"),
}
"""Effect -> what can bring it about, whatever it is that is measured."""

CAUSES_BY_QUANTITY: dict[str, dict[str, tuple[str, ...]]] = {
    "target-missed": {
        "corner": ("bypass-loss", "coupling-loss"),
        "droop": ("bypass-loss", "coupling-loss"),
        "transducer_gain": ("input-mismatch",),
        "ic_a": ("soft-divider", "beta-dependent-bias"),
        "vce_v": ("soft-divider", "beta-dependent-bias"),
    }
}
"""The same, only where the judged quantity's name holds the word."""

CAUSES_AT_ONE_FREQUENCY: dict[str, tuple[str, ...]] = {"target-missed": ("bypass-loss", "coupling-loss")}
"""The same, only where both are worst at the same frequency: a gain missed at the band edge where a capacitor loses."""


def causes(verdicts: Sequence[Verdict]) -> tuple[int | None, ...]:
    """For each verdict the index of the one it follows from, None where it is a root. Never in a circle."""
    return tuple(_cause(verdict, verdicts) for verdict in verdicts)


def _cause(effect: Verdict, verdicts: Sequence[Verdict]) -> int | None:
    possible = [index for index, each in enumerate(verdicts) if each is not effect and _follows(effect, each)]
    return min(possible, key=lambda index: (_precedence(verdicts[index]), index), default=None)


def _follows(effect: Verdict, cause: Verdict) -> bool:
    if not set(effect.stages) & set(cause.stages):
        return False
    at_one = cause.rule.id in CAUSES_AT_ONE_FREQUENCY.get(effect.rule.id, ()) and _same_frequency(effect, cause)
    if cause.rule.id not in _named(effect) and not at_one:
        return False
    return _precedence(cause) < _precedence(effect)


def _precedence(verdict: Verdict) -> tuple[bool, int]:
    """What is certain before what may be, then `PRIMACY`; a cause stands strictly before its effect, so no circles."""
    place = PRIMACY.index(verdict.rule.id) if verdict.rule.id in PRIMACY else len(PRIMACY)
    return verdict.outcome != "violates", place


def _same_frequency(effect: Verdict, cause: Verdict) -> bool:
    one, other = (frequency_hz(each.evidence.check, each.worst) for each in (effect, cause))
    return one is not None and other is not None and math.isclose(one, other, rel_tol=1e-6)


def _named(effect: Verdict) -> tuple[str, ...]:
    quantity = effect.evidence.check.figure.quantity
    by_quantity = CAUSES_BY_QUANTITY.get(effect.rule.id, {})
    extra = [rules for word, rules in by_quantity.items() if word in quantity]
    return (*CAUSES.get(effect.rule.id, ()), *(rule for rules in extra for rule in rules))
