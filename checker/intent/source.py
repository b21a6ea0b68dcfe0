"""The intent file as text: read within bounds, parsed as TOML, and every key with the line it stands on.

The TOML reader of the standard library keeps no lines, so a scan of the text finds them: headers and the keys
at the start of a line. What stands inside an inline table has the line of that table.
"""

from __future__ import annotations

import re
from collections.abc import Mapping
from pathlib import Path
from typing import Any, Final

from checker.pattern import lazy
from checker.shape import frozen
from checker.trouble import InputTrouble

MAX_BYTES: Final = 1_000_000
"""An intent file is written by hand; a megabyte is some twenty thousand lines."""
MAX_LINE: Final = 2_000
"""A longer line is no handwriting."""
MAX_DOTTED: Final = 16
"""Parts of one dotted key: the TOML reader takes time quadratic in them, and ours have four."""

KeyPath = tuple[str | int, ...]
"""Keys from the root of the file; a number counts the tables of a list from 0."""

_PART: Final = r"(?:[A-Za-z0-9_-]+|\"(?:[^\"\\]|\\.)*\"|'[^']*')"
_KEY: Final = rf"{_PART}(?:[ \t]*\.[ \t]*{_PART})*"
_HEADER: Final = lazy(rf"[ \t]*(\[\[?)[ \t]*({_KEY})[ \t]*\]")
_ENTRY: Final = lazy(rf"[ \t]*({_KEY})[ \t]*=")
_SPLIT: Final = lazy(_PART)
_SHORT: Final = r"(?:[A-Za-z0-9_-]{1,99}|\"(?:[^\"\\]|\\.){0,99}\"|'[^']{0,99}')"  # longer ones: few a line
_TOO_DOTTED: Final = lazy(rf"(?<![A-Za-z0-9_-])(?:{_SHORT}[ \t]*\.[ \t]*){{{MAX_DOTTED}}}")
_LONG_TEXT: Final = lazy(r'"""|\'\'\'')


@frozen
class Source:
    """A parsed file: `data` as TOML gives it, `lines` (1-based) by key path."""

    file: str
    data: Mapping[str, Any]
    lines: Mapping[KeyPath, int]

    def line(self, *path: str | int) -> int:
        """Line of the key at `path`, else of the nearest table around it, else 0."""
        for length in range(len(path), 0, -1):
            found = self.lines.get(path[:length])
            if found is not None:
                return found
        return 0

    def trouble(self, message: str, *path: str | int) -> InputTrouble:
        """The exception for a fault at `path`; the caller raises it."""
        return InputTrouble(message, file=self.file, line=self.line(*path))


def load(path: Path) -> Source:
    """Read `path` as TOML.

    Raises InputTrouble, with the line where it is known, for a file that is missing, too large, not UTF-8 or
    not TOML.
    """
    import tomllib  # costs a sixth of the start-up time, and many runs have no intent file

    file = path.as_posix()
    text = _text(path, file)
    try:
        data = tomllib.loads(text)
    except RecursionError:
        raise InputTrouble("tables or lists are nested too deeply for an intent file", file=file) from None
    except ValueError as error:
        raise _syntax_trouble(str(error), file, text) from None
    return Source(file=file, data=data, lines=key_lines(text))


def _text(path: Path, file: str) -> str:
    try:
        with path.open("rb") as stream:
            raw = stream.read(MAX_BYTES + 1)
    except OSError as error:
        reason = error.strerror or "not readable"
        raise InputTrouble(f"cannot read the intent file: {reason}", file=file) from None
    if len(raw) > MAX_BYTES:
        raise InputTrouble(f"the intent file is larger than {MAX_BYTES} bytes; is it the right file?", file=file)
    try:
        text = raw.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        line = raw.count(b"\n", 0, error.start) + 1
        raise InputTrouble("the intent file is not UTF-8 text; save it as UTF-8", file=file, line=line) from None
    for number, written in enumerate(text.split("\n"), start=1):
        if len(written) > MAX_LINE or (written.count(".") >= MAX_DOTTED and _TOO_DOTTED.search(written)):
            message = f"a line may have {MAX_LINE} characters, a dotted name {MAX_DOTTED} parts; break it up"
            raise InputTrouble(message, file=file, line=number)
    return text


def _syntax_trouble(reason: str, file: str, text: str) -> InputTrouble:
    at = re.search(r"\(at line (\d+), column \d+\)", reason)
    if at is not None:
        line = int(at[1])
        reason = reason[: at.start()].strip()
    else:
        line = text.count("\n") + 1 if "end of document" in reason else 0
    return InputTrouble(f"not valid TOML: {reason}", file=file, line=line)


def key_lines(text: str) -> dict[KeyPath, int]:
    """Line of every header and of every key that starts a line; the first where several name one path."""
    lines: dict[KeyPath, int] = {}
    counts: dict[KeyPath, int] = {}
    table: KeyPath = ()
    quote = ""
    for number, line in enumerate(text.split("\n"), start=1):
        if not quote:
            header = _HEADER.match(line)
            if header is not None:
                table = _table(_resolve(_parts(header[2]), counts), header[1] == "[[", counts)
                lines.setdefault(table, number)
                if header[1] == "[[":
                    lines.setdefault(table[:-1], number)
                continue
            entry = _ENTRY.match(line)
            if entry is not None:
                path = table + _parts(entry[1])
                for length in range(len(table) + 1, len(path) + 1):
                    lines.setdefault(path[:length], number)
        quote = _open_quote(line, quote)
    return lines


def _parts(dotted: str) -> tuple[str, ...]:
    return tuple(_unquoted(part) for part in _SPLIT.findall(dotted))


def _unquoted(part: str) -> str:
    if part[0] == "'":
        return part[1:-1]
    if part[0] != '"':
        return part
    return re.sub(r"\\(.)", r"\1", part[1:-1])


def _resolve(parts: tuple[str, ...], counts: Mapping[KeyPath, int]) -> KeyPath:
    """Path of a header: below a list it means the list's last table."""
    path: KeyPath = ()
    for part in parts[:-1]:
        path = (*path, part)
        if path in counts:
            path = (*path, counts[path] - 1)
    return (*path, parts[-1])


def _table(path: KeyPath, is_list: bool, counts: dict[KeyPath, int]) -> KeyPath:
    if not is_list:
        return path
    counts[path] = counts.get(path, 0) + 1
    return (*path, counts[path] - 1)


def _open_quote(line: str, quote: str) -> str:
    """The triple quote that is still open at the end of `line`, empty for none."""
    for mark in _LONG_TEXT.findall(line):
        if not quote:
            quote = mark
        elif quote == mark:
            quote = ""
    return quote
