"""`stageproof check`: forms, several netlists, --out, and every exit status."""

from __future__ import annotations

import json
import os
import stat
import sys
from collections.abc import Callable
from dataclasses import replace
from pathlib import Path

import jsonschema  # type: ignore[import-untyped]
import pytest

from checker.record import Checked
from checker.record.describe import SHIPPED
from checker.record.write import to_json
from checker.report.text import render
from tests.cli.conftest import Done, Pipeline
from tests.record.invented import report

Board = Callable[[str, str], str]
Call = Callable[..., Done]


def test_text_to_standard_output(pipeline: Pipeline, board: Board, call: Call) -> None:
    done = call("check", board("a.net", "x"))
    assert done == Done(status=1, out=render(report(), width=100, colour=False), err="")


def test_json_is_the_report_and_keeps_the_schema(pipeline: Pipeline, board: Board, call: Call) -> None:
    done = call("check", board("a.net", "x"), "--as", "json")
    assert done.out == to_json(report()) + "\n"
    jsonschema.validate(json.loads(done.out), json.loads(SHIPPED.read_text("utf-8")))


@pytest.mark.parametrize(
    ("arguments", "text", "status"),
    [
        ((), "x", 1),
        ((), "clean", 0),
        (("--gate", "review"), "x", 1),
        (("--gate", "note"), "x", 1),
        (("--gate", "never"), "x", 0),
        (("--gate", "never", "--require-checked", "75"), "x", 0),
        (("--gate", "never", "--require-checked", "76"), "x", 1),
        (("--gate", "sometimes"), "x", 2),
        (("--require-checked", "101"), "x", 2),
        (("--as", "papyrus"), "x", 2),
        (("--since", "old.json"), "x", 2),
        ((), "bad", 2),
        ((), "crash", 3),
    ],
)
def test_exit_status(
    arguments: tuple[str, ...], text: str, status: int, pipeline: Pipeline, board: Board, call: Call
) -> None:
    assert call("check", board("a.net", text), *arguments).status == status


def test_nothing_checked_is_a_failure(pipeline: Pipeline, board: Board, call: Call) -> None:
    pipeline.report = replace(report(), checked=Checked(stages=0, of=4), findings=())
    assert call("check", board("a.net", "x"), "--gate", "never").status == 1
    pipeline.report = replace(report(), checked=Checked(stages=0, of=0), findings=())
    assert call("check", board("a.net", "x"), "--require-checked", "100").status == 0


def test_incomplete_report_is_written_and_is_status_3(pipeline: Pipeline, board: Board, call: Call) -> None:
    pipeline.report = replace(report(), incomplete=True, faults=("rule x: boom",))
    done = call("check", board("a.net", "x"))
    assert done.status == 3 and "INCOMPLETE" in done.out and done.err == ""


def test_unusable_input_is_one_line(pipeline: Pipeline, board: Board, call: Call) -> None:
    done = call("check", board("a.net", "bad"))
    assert done == Done(status=2, out="", err="stageproof: a.net:3: expected a value<U+001B>[2J, got none\n")


def test_internal_failure_is_one_line_and_debug_shows_more(
    pipeline: Pipeline, board: Board, call: Call, monkeypatch: pytest.MonkeyPatch
) -> None:
    path = board("a.net", "crash")
    done = call("check", path)
    assert (done.status, done.out) == (3, "")
    assert done.err.startswith("stageproof: internal failure, ZeroDivisionError: in the<U+000A>kitchen; --debug")
    assert done.err.count("\n") == 1
    assert "Traceback" in call("--debug", "check", path).err
    monkeypatch.setenv("STAGEPROOF_DEBUG", "1")
    assert "Traceback" in call("check", path).err


def test_calls_that_cannot_be_used(call: Call, board: Board, tmp_path: Path) -> None:
    (tmp_path / "empty").mkdir()
    for arguments, told in (
        (("check",), "Missing argument 'NETLIST...'"),
        (("chek",), "No such command 'chek'"),
        (("check", "absent.net"), "absent.net: does not exist"),
        (("check", "absent*.net"), "absent*.net: no file matches this pattern"),
        (("check", str(tmp_path / "empty")), "no netlist in this folder"),
        (("check", board("a.net", "x"), "--as", "papyrus"), "not one of 'text', 'json'"),
        (("check", board("a.net", "x"), "--intent", "absent"), "'absent' does not exist"),
    ):
        done = call(*arguments)
        assert (done.status, done.out) == (2, "")
        assert done.err.startswith("stageproof: ") and told in done.err
        assert done.err.count("\n") == 1


