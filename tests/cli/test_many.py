"""Many boards in one call: what is meant, workers, one combined report, folders of every form, and being killed."""

from __future__ import annotations

import contextlib
import io
import json
import os
import signal
import subprocess
import sys
import time
from collections.abc import Callable
from pathlib import Path

import pytest

from checker.cli import inputs
from checker.cli.main import run
from checker.cli.pool import Pool, workers
from checker.cli.progress import Progress
from checker.report.forms import FORMS
from checker.trouble import InputTrouble
from tests.cli.conftest import Done, Pipeline
from tests.compare.boards import SAMPLES, lay, text_of

Board = Callable[[str, str], str]
Call = Callable[..., Done]
RECEIVER = SAMPLES / "receiver_input" / "receiver_input.intent.toml"


def test_files_folders_and_patterns(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    for name in (
        "b10.net",
        "b2.cir",
        "sub/c.SP",
        "sub/deep/d.ckt",
        ".hidden/e.net",
        "f.txt",
        ".g.net",
        "x.intent.toml",
    ):
        path = tmp_path / name
        path.parent.mkdir(parents=True, exist_ok=True)
        path.write_text("")
    (tmp_path / "loop").symlink_to(tmp_path)
    monkeypatch.chdir(tmp_path)

    def meant(*arguments: str) -> list[str]:
        return [path.as_posix() for path in inputs.netlists(arguments)]

    assert meant(".") == ["b2.cir", "b10.net", "sub/c.SP", "sub/deep/d.ckt"]
    assert meant("f.txt") == ["f.txt"]
    assert meant("b10.net", "b2.cir", "./b10.net") == ["b10.net", "b2.cir"]
    assert meant("sub/**/*.ckt") == ["sub/deep/d.ckt"]
    for wrong in ("none.net", "*.none", ".hidden/none"):
        with pytest.raises(InputTrouble):
            meant(wrong)


def _square(number: int) -> int:
    if number == 3:
        os._exit(9)
    return number * number


def test_a_worker_that_dies_takes_its_own_task_alone() -> None:
    told: list[None] = []
    pool: Pool[int] = Pool(_square, lambda number, how: -number if "9" in how else 0, 2)
    assert pool.run(6, lambda: told.append(None)) == [0, 1, 4, -3, 16, 25]
    assert len(told) == 6


def test_no_more_workers_than_boards() -> None:
    assert (workers(None, 1), workers(8, 3), workers(2, 100)) == (1, 3, 2)


def stageproof(*arguments: str, cwd: Path) -> list[str]:
    """The command as a process of its own; the package is the one that this test imports."""
    home = str(Path(__file__).resolve().parents[2])
    code = f"import sys; sys.path.insert(0, {home!r}); from checker.cli.main import main; main()"
    assert cwd.is_dir()
    return [sys.executable, "-P", "-c", code, *arguments]


@pytest.fixture(scope="module")
def boards(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """Five boards, one of them unusable."""
    folder = tmp_path_factory.mktemp("many")
    for number in range(4):
        text = text_of("receiver_input").replace("receiver", f"receiver {number}", 1)
        lay(folder / "boards", text, RECEIVER, name=f"b{number}")
    (folder / "boards" / "bad.cir").write_text("bad\nQ1 a b\n.include gone.lib\n.subckt x\n", "utf-8")
    return folder


def test_one_combined_report_whatever_the_number_of_workers(boards: Path) -> None:
    done = [
        subprocess.run(
            stageproof("check", "boards", "--as", form, "--jobs", jobs, cwd=boards), cwd=boards, capture_output=True
        )
        for form, jobs in (("json", "1"), ("json", "2"), ("sarif", "2"), ("sarif", "2"))
    ]
    assert done[0].stdout == done[1].stdout != b""
    assert done[2].stdout == done[3].stdout != b""
    assert len({(each.returncode, each.stderr) for each in done}) == 1
    whole = json.loads(done[0].stdout)
    assert len(whole["reports"]) + len(whole["unusable"]) == 5


def test_every_form_into_a_folder(boards: Path) -> None:
    command = stageproof("check", "boards", "--out", "out/", "--gate", "never", cwd=boards)
    first = subprocess.run(command, cwd=boards, capture_output=True)
    assert not first.stdout
    files = {path.name: path.read_bytes() for path in (boards / "out").iterdir()}
    assert files.keys() == {f"stageproof{suffix}" for _, suffix in FORMS.values()}
    assert all(files.values())
    subprocess.run(command, cwd=boards, capture_output=True)
    assert {path.name: path.read_bytes() for path in (boards / "out").iterdir()} == files
    (boards / "out" / "stageproof.txt").unlink()
    (boards / "out" / "stageproof.txt").mkdir()
    blocked = subprocess.run(command, cwd=boards, capture_output=True)
    assert blocked.returncode == 2 and b"cannot write" in blocked.stderr
    (boards / "out" / "stageproof.txt").rmdir()


@pytest.mark.skipif(sys.platform == "win32", reason="no such signal")
@pytest.mark.parametrize("sent", [signal.SIGKILL, signal.SIGTERM, signal.SIGINT])
def test_killed_in_mid_run_leaves_no_half_written_file_and_no_worker(boards: Path, sent: signal.Signals) -> None:
    folder = boards / "killed"
    folder.mkdir(exist_ok=True)
    (folder / "stageproof.json").write_text("old")
    many = [str(path) for path in sorted((boards / "boards").glob("b?.cir"))]
    links = []
    for number in range(150):  # some ten seconds of work
        for path in many:
            link = folder / f"{number}-{Path(path).name}"
            with contextlib.suppress(FileExistsError):
                link.hardlink_to(path)
            links.append(str(link))
    before = {path.name for path in folder.iterdir()}
    command = stageproof("check", *links, "--out", str(folder), "--jobs", "2", cwd=boards)
    process = subprocess.Popen(command, stdout=subprocess.DEVNULL, stderr=subprocess.DEVNULL, start_new_session=True)
    time.sleep(1.5)
    assert process.poll() is None
    process.send_signal(sent)
    process.wait(30)
    assert {path.name for path in folder.iterdir()} == before
    assert (folder / "stageproof.json").read_text() == "old"
    end = time.monotonic() + 15
    while _alive(process.pid) and time.monotonic() < end:
        time.sleep(0.2)
    assert not _alive(process.pid)


def _alive(session: int) -> bool:
    """Whether any process of the session is left."""
    with contextlib.suppress(ProcessLookupError):
        os.killpg(session, 0)
        return True
    return False


def test_a_hostile_working_folder_is_not_imported(boards: Path) -> None:
    """Workers that are started anew must not take modules from the folder that holds the boards."""
    for name in ("multiprocessing", "checker", "numpy", "click", "sexpdata"):
        (boards / f"{name}.py").write_text("raise SystemExit('taken from the working folder')\n")
    done = subprocess.run(
        stageproof("check", "boards/b0.cir", "boards/b1.cir", "--jobs", "2", cwd=boards),
        cwd=boards,
        capture_output=True,
    )
    for name in ("multiprocessing", "checker", "numpy", "click", "sexpdata"):
        (boards / f"{name}.py").unlink()
    assert b"taken from" not in done.stderr and done.stdout.count(b"stages checked") == 2


def test_one_crash_among_several_keeps_the_rest(pipeline: Pipeline, board: Board, call: Call) -> None:
    paths = board("a.net", "clean"), board("b.net", "crash"), board("c.net", "bad")
    done = call("check", *paths, "--jobs", "1", "--as", "json")
    assert done.status == 3 and len(json.loads(done.out)["reports"]) == 1
    assert [entry["path"] for entry in json.loads(done.out)["unusable"]] == list(paths[1:])
    assert "b.net: internal failure, ZeroDivisionError" in done.err and "Traceback" not in done.err
    assert "Traceback" in call("--debug", "check", *paths, "--jobs", "1").err


def test_nothing_but_unusable_boards_is_still_a_combined_report(pipeline: Pipeline, board: Board, call: Call) -> None:
    done = call("check", board("a.net", "bad"), board("b.net", "bad"), "--as", "junit", "--jobs", "1")
    assert done.status == 2 and done.out.count("<error") == 2


def test_a_folder_of_one_board_is_several(pipeline: Pipeline, board: Board, call: Call) -> None:
    path = Path(board("a.net", "clean"))
    assert json.loads(call("check", str(path), "--as", "json").out)["schema"] == "stageproof-report/1"
    assert json.loads(call("check", str(path.parent), "--as", "json").out)["schema"] == "stageproof-reports/1"


def test_progress_only_on_a_terminal(monkeypatch: pytest.MonkeyPatch) -> None:
    class Terminal(io.StringIO):
        def isatty(self) -> bool:
            return True

    for stream, wanted in ((Terminal(), True), (io.StringIO(), False)):
        monkeypatch.setattr(sys, "stderr", stream)
        bar = Progress(2)
        bar.step()
        bar.end()
        assert ("1 of 2 boards" in stream.getvalue()) is wanted


def test_the_day_is_handed_on(pipeline: Pipeline, board: Board, call: Call) -> None:
    call("check", board("a.net", "x"), "--today", "2027-07-01")
    assert [str(day) for day in pipeline.days] == ["2027-07-01"]
    assert call("check", board("a.net", "x"), "--today", "soon").status == 2


def test_run_is_the_entry() -> None:
    assert run(["check", "--help"]) == 0
