"""The door to the readers: which dialect the content is in (never the file's suffix)."""

from __future__ import annotations

import gc
import sys
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from pathlib import Path

from checker.digest import sha256_hex
from checker.netlist.limits import ReadLimits
from checker.netlist.text import decode, display_name, read_bytes
from checker.netlist.types import Netlist
from checker.pattern import lazy
from checker.trouble import InputTrouble

_EXPORT = lazy(r"\(\s*export[\s()]")
_S_EXPRESSION = lazy(r"\(\s*[\w{]+[\s({]")
_FRAMES = 12
"""Calls that one level of nesting takes at most: a parameter within a parameter, an include within an include."""


def read_netlist(path: Path, *, include_dirs: tuple[Path, ...] = (), limits: ReadLimits | None = None) -> Netlist:
    """Read a SPICE-style text or a KiCad S-expression export (versions D and E) into one `Netlist`.

    `path` is also the name used in the result, with forward slashes. SPICE includes are followed only inside
    the netlist's own folder and `include_dirs`. `limits` defaults to `ReadLimits()`. Raises `InputTrouble`
    for a file that cannot be read, is neither format, or exceeds a limit; what is merely not understood
    becomes a remark or a part's `unknown`.
    """
    limits = limits or ReadLimits()
    with _without_collection():
        return _read(path, include_dirs, limits)


def _read(path: Path, include_dirs: tuple[Path, ...], limits: ReadLimits) -> Netlist:
    name = display_name(path)
    data = read_bytes(path, name, budget=limits.bytes, limit=limits.bytes)
    text = decode(data, name)
    if not text.strip():
        raise InputTrouble("is empty; expected a netlist", file=name)
    sha256 = sha256_hex(data)
    reader = _reader_of(text.lstrip(), name)
    with _room_for(limits.depth):
        return reader(
            text,
            name=name,
            sha256=sha256,
            path=path,
            include_dirs=include_dirs,
            limits=limits,
            size=len(data),
        )


def _reader_of(start: str, name: str) -> Callable[..., Netlist]:
    """The reader of the form that the text has by its beginning; only that one is loaded: start-up time."""
    if not _S_EXPRESSION.match(start):
        from checker.netlist.spice_read import read_spice

        return read_spice
    if not _EXPORT.match(start):
        raise InputTrouble(
            "an S-expression, but not a netlist export (expected `(export ...`); export the netlist",
            file=name,
            line=1,
        )
    from checker.netlist.kicad_read import read_kicad

    return read_kicad


@contextmanager
def _without_collection() -> Iterator[None]:
    """Pause the search for cyclic garbage: reading makes none, yet its million objects would be searched again and
    again, for a third of the time."""
    running = gc.isenabled()
    gc.disable()
    try:
        yield
    finally:
        if running:
            gc.enable()


@contextmanager
def _room_for(depth: int) -> Iterator[None]:
    """Let the interpreter recurse as deep as the limit promises."""
    before = sys.getrecursionlimit()
    sys.setrecursionlimit(max(before, _FRAMES * depth + 1_000))
    try:
        yield
    finally:
        sys.setrecursionlimit(before)
