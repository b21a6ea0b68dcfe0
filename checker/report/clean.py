"""Names from a netlist are hostile text: make them safe to print on a terminal."""

from __future__ import annotations

NAME_LIMIT = 60
"""Characters of a name; longer ones are cut, so that one name cannot flood the report."""
CELL_LIMIT = 24
"""Characters of a name in a table."""
TEXT_LIMIT = 1200
"""Characters of a sentence, which may hold several names."""


def clean(text: str, limit: int = TEXT_LIMIT) -> str:
    """`text` with control, escape, invisible and bidirectional characters spelt out as <U+202E>, and cut."""
    cut = text if len(text) <= limit else text[: limit - 1] + "…"
    return cut if cut.isprintable() else "".join(map(_visible, cut))


def name(text: str) -> str:
    """A name, cleaned and cut; an empty one is shown as such."""
    return clean(text, NAME_LIMIT) or '""'


def cell(text: str) -> str:
    """A name for a table, cut shorter."""
    return clean(text, CELL_LIMIT) or '""'


def _visible(char: str) -> str:
    return char if char.isprintable() else f"<U+{ord(char):04X}>"
