"""Natural order of names (R2 before R10), so that no result depends on the order of lines in a file."""

from __future__ import annotations

from collections.abc import Iterable

from checker.pattern import lazy

_RUN = lazy(r"(\d+)")


def natural_key(name: str) -> tuple[tuple[int, int, str], ...]:
    """Sort key in which runs of ASCII digits count as numbers."""
    runs = _RUN.split(name)
    return tuple(
        (1, int(run), "") if run.isascii() and run.isdigit() and len(run) < 19 else (0, 0, run) for run in runs if run
    )


def natural(names: Iterable[str]) -> list[str]:
    """The names in natural order."""
    return sorted(names, key=natural_key)


def listed(names: Iterable[str], most: int = 12) -> str:
    """Names as a comma list in natural order, shortened past `most`."""
    ordered = natural(set(names))
    if len(ordered) <= most:
        return ", ".join(ordered)
    return f"{', '.join(ordered[:most])} and {len(ordered) - most} more"


def last_segment(net: str) -> str:
    """Last path segment of a hierarchical net name: "/audio/OUT" is "OUT"."""
    return net.rsplit("/", 1)[-1]
