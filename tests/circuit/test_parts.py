"""The kind of a part from its symbol's name."""

from __future__ import annotations

import pytest

from checker.circuit.parts import USUAL, by_symbol


@pytest.mark.parametrize("name", sorted(USUAL))
def test_the_short_table_says_what_the_patterns_say(name: str) -> None:
    assert USUAL[name] == by_symbol(name, {})
    assert USUAL[name] == by_symbol(name)


def test_a_name_that_tells_nothing_has_no_kind() -> None:
    assert by_symbol("PE4259") is None
