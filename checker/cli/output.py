"""Where a report goes: standard output, or a file that is written whole or not at all."""

from __future__ import annotations

import contextlib
import os
import sys
from collections.abc import Mapping
from pathlib import Path

import click

from checker.trouble import InputTrouble

WIDE, NARROW = 100, 80
"""Columns of a report: as wide as the terminal between these; the wider where there is no terminal."""


def columns(asked: int | None) -> int:
    """The width of a line: as asked, else from the terminal."""
    if asked is not None:
        return asked
    return min(max(_terminal(), NARROW), WIDE)


def _terminal() -> int:
    """Columns of the terminal that standard output is, WIDE where it is none."""
    with contextlib.suppress(OSError, ValueError):
        return os.get_terminal_size(sys.stdout.fileno()).columns or WIDE
    return WIDE


def coloured(when: str, out: Path | None) -> bool:
    """Whether to paint: `when` is auto (a terminal, and NO_COLOR is not set), always or never."""
    if when == "auto":
        return out is None and sys.stdout.isatty() and not os.environ.get("NO_COLOR")
    return when == "always"


def is_folder(out: str) -> bool:
    """Whether `--out` names a folder: one that is there, or a name that ends in a slash."""
    return out.endswith(("/", os.sep)) or Path(out).is_dir()


def deliver_all(texts: Mapping[str, str], folder: Path) -> None:
    """Put each text into the file of its name in `folder`, which is made where it is missing; each whole or not at
    all. Raises InputTrouble where that is not possible.
    """
    try:
        folder.mkdir(parents=True, exist_ok=True)
    except OSError as problem:
        raise InputTrouble(f"cannot make the folder: {problem.strerror}", file=str(folder)) from None
    for name, text in texts.items():
        deliver(text, folder / name)


def deliver(text: str, out: Path | None) -> None:
    """Print `text`, or put it into the file `out`. Raises InputTrouble where the file cannot be written."""
    if out is None:
        _print(text)
        return
    try:
        _replace(out, text.encode("utf-8"))
    except OSError as problem:
        reason = problem.strerror or str(problem)
        raise InputTrouble(f"cannot write the report: {reason}", file=str(out)) from None


def _print(text: str) -> None:
    """UTF-8 into a pipe or file; on a terminal what it can show. A reader that went away is no failure."""
    try:
        if sys.stdout.isatty():
            encoding = sys.stdout.encoding or "utf-8"
            click.echo(text.encode(encoding, "backslashreplace").decode(encoding), nl=False)
        else:
            click.echo(text.encode("utf-8"), nl=False)
        sys.stdout.flush()
    except BrokenPipeError:
        # Python flushes standard output once more at exit, which would complain again.
        with contextlib.suppress(OSError):
            os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())


def _replace(out: Path, data: bytes) -> None:
    """Write beside the file and move over it; what is no regular file (a pipe, /dev/null) is written to."""
    target = out.resolve()
    if target.exists() and not target.is_file():
        target.write_bytes(data)
        return
    import tempfile  # costs start-up time and is needed only here

    handle, temporary = tempfile.mkstemp(prefix=f".{target.name[:40]}.", dir=target.parent)
    try:
        with os.fdopen(handle, "wb") as stream:
            stream.write(data)
        Path(temporary).chmod(_mode(target))
        Path(temporary).replace(target)
    except BaseException:
        Path(temporary).unlink(missing_ok=True)
        raise


def _mode(target: Path) -> int:
    """The permissions of the file that is replaced, else what a new file would get."""
    with contextlib.suppress(FileNotFoundError):
        return target.stat().st_mode & 0o777
    mask = os.umask(0)
    os.umask(mask)
    return 0o666 & ~mask
