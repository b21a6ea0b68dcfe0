"""The other commands, help, start-up, and a reader that goes away."""

from __future__ import annotations

import subprocess
import sys
from collections.abc import Callable
from pathlib import Path
from types import ModuleType, SimpleNamespace

import pytest

import checker
from checker.cards.types import Card
from checker.cli.main import COMMANDS, main
from checker.netlist.limits import Reading, ReadLimits
from checker.report.specs import render_specs
from checker.report.why import render_why
from tests.cli.conftest import Done, Pipeline
from tests.record.invented import report, workings

Board = Callable[[str, str], str]
Call = Callable[..., Done]


def test_specs(pipeline: Pipeline, board: Board, call: Call) -> None:
    done = call("specs", board("a.net", "x"))
    assert done == Done(status=0, out=render_specs(report(), width=100, colour=False), err="")


def test_why(pipeline: Pipeline, board: Board, call: Call) -> None:
    done = call("why", board("a.net", "x"), "Q1")
    expected = render_why(report(), "Q1", workings(), width=100, colour=False)
    assert done == Done(status=0, out=expected, err="")
    lost = call("why", board("a.net", "x"), "Q77")
    assert lost.status == 2 and lost.err.count("\n") == 1 and "it knows J1, Q1, Q2, Q10" in lost.err


def test_intent(pipeline: Pipeline, board: Board, call: Call, tmp_path: Path) -> None:
    assert call("intent", board("a.net", "x")).out == "# starter for a.net\n"
    out = tmp_path / "a.intent.toml"
    assert call("intent", board("a.net", "x"), "--out", str(out)).status == 0
    assert out.read_text() == "# starter for a.net\n"


def test_rules(call: Call, monkeypatch: pytest.MonkeyPatch) -> None:
    module = ModuleType("checker.judge.discover")
    rule = SimpleNamespace(id="a-rule", summary="Sums up.", theme="bias", weight="note", bench="", source="", limits=())
    module.load_rules = lambda: SimpleNamespace(rules=(rule,))  # type: ignore[attr-defined]
    monkeypatch.setitem(sys.modules, "checker.judge.discover", module)
    assert call("rules").out == "Bias\n  a-rule  (note)\n    Sums up.\n"


def test_parts(call: Call, monkeypatch: pytest.MonkeyPatch) -> None:
    module = ModuleType("checker.cards.find")
    card = Card(name="XY1", kind="npn", model={}, source="invented")
    module.find_card = lambda value: card if value == "XY1B" else None  # type: ignore[attr-defined]
    module.all_names = lambda: ("XY1", "XY2")  # type: ignore[attr-defined]
    monkeypatch.setitem(sys.modules, "checker.cards.find", module)
    assert call("parts").out == "XY1\nXY2\n"
    assert call("parts", "XY1B").out.startswith("XY1  npn\n")
    lost = call("parts", "ZZ9")
    assert lost.status == 2 and "no card for 'ZZ9'" in lost.err


def test_help_lists_every_command_and_no_other(call: Call) -> None:
    done = call("--help")
    assert done.status == 0
    listed = [line.split()[0] for line in done.out.partition("Commands:\n")[2].splitlines()]
    assert listed == list(COMMANDS) == ["check", "specs", "why", "compare", "intent", "rules", "parts"]


def test_no_command_prints_help_to_standard_error(call: Call) -> None:
    done = call()
    assert done.status == 2 and done.out == "" and "Commands:" in done.err


def test_version(call: Call) -> None:
    assert call("--version") == Done(status=0, out=f"stageproof {checker.__version__}\n", err="")


@pytest.mark.parametrize("arguments", [["--help"], ["check", "--help"], ["--version"]])
def test_help_does_not_load_numpy(arguments: list[str]) -> None:
    code = (
        "import sys; from checker.cli.main import run; status = run(sys.argv[1:]);"
        "sys.exit(status or sum(name in sys.modules for name in ('numpy', 'difflib')))"
    )
    done = subprocess.run([sys.executable, "-c", code, *arguments], capture_output=True, text=True)
    assert (done.returncode, done.stderr) == (0, "")


def test_main_leaves_with_the_status() -> None:
    with pytest.raises(SystemExit) as left:
        main(["--version"])
    assert left.value.code == 0


def test_interruption_from_the_keyboard(pipeline: Pipeline, board: Board, call: Call) -> None:
    def stop(*_: object, **__: object) -> None:
        raise KeyboardInterrupt

    sys.modules["checker.pipeline"].check_board = stop  # type: ignore[attr-defined]
    assert call("check", board("a.net", "x")).status == 130


@pytest.mark.skipif(sys.platform == "win32", reason="pipes break differently")
def test_a_reader_that_goes_away_is_no_failure() -> None:
    code = (
        "import sys; from checker.cli.output import deliver;"
        "sys.stdin.read(); deliver('x' * 1_000_000, None); sys.exit(1)"
    )
    child = subprocess.Popen(
        [sys.executable, "-c", code], stdin=subprocess.PIPE, stdout=subprocess.PIPE, stderr=subprocess.PIPE
    )
    assert child.stdout and child.stdin and child.stderr
    child.stdout.close()
    child.stdin.close()
    with child.stderr:
        assert child.stderr.read() == b""
    assert child.wait(timeout=60) == 1


