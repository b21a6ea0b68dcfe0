"""The built-in rules say all that a rule has to say, are short, and keep their ids for ever."""

from __future__ import annotations

import ast
import inspect
import math
import textwrap

import pytest

from checker.judge.discover import load_rules
from checker.judge.verdict import AnyRule
from checker.words import SEVERITIES

RULES = [rule for rule in load_rules().rules if type(rule).__module__.startswith("rules.")]
IDS_FOR_EVER = {
    "base-not-grounded",
    "beta-dependent-bias",
    "bypass-loss",
    "coupling-loss",
    "cut-off-at-rest",
    "decade-slip",
    "dissipation",
    "input-mismatch",
    "junction-temperature",
    "no-base-path",
    "package-mismatch",
    "part-polarity",
    "pin-order",
    "reverse-active",
    "saturated-at-rest",
    "soft-divider",
    "target-missed",
}
LONGEST = 20
"""Statements and lines of `judge` without its docstring."""


def test_no_id_was_ever_dropped() -> None:
    assert {name for rule in RULES for name in (rule.id, *rule.aliases)} >= IDS_FOR_EVER


@pytest.mark.parametrize("rule", RULES, ids=lambda rule: rule.id)
def test_a_rule_explains_itself(rule: AnyRule) -> None:
    assert len(inspect.getdoc(type(rule)) or "") > 100
    assert rule.weight in SEVERITIES
    for text in (rule.summary, rule.bench, rule.source, rule.theme):
        assert text
        assert not text.endswith(".")


@pytest.mark.parametrize("rule", RULES, ids=lambda rule: rule.id)
def test_limits_are_typed_data_with_a_source(rule: AnyRule) -> None:
    for limit in rule.limits:
        assert limit.low <= limit.default <= limit.high
        assert math.isfinite(limit.high)
        assert limit.source


@pytest.mark.parametrize("rule", RULES, ids=lambda rule: rule.id)
def test_judge_is_short_and_pure(rule: AnyRule) -> None:
    tree = ast.parse(textwrap.dedent(inspect.getsource(type(rule).judge)))
    body = tree.body[0]
    assert isinstance(body, ast.FunctionDef)
    assert (body.end_lineno or 0) - body.body[0].lineno <= LONGEST
    assert not [node for node in ast.walk(tree) if isinstance(node, ast.For | ast.While | ast.Global | ast.Nonlocal)]


@pytest.mark.parametrize("rule", RULES, ids=lambda rule: rule.id)
def test_a_rule_knows_no_scenarios(rule: AnyRule) -> None:
    source = inspect.getsource(type(rule))
    for word in ("scenario", "corner", "remedy", "candidate"):
        code = "\n".join(line for line in source.splitlines() if not line.strip().startswith(("#", '"')))
        assert f".{word}" not in code
