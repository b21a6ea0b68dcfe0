"""Which netlists a call means: files as they are, folders and patterns for what is in them."""

from __future__ import annotations

import os
from collections.abc import Iterable, Iterator
from pathlib import Path
from typing import Final

from checker.record import natural
from checker.trouble import InputTrouble

SUFFIXES: Final = frozenset({".net", ".cir", ".ckt", ".sp", ".spi", ".spice"})
"""Files of a folder that count as netlists; a file that is named counts whatever its suffix."""
MOST: Final = 20_000
"""Netlists of one call; more is a folder given by mistake."""


def netlists(arguments: Iterable[str]) -> tuple[Path, ...]:
    """The netlists in natural order of their paths, each once; those that were named come in the order named.

    Raises InputTrouble for an argument that names nothing, or a folder or pattern without a netlist.
    """
    found: dict[Path, None] = {}
    for argument in arguments:
        found |= dict.fromkeys(_meant(argument))
        if len(found) > MOST:
            raise InputTrouble(f"holds more than {MOST} netlists; name a smaller folder", file=argument)
    return tuple(found)


def is_one_file(arguments: tuple[str, ...]) -> bool:
    """Whether the call named a single file, and so wants a single report."""
    return len(arguments) == 1 and Path(arguments[0]).is_file()


def _meant(argument: str) -> list[Path]:
    path = Path(argument)
    if path.is_dir():
        return _some(argument, _below(path), f"no netlist in this folder ({', '.join(sorted(SUFFIXES))})")
    if path.exists():
        return [path]
    import glob  # costs start-up time, and most calls name files

    if glob.has_magic(argument):
        hits = (Path(hit) for hit in glob.iglob(argument, recursive=True))  # noqa: PTH207 - the pattern may be absolute
        return _some(argument, (hit for hit in hits if hit.is_file()), "no file matches this pattern")
    raise InputTrouble("does not exist; give a netlist, a folder or a pattern", file=argument)


def _some(argument: str, paths: Iterator[Path], otherwise: str) -> list[Path]:
    found = sorted(paths, key=lambda path: natural(path.as_posix()))
    if not found:
        raise InputTrouble(otherwise, file=argument)
    return found


def _below(folder: Path) -> Iterator[Path]:
    """Netlists in a folder and below; hidden folders and links to folders are not entered."""
    for where, folders, files in os.walk(folder):
        folders[:] = [name for name in folders if not name.startswith(".")]
        for name in files:
            if Path(name).suffix.lower() in SUFFIXES and not name.startswith("."):
                yield Path(where, name)
