"""Limits in force: defaults, what an intent file puts in their place, and what it may not."""

from __future__ import annotations

import pytest

from checker.intent.types import Intent
from checker.judge.discover import load_rules
from checker.judge.limits import limit_values, resolve_limits
from checker.trouble import InputTrouble

RULES = load_rules().rules


def intent(rule: str, **limits: float | str) -> Intent:
    """An intent file with one table of limits on line 12."""
    return Intent(path="a.intent.toml", limits={rule: limits}, limit_lines={rule: 12})


def test_defaults_carry_their_source() -> None:
    bound = resolve_limits(RULES, Intent())["input-mismatch"]["return_loss_db"]
    assert (bound.value, bound.unit) == (10.0, "dB")
    assert "common practice" in bound.source


@pytest.mark.parametrize(
    ("rule", "name", "given", "wanted"),
    [
        ("input-mismatch", "return_loss_db", 14.0, 14.0),
        ("input-mismatch", "return_loss_db", "14 dB", 14.0),
        ("soft-divider", "shift", "5 %", 0.05),
        ("soft-divider", "shift", 5.0, 0.05),
        ("cut-off-at-rest", "ic_a", "20 uA", 20e-6),
    ],
)
def test_a_number_is_in_the_limits_unit_and_a_text_may_say_its_own(
    rule: str, name: str, given: float | str, wanted: float
) -> None:
    bound = resolve_limits(RULES, intent(rule, **{name: given}))[rule][name]
    assert bound.value == pytest.approx(wanted, rel=1e-12)
    assert bound.source == "a.intent.toml:12"


@pytest.mark.parametrize(
    ("rule", "name", "given", "said"),
    [
        ("input-mismatch", "return_los_db", 14.0, "did you mean 'return_loss_db'"),
        ("input-mismach", "return_loss_db", 14.0, "did you mean 'input-mismatch'"),
        ("input-mismatch", "return_loss_db", 99.0, "is outside 0 dB to 60.0 dB"),
        ("input-mismatch", "return_loss_db", "14 V", "expected the unit dB"),
        ("soft-divider", "shift", 0.05, "outside 1.00 % to 100 %"),
    ],
)
def test_a_slip_stops_the_run_with_its_line(rule: str, name: str, given: float | str, said: str) -> None:
    with pytest.raises(InputTrouble) as caught:
        resolve_limits(RULES, intent(rule, **{name: given}))
    assert said in str(caught.value)
    assert str(caught.value).startswith("a.intent.toml:12: ")


def test_bare_numbers_for_the_report() -> None:
    values = limit_values(resolve_limits(RULES, intent("soft-divider", shift="5 %")))
    assert values["soft-divider"] == pytest.approx({"shift": 0.05})
    assert "no-base-path" not in values
