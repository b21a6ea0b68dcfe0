"""Boards as they stood in an earlier revision: REVISION:PATH, read with git into a folder of their own.

git is called with fixed argument lists, never through a shell; revision and path are only ever arguments after
`--end-of-options`. Blobs are read as they are stored: no filter, hook or helper of the repository runs.
"""

from __future__ import annotations

import subprocess
from collections.abc import Mapping
from pathlib import Path, PurePosixPath
from typing import Final

from checker.shape import frozen
from checker.trouble import InputTrouble

SECONDS: Final = 60
"""Longest that one call of git may take."""
MOST_BYTES: Final = 5_000_000
"""A larger file beside a netlist is no text that it would include."""
MOST_FILES: Final = 500
"""Files of a netlist's folder that are read."""
MOST_TOTAL: Final = 40_000_000
"""Bytes of them together."""
COMPANIONS: Final = ("intent", "cards")
"""Files that belong to a netlist: NAME.WORD.toml, or WORD.toml in its folder."""
_PLAIN: Final = ("100644", "100755")
"""Modes of plain files; links and submodules are not followed."""


@frozen
class Revision:
    """A file in a commit: `commit` in full, `path` from the repository's root, `said` as the call named the file."""

    commit: str
    path: PurePosixPath
    said: str


def find_revision(text: str) -> Revision | None:
    """What REVISION:PATH names, None for a text of another form.

    PATH is looked for from the working folder, then from the repository's root. Raises InputTrouble for a revision or
    path that does not exist, or where git does not answer.
    """
    name, mark, path = text.partition(":")
    if not mark or not name or not path or "\0" in text:
        return None
    if name.startswith("-"):
        raise InputTrouble(f"{name!r} is no revision")
    commit = _git("rev-parse", "--verify", "--quiet", "--end-of-options", f"{name}^{{commit}}")
    if not commit:
        raise InputTrouble(f"git knows no revision {name!r} here", file=text)
    sha = commit.decode("ascii").split()[-1]
    prefix = _git("rev-parse", "--show-prefix").decode("utf-8", "surrogateescape").strip("\n")
    wanted = PurePosixPath(path.replace("\\", "/"))
    for candidate in (_normal(PurePosixPath(prefix) / wanted), _normal(wanted)):
        if candidate is not None and candidate in _entries(sha, candidate.parent):
            return Revision(commit=sha, path=candidate, said=path)
    raise InputTrouble(f"there is no file {path!r} in revision {name!r}", file=text)


def lay_out(revision: Revision, folder: Path, intent: str | None) -> tuple[Path, Path | None]:
    """Write netlist, intent file and what lies beside the netlist below `folder`, as the repository has them.

    `intent`: an intent file named by the call, from the repository's root or the working folder; None: what lies
    beside the netlist is found as ever. Returns the paths of both relative to `folder`.
    """
    here = revision.path.parent
    entries = _entries(revision.commit, here)
    companions = (f"{revision.path.stem}.{word}.toml" for word in COMPANIONS)
    names = (*companions, *(f"{word}.toml" for word in COMPANIONS))
    wanted = [revision.path, *map(revision.path.with_name, names)]
    first = _blob(revision.commit, revision.path, entries)
    if first.lstrip()[:1] != b"(":  # text may include what lies beside it; an export stands alone
        wanted += sorted(entries)[:MOST_FILES]
    total = 0
    for path in dict.fromkeys(wanted):
        mode, size = entries.get(path, ("", 0))
        if mode in _PLAIN and size <= MOST_BYTES:
            total += size
            if total > MOST_TOTAL:
                raise InputTrouble("the netlist's folder holds too much to read", file=str(revision.path))
            _write(folder, path, _blob(revision.commit, path, entries))
    return Path(str(revision.path)), None if intent is None else _named_intent(revision, folder, intent)


def _named_intent(revision: Revision, folder: Path, intent: str) -> Path:
    found = find_revision(f"{revision.commit}:{intent}")
    if found is None:
        raise InputTrouble("is not in that revision", file=intent)
    _write(folder, found.path, _blob(found.commit, found.path, _entries(found.commit, found.path.parent)))
    return Path(str(found.path))


def _normal(path: PurePosixPath) -> PurePosixPath | None:
    """The path without "." and "..", None where it leaves the repository or is no name that a file may have."""
    parts: list[str] = []
    for part in path.parts:
        if part == ".." and not parts:
            return None
        if part == "..":
            parts.pop()
        elif part in ("/", "//") or "\0" in part:
            return None
        else:
            parts.append(part)
    return PurePosixPath(*parts) if parts else None


def _entries(commit: str, folder: PurePosixPath) -> dict[PurePosixPath, tuple[str, int]]:
    """Mode and size of each file in a folder of the commit and below."""
    where = [] if str(folder) == "." else ["--", f"{folder}/"]
    listing = _git("ls-tree", "-r", "-z", "-l", "--full-tree", commit, *where)
    found: dict[PurePosixPath, tuple[str, int]] = {}
    for line in listing.split(b"\0"):
        head, mark, name = line.partition(b"\t")
        words = head.split()
        path = _normal(PurePosixPath(name.decode("utf-8", "surrogateescape"))) if mark else None
        if path is not None and len(words) == 4 and words[1] == b"blob":
            found[path] = words[0].decode("ascii"), int(words[3])
    return found


def _blob(commit: str, path: PurePosixPath, entries: Mapping[PurePosixPath, tuple[str, int]]) -> bytes:
    mode, size = entries.get(path, ("", 0))
    if mode not in _PLAIN or size > MOST_BYTES:
        raise InputTrouble("is no plain file of that revision, or too large", file=str(path))
    return _git("cat-file", "blob", f"{commit}:{path}")


def _write(folder: Path, name: PurePosixPath, data: bytes) -> None:
    target = folder.joinpath(*name.parts)
    if not target.resolve().is_relative_to(folder.resolve()):
        raise InputTrouble("is no path inside the repository", file=str(name))
    target.parent.mkdir(parents=True, exist_ok=True)
    target.write_bytes(data)


def _git(*arguments: str) -> bytes:
    """Standard output of one call, empty where git refuses. Raises InputTrouble where there is no git or no
    repository, or it takes too long.
    """
    command = ["git", "--no-pager", "--literal-pathspecs", *arguments]
    try:
        done = subprocess.run(  # noqa: S603 - a fixed list, no shell
            command, capture_output=True, stdin=subprocess.DEVNULL, timeout=SECONDS, check=False
        )
    except FileNotFoundError:
        raise InputTrouble("REVISION:PATH needs git, which is not installed") from None
    except subprocess.TimeoutExpired:
        raise InputTrouble(f"git did not answer within {SECONDS} s") from None
    if done.returncode == 128 and b"not a git repository" in done.stderr:
        raise InputTrouble("REVISION:PATH needs a git repository; this folder is in none")
    return done.stdout if done.returncode == 0 else b""
