"""The registry of forms and the other things printed: rules and cards."""

from __future__ import annotations

import json
from types import SimpleNamespace

import pytest

from checker.cards.types import Card, Ratings
from checker.record.write import to_json
from checker.report.bundle import Bundle
from checker.report.card import render_card
from checker.report.catalogue import render_rules
from checker.report.forms import FORMS, form
from checker.trouble import InputTrouble
from tests.record.invented import report


@pytest.mark.parametrize("name", FORMS)
def test_every_form_renders(name: str) -> None:
    assert form(name)(report(), width=80, colour=False).endswith("\n")


def test_unknown_form_names_those_there_are() -> None:
    with pytest.raises(InputTrouble, match="there are text, json"):
        form("papyrus")


def test_several_reports_in_one_object() -> None:
    bundle = Bundle(reports=(report(), report()), without=(("bad.net", "bad.net:3: no"),), several=True)
    whole = json.loads(bundle.render("json", width=80, colour=False))
    assert whole["schema"] == "stageproof-reports/1"
    assert whole["reports"] == [json.loads(to_json(report()))] * 2
    assert whole["unusable"] == [{"path": "bad.net", "message": "bad.net:3: no"}]


def test_rules_are_listed_by_theme_with_limits() -> None:
    limit = SimpleNamespace(name="shift", default=0.1, unit="%", low=0.01, high=0.5, source="common practice")
    rules = [
        SimpleNamespace(id="b-rule", summary="Second.", theme="bias", weight="review", bench="", source="", limits=()),
        SimpleNamespace(
            id="a-rule",
            summary="First\x1b.",
            theme="bias",
            weight="must-fix",
            bench="It hums.",
            source="Invented, page 1",
            limits=(limit,),
        ),
    ]
    assert render_rules(rules, width=80, colour=False) == (
        "Bias\n"
        "  a-rule  (must-fix)\n"
        "    First<U+001B>.\n"
        "    you see  It hums.\n"
        "    source   Invented, page 1\n"
        "    limit    shift = 10 %, may be 1 % to 50 %; common practice\n"
        "  b-rule  (review)\n"
        "    Second.\n"
    )


def test_card_is_shown_with_ratings_pins_and_source() -> None:
    card = Card(
        name="XY100",
        kind="npn",
        model={"is": 1e-14, "bf": 210.0},
        source="invented",
        ratings=Ratings(v_max_v=45.0, i_max_a=0.1, rth_ja_kpw=200.0),
        gain_min=110.0,
        gain_max=800.0,
        packages={"TO-92": {"1": "C", "2": "B", "3": "E"}},
        aliases=("XY100A",),
    )
    text = render_card(card, width=100, colour=False)
    assert text.startswith("XY100  npn\n")
    assert "largest voltage 45 V, largest current 100 mA, junction to ambient 200 K/W" in text
    assert "TO-92: 1 C, 2 B, 3 E" in text and "110 to 800" in text and "bf=210, is=1e-14" in text
    assert "source    invented" in text and "note" not in text
