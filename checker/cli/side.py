"""One side of a comparison: a netlist, a JSON report, or REVISION:PATH of either."""

from __future__ import annotations

import contextlib
import datetime
from dataclasses import replace
from pathlib import Path

from checker.cli.revision import Revision, find_revision, lay_out
from checker.netlist.limits import Reading
from checker.record import Report
from checker.trouble import InputTrouble

MOST_BYTES = 100_000_000
"""A larger JSON report is none of ours."""


def read_side(text: str, intent: Path | None, today: datetime.date | None, reading: Reading) -> Report:
    """The report that `text` names, made from the netlist where it is no report yet.

    A file of that name counts before a revision. Raises InputTrouble for what is neither.
    """
    path = Path(text)
    if path.is_file():
        return _of_file(path, intent, today, reading)
    revision = find_revision(text)
    if revision is not None:
        return _of_revision(revision, intent, today, reading)
    raise InputTrouble("no such file; give a netlist, a JSON report, or REVISION:PATH", file=text)


def _of_file(path: Path, intent: Path | None, today: datetime.date | None, reading: Reading) -> Report:
    if _is_json(path):
        return read_report(path)
    from checker.pipeline import check_board

    return check_board(path, intent, today=today, reading=reading).report


def read_report(path: Path) -> Report:
    """The report in a JSON file. Raises InputTrouble where it holds none, or several."""
    from checker.record.read import from_json

    return from_json(_text(path), file=path.as_posix())


def read_reports(path: Path) -> tuple[Report, ...]:
    """The report or reports in a JSON file. Raises InputTrouble where it holds none."""
    from checker.record.read import several_from_json

    return several_from_json(_text(path), file=path.as_posix())


def _text(path: Path) -> str:
    try:
        if path.stat().st_size > MOST_BYTES:
            raise InputTrouble("is too large for a report", file=path.as_posix())
        return path.read_text("utf-8-sig")
    except OSError as problem:
        raise InputTrouble(f"cannot be read: {problem.strerror}", file=path.as_posix()) from None
    except UnicodeDecodeError:
        raise InputTrouble("is no UTF-8 text, so no report", file=path.as_posix()) from None


def _is_json(path: Path) -> bool:
    """By content: no netlist begins with a brace."""
    with path.open("rb") as stream:
        return stream.read(4096).removeprefix(b"\xef\xbb\xbf").lstrip()[:1] == b"{"


def _of_revision(revision: Revision, intent: Path | None, today: datetime.date | None, reading: Reading) -> Report:
    """Read in a folder laid out as the repository, so that every path in the report is one of the repository's.

    Folders named by --include-from are those of the working tree.
    """
    cards = None if reading.cards is None else reading.cards.resolve()
    there = replace(reading, folders=tuple(folder.resolve() for folder in reading.folders), cards=cards)
    import tempfile

    with tempfile.TemporaryDirectory(prefix="stageproof-") as folder:
        wanted = None if intent is None else intent.as_posix()
        netlist, said = lay_out(revision, Path(folder), wanted)
        with contextlib.chdir(folder):
            return _of_file(netlist, said, today, there)
