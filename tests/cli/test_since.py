"""`--since`, acceptances and the day they are judged on, with real boards."""

from __future__ import annotations

import json
from collections.abc import Callable
from pathlib import Path

import pytest

from tests.cli.conftest import Done
from tests.compare.boards import SAMPLES, lay, renumbered, report_of, text_of

Call = Callable[..., Done]
INTENT = (SAMPLES / "audio_follower" / "audio_follower.intent.toml").read_text("utf-8")
ENTRY = '\n[[accepted]]\n{0}\nreason = "as built in 1974"\nby = "audio lead"\nuntil = 2027-06-30\n'


@pytest.fixture
def folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    monkeypatch.chdir(tmp_path)
    lay(tmp_path, text_of("audio_follower"), INTENT)
    return tmp_path


def test_since_tells_new_cured_and_unchanged(folder: Path, call: Call) -> None:
    assert call("check", "board.cir", "--as", "json", "--out", "old.json").status == 1
    same = json.loads(call("check", "board.cir", "--as", "json", "--since", "old.json").out)["since"]
    assert len(same["unchanged"]) == 4 and not same["new"] and not same["cured"]
    text = text_of("audio_follower").replace("C2 E1 0 33u", "C2 E1 0 470u").replace("R4 VF COL1 6.8k", "R4 VF COL1 18k")
    lay(folder, text, INTENT)
    done = call("check", "board.cir", "--as", "json", "--since", "old.json")
    report = json.loads(done.out)
    cured = {finding["rule"] for finding in report["since"]["cured"]}
    assert "bypass-loss" in cured and "coupling-loss" not in cured
    fresh = {f["rule"] for f in report["findings"] if f["fingerprint"] in report["since"]["new"]}
    assert "saturated-at-rest" in fresh
    assert done.status == 1
    assert f"{len(cured)} cured" in call("check", "board.cir", "--since", "old.json").out
    states = [
        r["baselineState"]
        for r in json.loads(call("check", "board.cir", "--as", "sarif", "--since", "old.json").out)["runs"][0][
            "results"
        ]
    ]
    assert sorted(set(states)) == ["absent", "new", "unchanged"]


def test_since_after_renumbering_re_opens_nothing(folder: Path, call: Call) -> None:
    call("check", "board.cir", "--as", "json", "--out", "old.json")
    for seed in (1, 2, 3, 4):
        text, intent, _ = renumbered(text_of("audio_follower"), INTENT, seed)
        lay(folder, text, intent)
        since = json.loads(call("check", "board.cir", "--as", "json", "--since", "old.json").out)["since"]
        assert len(since["unchanged"]) == 4 and not since["new"] and not since["cured"] and not since["unjudged"]


def test_a_board_that_can_no_longer_be_judged_is_not_cured(folder: Path, call: Call) -> None:
    call("check", "board.cir", "--as", "json", "--out", "old.json")
    lay(folder, text_of("audio_follower").replace("Q1 COL1 B1 E1 2N3904", "Q1 COL1 B1 E1 NOSUCH9"), INTENT)
    report = json.loads(call("check", "board.cir", "--as", "json", "--since", "old.json").out)
    assert report["unchecked"]
    cured = {finding["rule"] for finding in report["since"]["cured"]}
    judged = {rule for rule, on in report["judged"].items() if on}
    assert cured <= judged | {"bypass-loss", "coupling-loss", "target-missed"} and "soft-divider" not in cured


def test_since_must_be_a_report(folder: Path, call: Call) -> None:
    (folder / "no.json").write_text('{"schema": "other"}')
    for name in ("no.json", "board.cir"):
        done = call("check", "board.cir", "--since", name)
        assert done.status == 2 and done.err.startswith(f"stageproof: {name}:") and done.err.count("\n") == 1
    done = call("check", "board.cir", "--since", "no.json", "--out", "no.json")
    assert done.status == 2 and "would be overwritten" in done.err


@pytest.mark.parametrize("by_fingerprint", [True, False])
def test_acceptance_holds_until_its_day_and_through_renumbering(by_fingerprint: bool, folder: Path, call: Call) -> None:
    found = next(f for f in report_of(folder / "board.cir").findings if f.rule == "bypass-loss")
    what = f'fingerprint = "{found.fingerprint}"' if by_fingerprint else 'rule = "bypass-loss"\nsubject = "C2"'
    lay(folder, text_of("audio_follower"), INTENT + ENTRY.format(what))
    report = json.loads(call("check", "board.cir", "--as", "json", "--today", "2027-06-30").out)
    assert [each["finding"]["rule"] for each in report["accepted"]] == ["bypass-loss"]
    assert "as built in 1974" in call("check", "board.cir", "--today", "2027-06-30").out
    report = json.loads(call("check", "board.cir", "--as", "json", "--today", "2027-07-01").out)
    assert not report["accepted"] and any("ended on 2027-06-30" in caution for caution in report["cautions"])
    text, intent, _ = renumbered(text_of("audio_follower"), INTENT + ENTRY.format(what), 2)
    lay(folder, text, intent)
    report = json.loads(call("check", "board.cir", "--as", "json", "--today", "2027-06-30").out)
    assert [each["finding"]["fingerprint"] for each in report["accepted"]] == [found.fingerprint]


def test_an_acceptance_of_nothing_is_reported(folder: Path, call: Call) -> None:
    lay(folder, text_of("audio_follower"), INTENT + ENTRY.format('fingerprint = "0123456789abcdef"'))
    report = json.loads(call("check", "board.cir", "--as", "json", "--today", "2027-01-01").out)
    assert any("0123456789abcdef is no longer there" in caution for caution in report["cautions"])
