"""A pipeline of invented reports stands in for the real one: these tests are about the command line alone."""

from __future__ import annotations

import sys
from collections.abc import Callable
from dataclasses import dataclass, field, replace
from datetime import date
from pathlib import Path
from types import ModuleType

import pytest

from checker.cli.main import run
from checker.netlist.limits import Reading
from checker.record import Report, WorkingLine
from checker.trouble import InputTrouble
from tests.record.invented import report, workings


@dataclass(frozen=True, slots=True, kw_only=True)
class Outcome:
    """What the pipeline returns."""

    report: Report
    workings: tuple[WorkingLine, ...]
    incomplete: bool


@dataclass(slots=True)
class Pipeline:
    """The stand-in. The netlist's text says what becomes of it: "bad", "crash", "clean" or anything else."""

    report: Report
    intents: list[Path | None]
    days: list[date | None] = field(default_factory=list)
    readings: list[Reading | None] = field(default_factory=list)

    def check_board(
        self,
        netlist: Path,
        intent: Path | None,
        *,
        reading: Reading | None = None,
        today: date | None = None,
    ) -> Outcome:
        self.intents.append(intent)
        self.readings.append(reading)
        self.days.append(today)
        text = netlist.read_text()
        if text == "bad":
            raise InputTrouble("expected a value\x1b[2J, got none", file=netlist.name, line=3)
        if text == "crash":
            raise ZeroDivisionError("in the\nkitchen")
        shown = replace(self.report, findings=()) if text == "clean" else self.report
        return Outcome(report=shown, workings=workings(), incomplete=shown.incomplete)

    def starter_intent(self, netlist: Path, reading: Reading | None = None) -> str:
        self.readings.append(reading)
        return f"# starter for {netlist.name}\n"


@pytest.fixture
def pipeline(monkeypatch: pytest.MonkeyPatch) -> Pipeline:
    """The stand-in, installed."""
    made = Pipeline(report=report(), intents=[], days=[])
    module = ModuleType("checker.pipeline")
    module.check_board = made.check_board  # type: ignore[attr-defined]
    module.starter_intent = made.starter_intent  # type: ignore[attr-defined]
    monkeypatch.setitem(sys.modules, "checker.pipeline", module)
    return made


@pytest.fixture
def board(tmp_path: Path) -> Callable[[str, str], str]:
    """Writes a netlist with a given name and text; its path."""

    def write(name: str, text: str) -> str:
        path = tmp_path / name
        path.write_text(text)
        return str(path)

    return write


@dataclass(frozen=True, slots=True, kw_only=True)
class Done:
    """What a call of the command line left behind."""

    status: int
    out: str
    err: str


@pytest.fixture
def call(capfdbinary: pytest.CaptureFixture[bytes]) -> Callable[..., Done]:
    """Runs the command line in this process as `main` would."""

    def run_it(*arguments: str) -> Done:
        status = run(arguments)
        out, err = capfdbinary.readouterr()
        return Done(status=status, out=out.decode("utf-8"), err=err.decode("utf-8"))

    return run_it
