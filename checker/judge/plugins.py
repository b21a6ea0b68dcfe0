"""Rule packages that others have installed, found without importing `importlib.metadata` (some 30 ms).

An installed package lists its entry points in `NAME.dist-info/entry_points.txt`: sections in brackets, one
`name = module:attribute` a line (PyPA specification "Entry points").
"""

from __future__ import annotations

import os
import sys
from collections.abc import Iterable, Iterator
from pathlib import Path

GROUP = "stageproof.rules.v1"
BUILTIN = "rules:CATALOGUE"
_LONGEST = 1 << 20
"""Bytes of an entry point file that are read; real ones have some hundred."""


def plugins(search: Iterable[str] | None = None) -> tuple[tuple[str, str], ...]:
    """(distribution, "module:attribute") of every entry point of the group but the built-in one, sorted.

    Of two installations of one distribution the first on `search` (default `sys.path`) counts, as for
    imports.
    """
    found: dict[str, set[str]] = {}
    for folder in sys.path if search is None else search:
        for name, path in _listings(folder):
            if name not in found:
                found[name] = set(_entries(path))
    return tuple((name, target) for name in sorted(found) for target in sorted(found[name]))


def _listings(folder: str) -> Iterator[tuple[str, Path]]:
    """Distribution name and entry point file of each package in a folder; none where it cannot be listed,
    or is the working folder: what merely lies there is not installed.
    """
    try:
        names = sorted(os.listdir(folder)) if folder else []  # noqa: PTH208 - it makes hundreds of objects
    except OSError:
        return
    for name in names:
        if name.endswith((".dist-info", ".egg-info")):
            yield name.split("-")[0].lower().replace("_", "-"), Path(folder, name, "entry_points.txt")


def _entries(path: Path) -> Iterator[str]:
    """Targets of our group in one file; none where there is no such file."""
    try:
        with path.open(encoding="utf-8", errors="replace") as file:
            text = file.read(_LONGEST)
    except OSError:
        return
    section = ""
    for line in map(str.strip, text.splitlines() if GROUP in text else ()):
        if line.startswith("["):
            section = line.strip("[] ")
        elif section == GROUP and "=" in line and not line.startswith(("#", ";")):
            target = line.split("=", 1)[1].split("[")[0].strip()
            if target != BUILTIN:
                yield target
