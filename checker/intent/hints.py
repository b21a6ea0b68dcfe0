"""What to say of a key that should not be where it is."""

from __future__ import annotations

from collections.abc import Collection, Iterable

from checker.intent.keys import LISTS, SECTIONS, TOP_LEVEL


def nearest(word: str, known: Iterable[str]) -> str | None:
    """The known word that `word` most likely means, None if none is close."""
    from difflib import get_close_matches  # only on the way to an error message

    by_lower = {name.lower(): name for name in sorted(known)}
    found = get_close_matches(word.lower()[:100], by_lower, n=1, cutoff=0.6)
    return by_lower[found[0]] if found else None


def unknown(word: str, known: Collection[str], what: str) -> str:
    """Message for an unknown `word` of the sort `what`: a suggestion, else the list of what is known."""
    close = nearest(word, known)
    if close is not None:
        return f"unknown {what} {_quoted(word)}; did you mean {_quoted(close)}?"
    listed = ", ".join(sorted(known)) or "none"
    return f"unknown {what} {_quoted(word)}; known: {listed}"


def swallowed(key: str, section: str) -> str | None:
    """Message where a section's name stands inside another table, of which TOML makes it a part."""
    if key not in TOP_LEVEL:
        return None
    header = f"[[{key}]]" if key in LISTS else f"[{key}]"
    return (
        f"{key!r} stands inside {section}, because that table is above it; "
        f"write it as {header} or move it above {section}"
    )


def misplaced(key: str, section: str, known: Collection[str]) -> str:
    """Message for a key that `section` does not have: swallowed, of another section, or misspelt."""
    message = swallowed(key, section)
    if message is not None:
        return message
    if nearest(key, known) is None:
        owners = [name for name, keys in SECTIONS.items() if key in keys]
        if len(owners) == 1:
            here = ", ".join(known)
            return f"{key!r} is a key of {owners[0]!r}, but stands in {section}; known here: {here}"
    return unknown(key, known, f"key in {section}")


def _quoted(word: str) -> str:
    return repr(word if len(word) <= 60 else word[:57] + "...")
