"""Equal input gives equal bytes; the order of lines and the names of nets carry no meaning."""

from __future__ import annotations

import os
import subprocess
import sys
from pathlib import Path

import pytest

from checker.record.write import to_json
from checker.report.text import render as render_text
from tests.boards.test_planted import PLANTED
from tests.boards.writer import SAMPLES, kicad_export
from tests.pipeline.formats import as_data, checked, differences
from tests.whole import intent_text, outcome_from, written

ROOT = SAMPLES.parent
SCRIPT = """import sys
from pathlib import Path
from checker.pipeline import check_board
from checker.record.write import to_json
sys.stdout.write(to_json(check_board(Path(sys.argv[1]), None).report))
"""


def test_two_processes_write_the_same_bytes() -> None:
    """With different seeds of Python's hashes, so that no order of a set shows."""
    texts = set()
    for seed in ("1", "2"):
        done = subprocess.run(
            [sys.executable, "-c", SCRIPT, "sample_schematics/audio_follower/audio_follower.cir"],
            cwd=ROOT,
            env={**os.environ, "PYTHONHASHSEED": seed, "PYTHONPATH": str(ROOT)},
            capture_output=True,
            check=True,
        )
        texts.add(done.stdout)
    assert len(texts) == 1
    assert len(texts.pop()) > 5000


def test_twice_in_one_process() -> None:
    path = PLANTED / "bypass-loss.cir"
    one, other = checked(path), checked(path)
    assert to_json(one.report) == to_json(other.report)
    assert one.workings == other.workings


@pytest.mark.parametrize("board", ["audio_follower", "coax_cascade", "relay_driver"])
def test_reordered_lines_give_the_same_report(board: str, tmp_path: Path) -> None:
    """Lines backwards: other node numbers, other order of sums. Discrete answers stay; numbers to the certificate."""
    folder = SAMPLES / board
    first, *lines = (folder / f"{board}.cir").read_text("utf-8").splitlines()
    parts = [line for line in lines if line and not line.startswith((".", "*"))]
    intent = (folder / f"{board}.intent.toml").read_text("utf-8")
    path = written(tmp_path, "\n".join([first, *reversed(parts), ".end\n"]), intent, f"{board}.cir")
    one, other = as_data(checked(folder / f"{board}.cir")), as_data(checked(path))
    apart = set(differences(rounded(one), rounded(other)))
    elsewhere = ("netlist.", "conditions.intent", "findings.limit.source")
    assert {p for p in apart if not p.startswith(elsewhere) and ".location." not in p} == set()


def rounded(value: object) -> object:
    """Numbers to six digits, and those of the certificate (arithmetic's own noise) away."""
    if isinstance(value, dict):
        return {k: rounded(v) for k, v in value.items() if k not in ("kcl", "step_v", "condition")}
    if isinstance(value, list):
        return [rounded(item) for item in value]
    if isinstance(value, float):
        return float(f"{value:.5e}") if abs(value) > 1e-9 else 0.0
    return value


HOSTILE = ("[bold]", "D[/clk]", "<script>", "a\x1b[31mb", "%s{0}", "../../etc", "\u202eabc", "$(id)", "=1+1", "tür")


@pytest.mark.parametrize("name", HOSTILE)
def test_hostile_net_names_pass_through_as_text(name: str, tmp_path: Path) -> None:
    """In an export, where a name may hold anything."""
    text = (PLANTED / "bypass-loss.cir").read_text("utf-8")
    net = "EMITTERNET"
    export = kicad_export("board", text.replace(" EB ", f" {net} ")).replace(net, name.replace("\\", "\\\\"))
    intent = (PLANTED / "bypass-loss.intent.toml").read_text("utf-8")
    report = checked(written(tmp_path, export, intent, "board.net")).report
    assert name in report.nets
    assert [f.rule for f in report.findings] == ["bypass-loss"]
    shown = render_text(report, width=100, colour=False)
    assert "\x1b" not in shown
    assert "\u202e" not in shown


@pytest.mark.parametrize("ref", ["Q[1]", "Q<b>", "Q%d", "Q1:2", "Q1+Q1", "Q1->Q2", "Q/1", "Q~1"])
def test_hostile_part_names(ref: str) -> None:
    """A reference with the signs that ids of groups, gains and paths are made with."""
    text = "V1 VCC 0 12\nR1 VCC B 47k\nR2 B 0 10k\nRC VCC C 4.7k\nRE E 0 1k\nCE E 0 1000u\nC1 IN B 10u\nC2 C OUT 10u\n"
    intent = intent_text(("IN", "input", "600 ohm"), ("OUT", "output", "10 kohm"))
    report = outcome_from(text + f"{ref} C B E QN", intent).report
    assert not report.incomplete
    assert [stage.device.upper() for stage in report.stages] == [ref.upper()]
    assert report.stages[0].configuration == "common-emitter"
