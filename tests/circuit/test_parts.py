"""The kind of a part from its symbol's name."""

from __future__ import annotations

import pytest

from checker.circuit.parts import USUAL, by_symbol, classify, symbol_name
from tests.circuit.make import kicad_part


@pytest.mark.parametrize("name", sorted(USUAL))
def test_the_short_table_says_what_the_patterns_say(name: str) -> None:
    assert USUAL[name] == by_symbol(name, {})
    assert USUAL[name] == by_symbol(name)


def test_a_name_that_tells_nothing_has_no_kind() -> None:
    assert by_symbol("PE4259") is None


@pytest.mark.parametrize(
    ("symbol", "name", "kind"),
    [
        ("amp-rescue:R-amp-rescue", "R", "resistor"),
        ("amp-rescue:CP-device", "CP", "capacitor"),
        ("amp-rescue:Q_NPN_BCE-transistors", "Q_NPN_BCE", "bipolar"),
        ("amp-rescue:Q_NPN_BCE-RESCUE-amp", "Q_NPN_BCE", "bipolar"),
        ("amp-rescue:R_US-Basic", "R_US", "resistor"),
        ("amp-rescue:BC547-Custom_Lib", "BC547", "unmodelled"),
        ("Device:R", "R", "resistor"),
        ("own:L-IRON", "L-IRON", "inductor"),
    ],
)
def test_the_tail_of_a_rescue_library_is_no_part_of_the_name(symbol: str, name: str, kind: str) -> None:
    part = kicad_part("Z1", symbol, "x", {"1": "a", "2": "b", "3": "c"})
    assert symbol_name(part) == name
    assert classify(part, spice=False) == kind
