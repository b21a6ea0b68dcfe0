"""From bytes to text: size bound, encoding, and refusal of what is no text."""

from __future__ import annotations

from pathlib import Path, PurePosixPath

from checker.netlist.limits import over
from checker.trouble import InputTrouble

_BINARY_SHARE = 0.05
"""Share of control characters above which a file is no text: real exports hold none."""
_PLAIN_CONTROLS = frozenset({9, 10, 11, 12, 13, 26, 27})


def display_name(path: Path) -> str:
    """`path` as given, normalised, with forward slashes."""
    return str(PurePosixPath(path.as_posix()))


def read_bytes(path: Path, name: str, *, budget: int, limit: int) -> bytes:
    """Contents of a plain file. Raises `InputTrouble` where it cannot be read or exceeds `budget` bytes, what
    is left of `limit`."""
    try:
        if not path.is_file():
            raise InputTrouble("no such file, or not a plain file; give the path of a netlist", file=name)
        with path.open("rb") as stream:
            data = stream.read(budget + 1)
    except (OSError, ValueError) as error:
        if isinstance(error, InputTrouble):
            raise
        reason = error.strerror if isinstance(error, OSError) else None
        raise InputTrouble(f"cannot be read: {reason or 'not a usable path'}", file=name) from error
    if len(data) > budget:
        over("bytes", limit, "too many bytes to read", file=name)
    return data


def decode(data: bytes, name: str) -> str:
    """Text with plain line ends: UTF-16 by its mark, else UTF-8, else Latin-1. Raises `InputTrouble` for no
    text."""
    text = _decoded(data, name)
    if "\0" in text:
        line = text.count("\n", 0, text.index("\0")) + 1
        raise InputTrouble("holds a NUL character: not a text netlist", file=name, line=line)
    controls = sum(text.count(chr(code)) for code in range(1, 32) if code not in _PLAIN_CONTROLS)
    if controls > _BINARY_SHARE * len(text) + 8:
        raise InputTrouble("is binary data, not a text netlist", file=name)
    return text.replace("\r\n", "\n").replace("\r", "\n")


def _decoded(data: bytes, name: str) -> str:
    if data[:2] in (b"\xff\xfe", b"\xfe\xff"):
        try:
            return data.decode("utf-16")
        except UnicodeDecodeError as error:
            raise InputTrouble("marked as UTF-16 but broken; save it as UTF-8", file=name) from error
    if unmarked := _unmarked_utf16(data):
        return unmarked
    try:
        return data.decode("utf-8-sig")
    except UnicodeDecodeError:
        return data.decode("latin-1")


def _unmarked_utf16(data: bytes) -> str:
    """Text of UTF-16 without its mark: Latin letters then leave every second byte zero. Empty where it is
    not."""
    sample = data[:512]
    for encoding, zeros, others in (
        ("utf-16-le", sample[1::2], sample[::2]),
        ("utf-16-be", sample[::2], sample[1::2]),
    ):
        if len(sample) >= 4 and zeros.count(0) > 0.9 * len(zeros) and 0 not in others:
            try:
                return data.decode(encoding)
            except UnicodeDecodeError:
                return ""
    return ""
