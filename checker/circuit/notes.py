"""Assumptions in plain words, gathered by subject so that the same remark on ten parts is one line."""

from __future__ import annotations

from dataclasses import field
from typing import Final, Literal

from checker.circuit.order import listed, natural_key
from checker.shape import filled

Topic = Literal["ground", "rails", "states", "ports", "connectors", "models", "pins", "parts", "values", "tolerances"]
_TOPICS: Final[tuple[Topic, ...]] = (
    "ground",
    "rails",
    "states",
    "ports",
    "connectors",
    "models",
    "pins",
    "parts",
    "values",
    "tolerances",
)


@filled
class Notes:
    """Collects remarks; `lines` gives them by topic, then in natural order."""

    _refs: dict[tuple[Topic, str], set[str]] = field(default_factory=dict)

    def add(self, topic: Topic, text: str, *refs: str) -> None:
        """Note `text`; with refs the line reads "R1, R2: text"."""
        self._refs.setdefault((topic, text), set()).update(refs)

    def lines(self) -> tuple[str, ...]:
        """All remarks as sentences, in an order that does not depend on when they were added."""
        made = [
            (_TOPICS.index(topic), f"{listed(refs)}: {text}" if refs else text)
            for (topic, text), refs in self._refs.items()
        ]
        return tuple(line for _, line in sorted(made, key=lambda item: (item[0], natural_key(item[1]))))
