"""Text for Markdown, and a page of it that keeps under a length.

Whatever stands in a name shows as it is: no markup, no HTML, no link, no picture, and nobody is called by it.
"""

from __future__ import annotations

import re
from collections.abc import Iterable, Sequence

from checker.report.clean import clean
from checker.report.layout import NO_BREAK

MOST = 60_000
"""Characters of a comment; hosts of pull requests take some 65,000."""
_GAP = "&#8203;"
"""A space without width: what it parts is no mention, reference or address any more."""
_ACTIVE = re.compile(r"[\\`*_\[\]<>&|~$#@^=]")
_ADDRESS = re.compile(r"://|(?i:www)\.")


def marked(text: str) -> str:
    """`text` so that Markdown shows it letter by letter."""
    bare = _ACTIVE.sub(lambda found: f"&#{ord(found[0])};", clean(text).replace(NO_BREAK, " "))
    bare = re.sub(r"&#(35|64);", lambda found: found[0] + _GAP, bare)
    return _ADDRESS.sub(lambda found: found[0][:-1] + _GAP + found[0][-1], bare)


def folded(title: str, lines: Iterable[str]) -> str:
    """A block that opens on a click; `title` is marked already."""
    return "\n".join(["<details>", f"<summary>{title}</summary>", "", *lines, "", "</details>"])


def table(header: Sequence[str], rows: Iterable[Sequence[str]]) -> list[str]:
    """A table of cells that are marked already."""
    return [_row(header), _row(["---"] * len(header)), *map(_row, rows)]


def fitted(opening: Sequence[str], blocks: Sequence[str], what: str) -> str:
    """The opening, then as many blocks as fit, in their order; the rest is counted as so many more `what`."""
    room = MOST - 200 - len("\n\n".join(opening))
    kept: list[str] = []
    for block in blocks:
        room -= len(block) + 2
        if room < 0:
            break
        kept.append(block)
    left = len(blocks) - len(kept)
    more = [f"*{left} more {what} left out for length; the other forms of the report have them.*"] if left else []
    return "\n\n".join([*opening, *kept, *more]) + "\n"


def _row(cells: Sequence[str]) -> str:
    return f"| {' | '.join(cells)} |"
