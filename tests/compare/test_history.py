"""Ten commits to a sample board, each compared with the one before it as a user would: by REVISION:PATH."""

from __future__ import annotations

import json
import subprocess
from collections.abc import Callable, Iterator
from pathlib import Path
from typing import Any

import pytest

from checker.cli.main import run
from tests.compare.boards import SAMPLES, renumbered, text_of

PATH = "boards/coax.cir"
INTENT = SAMPLES / "coax_cascade" / "coax_cascade.intent.toml"
Text = Callable[[str], str]


def swap(old: str, new: str) -> Text:
    """An edit of one line, however it is spaced; an empty `new` takes it out."""

    def edit(text: str) -> str:
        lines = [line for line in text.splitlines() if line.split() != old.split() or new]
        found = [new if line.split() == old.split() else line for line in lines]
        assert found != text.splitlines(), old
        return "\n".join(found) + "\n"

    return edit


def spaced(text: str) -> str:
    return "* a new title line\n" + text.split("\n", 1)[1].replace(" ", "    ").replace("* supply", "* the supply")


def shuffled(text: str) -> str:
    return renumbered(text, "", 2)[0]


NEW = renumbered(text_of("coax_cascade"), "", 2)[2]
"""What the fifth commit calls each part."""


def named(ref: str) -> str:
    return NEW[ref]


COMMITS: list[tuple[str, Text, dict[str, set[str]], set[str], set[str], set[str]]] = [
    # what, the edit, edited part -> its stages, stages changed by it, rules newly found, rules cured
    ("more degeneration", swap("R7 E2 EB2 47", "R7 E2 EB2 56"), {"R7": {"Q2"}}, {"Q2"}, set(), set()),
    ("larger collector load", swap("R4 VF COL1 1.2k", "R4 VF COL1 1.3k"), {"R4": {"Q1"}}, {"Q1"}, set(), set()),
    ("smaller coupling", swap("C3 COL1 B2 10n", "C3 COL1 B2 4.7n"), {"C3": {"Q2"}}, {"Q2"}, set(), set()),
    ("reformatted", spaced, {}, set(), set(), set()),
    ("renumbered", shuffled, {}, set(), set(), set()),
    (
        "a capacitor added",
        swap(f"{named('R9')} VF COL2 1k", f"{named('R9')} VF COL2 1k\nC90 VF COL2 2.2p"),
        {"C90": {"Q2"}},
        {"Q2"},
        set(),
        set(),
    ),
    (
        "supply filter",
        swap(f"{named('R10')} +12V VF 47", f"{named('R10')} +12V VF 100"),
        {named("R10"): {named("Q1"), named("Q2")}},
        {named("Q1"), named("Q2")},
        set(),
        set(),
    ),
    (
        "base left open",
        swap(f"{named('C2')} B1 0 100n", ""),
        {named("C2"): {named("Q1")}},
        {named("Q1")},
        {"base-not-grounded"},
        set(),
    ),
    (
        "base grounded again, under another reference",
        swap(f"{named('R3')} B1 0 15k", f"{named('R3')} B1 0 15k\nC91 B1 0 100n"),
        {"C91": {named("Q1")}},
        {named("Q1")},
        set(),
        {"base-not-grounded"},
    ),
    (
        "another transistor",
        swap(f"{named('Q2')} COL2 B2 E2 MMBTH10", f"{named('Q2')} COL2 B2 E2 2N3904"),
        {named("Q2"): {named("Q2")}},
        {named("Q2")},
        {"target-missed"},
        set(),
    ),
]


def git(folder: Path, *arguments: str) -> None:
    name = [
        "-c",
        "user.name=A",
        "-c",
        "user.email=a@b.invalid",
        "-c",
        "commit.gpgsign=false",
        "-c",
        "core.hooksPath=no",
    ]
    subprocess.run(["git", *name, *arguments], cwd=folder, check=True, capture_output=True)


@pytest.fixture(scope="module")
def history(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """A repository with the sample board and ten commits to it."""
    folder = tmp_path_factory.mktemp("history")
    git(folder, "init", "-q")
    text, intent = text_of("coax_cascade"), INTENT.read_text("utf-8")
    board = folder / PATH
    board.parent.mkdir()
    for what, edit, *_ in [("sample board", lambda text: text), *COMMITS]:
        text = edit(text)
        board.write_text(text, "utf-8")
        intent = renumbered(text_of("coax_cascade"), intent, 2)[1] if what == "renumbered" else intent
        (board.parent / "coax.intent.toml").write_text(intent, "utf-8")
        git(folder, "add", "-A")
        git(folder, "commit", "-q", "--allow-empty", "-m", what)
    return folder


@pytest.fixture
def compared(
    history: Path, monkeypatch: pytest.MonkeyPatch, capfdbinary: pytest.CaptureFixture[bytes]
) -> Iterator[Callable[[str, str], tuple[int, dict[str, Any]]]]:
    monkeypatch.chdir(history)

    def compare(old: str, new: str) -> tuple[int, dict[str, Any]]:
        status = run(["compare", f"{old}:{PATH}", f"{new}:{PATH}", "--as", "json"])
        out, err = capfdbinary.readouterr()
        assert not err, err.decode()
        return status, json.loads(out)

    yield compare


@pytest.mark.parametrize("number", range(1, len(COMMITS) + 1), ids=[commit[0] for commit in COMMITS])
def test_each_commit_is_reported_on_its_stage_and_nothing_else(
    number: int, compared: Callable[[str, str], tuple[int, dict[str, Any]]]
) -> None:
    _, _, edits, stages, fresh, cured = COMMITS[number - 1]
    last = len(COMMITS)
    status, found = compared(f"HEAD~{last - number + 1}", f"HEAD~{last - number}")
    assert {edit["part"]: set(edit["stages"]) for edit in found["edits"]} == edits
    own = {each["id"] for each in found["changed"] if each["kind"] == "stage" and each["how"] == "edited"}
    assert own == stages
    for each in found["changed"]:
        assert each["how"] in ("edited", "follows") and set(each["because"]) == edits.keys()
    assert {finding["rule"] for finding in found["new_findings"]} >= fresh
    assert all({*finding["subject"]} & {*stages, "coax", "filter"} for finding in found["new_findings"])
    assert bool(found["new_findings"]) == bool(fresh)
    assert {finding["rule"] for finding in found["cured"]} >= cured and bool(found["cured"]) == bool(cured)
    assert status == any(finding["severity"] == "must-fix" for finding in found["new_findings"])
    assert not found["conditions"] and not found["unjudged"]


def test_renumbering_moves_nothing(compared: Callable[[str, str], tuple[int, dict[str, Any]]]) -> None:
    status, found = compared("HEAD~6", "HEAD~5")
    bare = {old.removeprefix("X"): new.removeprefix("X") for old, new in NEW.items()}
    assert found["renumbered"] == {old: new for old, new in bare.items() if old != new}
    assert len(found["renumbered"]) >= 15
    assert status == 0 and found["edits"] == found["changed"] == found["new_findings"] == found["cured"] == []


def test_the_whole_history_at_once(compared: Callable[[str, str], tuple[int, dict[str, Any]]]) -> None:
    """C2 went and C91 came in its place: the same part under another reference."""
    _, found = compared("HEAD~10", "HEAD")
    assert found["renumbered"]["C2"] == "C91"
    values = {named("R7"), named("R4"), named("C3"), named("R10"), named("Q2")}
    assert {edit["part"] for edit in found["edits"]} == {*values, "C90"}
    assert {edit["part"] for edit in found["edits"] if edit["what"] == "added"} == {"C90"}
