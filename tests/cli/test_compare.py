"""`stageproof compare`: sides, forms, gate, and revisions of hostile repositories."""

from __future__ import annotations

import json
import re
import subprocess
from collections.abc import Callable
from pathlib import Path

import pytest

from checker.cli import revision
from checker.cli.options import COMPARISON_FORMS
from checker.cli.revision import find_revision
from checker.report.comparison import FORMS
from checker.trouble import InputTrouble
from tests.cli.conftest import Done
from tests.compare.boards import SAMPLES, lay, text_of

Call = Callable[..., Done]
INTENT = SAMPLES / "receiver_input" / "receiver_input.intent.toml"
TEXT = text_of("receiver_input")


def git(*arguments: str) -> None:
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
    subprocess.run(["git", *name, *arguments], check=True, capture_output=True)


@pytest.fixture
def repository(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    """Two commits to boards/board.cir, and a third board that includes a file beside it."""
    monkeypatch.chdir(tmp_path)
    lay(tmp_path / "boards", TEXT, INTENT)
    (tmp_path / "boards" / "models.lib").write_text(".model own npn (bf=200)\n")
    lay(tmp_path / "boards", TEXT.replace(".end", ".include models.lib\n.end"), INTENT, name="other")
    git("init", "-q")
    git("add", "-A")
    git("commit", "-qm", "first")
    lay(tmp_path / "boards", re.sub(r"(?m)^R1 .*\n", "", TEXT), INTENT)
    git("add", "-A")
    git("commit", "-qm", "second")
    return tmp_path


def test_forms_agree_with_the_options() -> None:
    assert tuple(FORMS) == COMPARISON_FORMS


@pytest.mark.parametrize("form", COMPARISON_FORMS)
def test_every_form_names_part_and_stage(form: str, repository: Path, call: Call) -> None:
    sides = "HEAD~1:boards/board.cir", "HEAD:boards/board.cir"
    done = call("compare", *sides, "--as", form)
    assert "R1" in done.out and "Q1" in done.out and "removed" in done.out and done.err == ""
    assert done == call("compare", *sides, "--as", form)


def test_netlist_report_and_revision_are_one(repository: Path, call: Call) -> None:
    call("check", "boards/board.cir", "--as", "json", "--out", "new.json")
    found = []
    for new in ("boards/board.cir", "new.json", "HEAD:boards/board.cir", "HEAD:./boards/board.cir"):
        whole = json.loads(call("compare", "HEAD~1:boards/board.cir", new, "--as", "json").out)
        whole["new"].pop("name")
        found.append(whole)
    assert found[0] == found[1] == found[2] == found[3] and found[0]["edits"]
    git("add", "new.json")
    git("commit", "-qm", "third")
    assert json.loads(call("compare", "HEAD:new.json", "new.json", "--as", "json").out)["edits"] == []


def test_the_gate_is_on_new_findings(repository: Path, call: Call) -> None:
    """Without its emitter resistor Q1 has no current; what was wrong in both is nobody's fault now."""
    old, new = "HEAD~1:boards/board.cir", "HEAD:boards/board.cir"
    assert json.loads(call("compare", old, new, "--as", "json").out)["new_findings"]
    assert call("compare", old, new).status == 1
    assert call("compare", old, new, "--gate", "never").status == 0
    assert call("compare", new, new).status == 0
    assert call("check", "boards/board.cir").status == 1
    back = call("compare", new, old)
    assert back.status == 0 and "\nCured\n" in back.out


def test_from_a_folder_of_the_repository(repository: Path, call: Call, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(repository / "boards")
    for path in ("board.cir", "./board.cir", "boards/board.cir", "../boards/board.cir"):
        assert call("compare", f"HEAD:{path}", f"HEAD:{path}").status == 0


def test_includes_and_intent_are_those_of_the_revision(repository: Path, call: Call) -> None:
    (repository / "boards" / "models.lib").unlink()
    (repository / "boards" / "other.intent.toml").unlink()
    report = json.loads(call("compare", "HEAD:boards/other.cir", "HEAD:boards/other.cir", "--as", "json").out)
    assert report["old"]["checked"] == 1
    (repository / "elsewhere.toml").write_text('[band]\nlow = "1 kHz"\nhigh = "2 kHz"\n')
    done = call("compare", "HEAD:boards/other.cir", "boards/board.cir", "--intent", "elsewhere.toml")
    assert done.status == 2 and "elsewhere.toml" in done.err


@pytest.mark.parametrize(
    ("side", "told"),
    [
        ("HEAD:none.cir", "there is no file 'none.cir' in revision 'HEAD'"),
        ("nobody:boards/board.cir", "git knows no revision 'nobody'"),
        ("--help:x", "No such option"),
        ("-x:boards/board.cir", "No such option"),
        ("none.cir", "no such file; give a netlist, a JSON report, or REVISION:PATH"),
        ("HEAD:boards", "there is no file 'boards'"),
        ("HEAD:../../etc/passwd", "there is no file"),
        ("HEAD:/etc/passwd", "there is no file"),
        ("HEAD:", "no such file"),
        (":x", "no such file"),
    ],
)
def test_sides_that_are_none(side: str, told: str, repository: Path, call: Call) -> None:
    done = call("compare", side, "boards/board.cir")
    assert done.status == 2 and told in done.err and done.err.count("\n") == 1 and done.out == ""


def test_a_revision_is_never_an_option_of_git(repository: Path) -> None:
    for name in ("-x", "--output=stolen", "--help"):
        with pytest.raises(InputTrouble, match="is no revision"):
            find_revision(f"{name}:boards/board.cir")
    for text in ("HEAD --output=x:boards/board.cir", "HEAD\n:boards/board.cir", "$(touch stolen):boards/board.cir"):
        with pytest.raises(InputTrouble, match="knows no revision"):
            find_revision(text)
    assert not (repository / "stolen").exists()


def test_without_git_or_repository(tmp_path: Path, monkeypatch: pytest.MonkeyPatch, call: Call) -> None:
    monkeypatch.chdir(tmp_path)
    monkeypatch.setenv("GIT_CEILING_DIRECTORIES", str(tmp_path.parent))
    done = call("compare", "HEAD:a", "HEAD:a")
    assert done.status == 2 and "needs a git repository" in done.err
    monkeypatch.setenv("PATH", str(tmp_path))
    done = call("compare", "HEAD:a", "HEAD:a")
    assert done.status == 2 and "git, which is not installed" in done.err


def test_links_in_a_revision_are_not_followed(repository: Path, call: Call) -> None:
    (repository / "secret.cir").write_text(TEXT)
    (repository / "boards" / "link.cir").symlink_to("../secret.cir")
    (repository / "boards" / "link.intent.toml").symlink_to("/etc/passwd")
    git("add", "boards")
    git("commit", "-qm", "link")
    done = call("compare", "HEAD:boards/link.cir", "HEAD:boards/board.cir")
    assert done.status == 2 and "is no plain file" in done.err


def test_paths_of_a_hostile_tree_stay_inside(tmp_path: Path) -> None:
    assert revision._normal(revision.PurePosixPath("a/../../b")) is None
    assert revision._normal(revision.PurePosixPath("/etc/passwd")) is None
    (tmp_path / "out").mkdir()
    (tmp_path / "in").mkdir()
    (tmp_path / "in" / "link").symlink_to(tmp_path / "out")
    with pytest.raises(InputTrouble, match="inside the repository"):
        revision._write(tmp_path / "in", revision.PurePosixPath("link/x"), b"")


def test_what_belongs_to_an_export_comes_with_it_and_nothing_else(repository: Path) -> None:
    """An export includes nothing, so of its folder only the files that belong to it are read."""
    for name in ("x.net", "x.intent.toml", "intent.toml", "x.cards.toml", "cards.toml", "y.net", "y.cards.toml"):
        (repository / "boards" / name).write_text("(export)")
    git("add", "-A")
    git("commit", "-qm", "exports")
    found = find_revision("HEAD:boards/x.net")
    assert found is not None
    assert revision.lay_out(found, repository / "there", None) == (Path("boards/x.net"), None)
    laid = {path.name for path in (repository / "there" / "boards").iterdir()}
    assert laid == {"x.net", "x.intent.toml", "intent.toml", "x.cards.toml", "cards.toml"}


def test_tolerance(repository: Path, call: Call) -> None:
    lay(repository, TEXT, INTENT, name="a")
    lay(repository, TEXT.replace("R4 VF COL1 4.7k", "R4 VF COL1 4.8k"), INTENT, name="b")

    def moved(*arguments: str) -> set[str]:
        whole = json.loads(call("compare", "a.cir", "b.cir", "--as", "json", *arguments).out)
        assert [edit["part"] for edit in whole["edits"]] == ["R4"]
        return {figure["quantity"] for each in whole["changed"] for figure in each["figures"]}

    assert "output_impedance_ohm" in moved() and "ic_a" not in moved()
    assert moved("--tolerance", "3") == set() != moved("--tolerance", "0.01") > moved()
    assert call("compare", "a.cir", "b.cir", "--tolerance", "101").status == 2