def test_several_netlists_as_text(pipeline: Pipeline, board: Board, call: Call) -> None:
    paths = board("a.net", "clean"), board("b.net", "bad"), board("c.net", "clean")
    done = call("check", *paths, "--jobs", "1")
    one = render(replace(report(), findings=()), width=100, colour=False)
    assert done.status == 2
    assert done.out == one + "\n" + one
    assert done.err.startswith("stageproof: b.net:3: ")


def test_several_netlists_as_json(pipeline: Pipeline, board: Board, call: Call) -> None:
    done = call("check", board("a.net", "x"), board("b.net", "clean"), "--as", "json", "--jobs", "1")
    whole = json.loads(done.out)
    assert done.status == 1 and whole["schema"] == "stageproof-reports/1"
    assert [len(each["findings"]) for each in whole["reports"]] == [3, 0]
    assert whole["unusable"] == []


def test_intent_is_handed_on(pipeline: Pipeline, board: Board, call: Call) -> None:
    intent = board("i.toml", "")
    call("check", board("a.net", "x"), "--intent", intent)
    call("check", board("a.net", "x"))
    assert pipeline.intents == [Path(intent), None]


def test_out_is_written_whole(pipeline: Pipeline, board: Board, call: Call, tmp_path: Path) -> None:
    out = tmp_path / "r.json"
    out.write_text("old")
    out.chmod(0o640)
    done = call("check", board("a.net", "x"), "--as", "json", "--out", str(out))
    assert done == Done(status=1, out="", err="")
    assert out.read_text("utf-8") == to_json(report()) + "\n"
    assert stat.S_IMODE(out.stat().st_mode) == 0o640
    assert sorted(path.name for path in tmp_path.iterdir()) == ["a.net", "r.json"]


def test_new_out_has_the_usual_permissions(pipeline: Pipeline, board: Board, call: Call, tmp_path: Path) -> None:
    plain = tmp_path / "plain"
    plain.write_text("")
    call("check", board("a.net", "x"), "--out", str(tmp_path / "r.txt"))
    assert (tmp_path / "r.txt").stat().st_mode == plain.stat().st_mode


def test_out_through_a_link_keeps_the_link(pipeline: Pipeline, board: Board, call: Call, tmp_path: Path) -> None:
    (tmp_path / "real").write_text("old")
    (tmp_path / "link").symlink_to(tmp_path / "real")
    call("check", board("a.net", "x"), "--out", str(tmp_path / "link"))
    assert (tmp_path / "link").is_symlink() and "stages checked" in (tmp_path / "real").read_text("utf-8")


def test_unwritable_out_is_one_line_and_leaves_nothing(
    pipeline: Pipeline, board: Board, call: Call, tmp_path: Path
) -> None:
    done = call("check", board("a.net", "x"), "--out", str(tmp_path / "no" / "r.txt"))
    assert done.status == 2 and done.out == ""
    assert done.err.endswith("r.txt: cannot write the report: No such file or directory\n")
    assert [path.name for path in tmp_path.iterdir()] == ["a.net"]


def test_a_failed_write_leaves_the_old_file(
    pipeline: Pipeline, board: Board, call: Call, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    out = tmp_path / "r.txt"
    out.write_text("old")

    def full(*_: object) -> None:
        raise OSError(28, "No space left on device")

    monkeypatch.setattr(Path, "replace", full)
    done = call("check", board("a.net", "x"), "--out", str(out))
    assert done.status == 2 and "No space left" in done.err
    assert out.read_text() == "old"
    assert sorted(path.name for path in tmp_path.iterdir()) == ["a.net", "r.txt"]


def test_out_never_overwrites_an_input(pipeline: Pipeline, board: Board, call: Call) -> None:
    path, intent = board("a.net", "x"), board("i.toml", "")
    for out in (path, intent):
        done = call("check", path, "--intent", intent, "--out", out)
        assert done.status == 2 and "would be overwritten" in done.err
    assert Path(path).read_text() == "x"


@pytest.mark.skipif(sys.platform == "win32", reason="no such device")
def test_out_to_a_device_writes_into_it(pipeline: Pipeline, board: Board, call: Call) -> None:
    assert call("check", board("a.net", "x"), "--out", os.devnull).status == 1
    assert not Path(os.devnull).is_file()


def test_colour_and_width(pipeline: Pipeline, board: Board, call: Call, monkeypatch: pytest.MonkeyPatch) -> None:
    path = board("a.net", "x")
    painted = call("check", path, "--colour", "always", "--width", "80").out
    assert painted == render(report(), width=80, colour=True)
    assert "\x1b" not in call("check", path, "--colour", "never").out
    assert call("check", path, "--width", "10").status == 2