@pytest.mark.parametrize("command", [["check"], ["specs"], ["why"], ["intent"]])
def test_every_command_that_reads_a_netlist_takes_folders_and_limits(
    command: list[str], pipeline: Pipeline, board: Board, call: Call, tmp_path: Path
) -> None:
    for name in ("one", "two"):
        (tmp_path / name).mkdir()
    subject = ["Q1"] if command == ["why"] else []
    folders = ["--include-from", str(tmp_path / "one"), "--include-from", str(tmp_path / "two")]
    bounds = {"bytes": 5, "parts": 4, "depth": 3, "elements": 2, "steps": 1}
    limits = [word for name, bound in bounds.items() for word in (f"--most-{name}", str(bound))]
    done = call(*command, board("a.net", "clean"), *subject, *folders, *limits)
    assert done.status in (0, 1), done.err
    assert pipeline.readings == [
        Reading(
            folders=(tmp_path / "one", tmp_path / "two"),
            limits=ReadLimits(**bounds),
        )
    ]
    pipeline.readings.clear()
    call(*command, board("a.net", "clean"), *subject)
    assert pipeline.readings == [Reading()]


@pytest.mark.parametrize(
    "arguments", [["--most-depth", "0"], ["--most-depth", "1001"], ["--most-bytes", "x"], ["--include-from", "none"]]
)
def test_folders_and_limits_that_cannot_be(arguments: list[str], pipeline: Pipeline, board: Board, call: Call) -> None:
    done = call("check", board("a.net", "x"), *arguments)
    assert (done.status, done.out, pipeline.readings) == (2, "", [])


@pytest.mark.parametrize(
    ("text", "option", "bound"),
    [
        ("* t\nR1 a 0 1k\nR2 a 0 1k\n.end\n", "bytes", 20),
        ("* t\nR1 a 0 1k\nR2 a 0 1k\n.end\n", "parts", 1),
        ("* t\n.subckt s a\nR1 a 0 1\nR2 a 0 1\n.ends\nX1 a s\n.end\n", "elements", 2),
        ("* t\nR1 a 0 {((((1))))}\n.end\n", "depth", 2),
        ("* t\nR1 a 0 {1+1+1+1}\n.end\n", "steps", 3),
        ('(export (version "E") (components (comp (ref "R1"))))', "depth", 2),
        ('(export (version "E") (components (comp (ref "R1")) (comp (ref "R2"))))', "parts", 1),
    ],
)
def test_the_message_of_a_limit_names_the_option_that_raises_it(
    text: str, option: str, bound: int, board: Board, call: Call
) -> None:
    path = board("a.net", text)
    done = call("intent", path, f"--most-{option}", str(bound))
    assert (done.status, done.out) == (2, "")
    assert f"limit of {bound};" in done.err and f"--most-{option} raises it" in done.err
    assert done.err.count("\n") == 1
    assert call("intent", path, f"--most-{option}", "1000").status == 0


CARDS = '[[card]]\nname = "HOUSE-1"\nlike = "BC547"\nv_max_v = 61\nsource = "our drawing"\n'


def test_own_cards_by_option(call: Call, tmp_path: Path) -> None:
    (tmp_path / "ours.toml").write_text(CARDS, "utf-8")
    shown = call("parts", "HOUSE-1", "--cards", str(tmp_path / "ours.toml"))
    assert shown.status == 0 and "61" in shown.out and "our drawing" in shown.out
    assert call("parts", "--cards", str(tmp_path / "ours.toml")).out.startswith("HOUSE-1\n")
    (tmp_path / "board.cir").write_text(
        "* t\nV1 VCC 0 9\nRB VCC B 1meg\nRC VCC C 4k7\nQ1 C B 0 HOUSE-1\n.end\n", "utf-8"
    )
    without, given = (
        call("check", str(tmp_path / "board.cir"), *more) for more in ((), ("--cards", str(tmp_path / "ours.toml")))
    )
    assert "1 of 1 stages" not in without.out and "1 of 1 stages" in given.out
    broken = call("specs", str(tmp_path / "board.cir"), "--cards", str(tmp_path / "board.cir"))
    assert broken.status == 2 and broken.err.count("\n") == 1 and "TOML" in broken.err


@pytest.mark.parametrize(
    ("text", "lines"),
    [
        ("4k7", ["4k7 as a resistor: 4.7 kΩ"]),
        ("18k1%", ["18k1% as a resistor: 18 kΩ, ±1 %"]),
        ("10uF/25V", ["10uF/25V as a capacitor: 10 µF, 25 V"]),
        ("100n", ["100n as a capacitor: 100 nF", "100n as a coil: 100 nH"]),
    ],
)
def test_how_a_value_is_read(call: Call, text: str, lines: list[str]) -> None:
    assert call("parts", text).out.splitlines() == lines


@pytest.mark.parametrize(("text", "hint"), [("MMBT39O4", "did you mean 'MMBT3904'"), ("QQQQ", "lists the names known")])
def test_a_part_that_is_not_known(call: Call, text: str, hint: str) -> None:
    lost = call("parts", text)
    assert lost.status == 2 and hint in lost.err and lost.err.count("\n") == 1
