"""Which value is off by a unit: planted slips of one part are named, what ten mends or two parts explain is not."""

from __future__ import annotations

import pytest

from checker.pipeline import Outcome
from tests.whole import intent_text, outcome_from

PARTS = {
    "R1": "VCC B 27k", "R2": "B 0 5.6k", "RC": "VCC C 4.7k", "RE": "E 0 1k",
    "C1": "IN B 10u", "CE": "E 0 100u", "C2": "C OUT 1u",
}  # fmt: skip
INTENT = intent_text(("IN", "input", "600 ohm"), ("OUT", "output", "10 kohm"), band=("100 Hz", "10 kHz"))


def checked(intent: str = INTENT, more: str = "", **changed: str) -> Outcome:
    lines = [f"{ref} {changed.get(ref, said)}" for ref, said in PARTS.items()]
    return outcome_from("V1 VCC 0 12\n" + "\n".join(lines) + f"\nQ1 C B E 2N3904\n{more}\n", intent)


def slipped(outcome: Outcome) -> list[str]:
    return [finding.subject[0] for finding in outcome.report.findings if finding.rule == "decade-slip"]


@pytest.mark.parametrize(
    ("ref", "said", "meant"),
    [("R1", "VCC B 27Meg", "27 kΩ"), ("RC", "VCC C 4.7Meg", "4.7 kΩ"), ("R2", "B 0 5.6", "5.6 kΩ")],
)
def test_a_resistor_off_by_a_unit(ref: str, said: str, meant: str) -> None:
    outcome = checked(**{ref: said})
    assert slipped(outcome) == [ref]
    (finding,) = [each for each in outcome.report.findings if each.rule == "decade-slip"]
    assert f"with {meant} it would rest at IC" in finding.message
    assert finding.severity == "review"


@pytest.mark.parametrize(
    "changed",
    [{}, {"R1": "VCC B 270k"}, {"RC": "VCC C 47k"}, {"R1": "VCC B 27"}, {"R2": "B 0 5.6Meg", "R1": "VCC B 27Meg"}],
)
def test_no_slip_is_seen(changed: dict[str, str]) -> None:
    """A board that is right; ten times; two parts that could explain it; a whole divider of megohms."""
    assert slipped(checked(**changed)) == []


def test_what_a_connector_may_decide_is_no_slip() -> None:
    assert slipped(checked(R1="X B 27Meg", more="XJ1 X B CONN_01X02")) == []


@pytest.mark.parametrize(("said", "hint"), [("IN B 220p", "220 nF for 220 pF"), ("IN B 470n", "")])
def test_a_capacitor_off_by_a_unit_says_so(said: str, hint: str) -> None:
    """The loss itself is the finding; that a thousand times would pass is told beside it."""
    (finding,) = [each for each in checked(C1=said).report.findings if each.rule == "coupling-loss"]
    assert (hint in finding.effect) if hint else ("slip" not in finding.effect)
