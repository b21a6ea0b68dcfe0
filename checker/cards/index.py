"""The index over all card files, so that a lookup reads only the family it needs. Made, never edited.

After a change of a card file: `python -c "from checker.cards.index import write_index; write_index()"`.
"""

from __future__ import annotations

import json

from checker.cards.load import DATA, INDEX, families, rows


def index_text() -> str:
    """The content that `data/index.json` must have. Raises ValueError where two families claim one name."""
    owner: dict[str, str] = {}
    for family in families():
        for name in rows(family):
            if name in owner:
                raise ValueError(f"{name} stands in both {owner[name]} and {family}")
            owner[name] = family
    entries = (f"{json.dumps(name)}: {json.dumps(owner[name])}" for name in sorted(owner))
    return "{\n" + ",\n".join(entries) + "\n}\n"


def write_index() -> None:
    """Write `data/index.json` anew."""
    (DATA / INDEX).write_text(index_text(), encoding="utf-8")
