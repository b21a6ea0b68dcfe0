"""Symbol, part number and package against each other: exact maps where they differ, silence or a gap where unsure."""

from __future__ import annotations

import pytest

from checker.circuit.types import Agreement
from tests.circuit.make import kicad, kicad_part, resistor

SOT23, TO92 = "Package_TO_SOT_SMD:SOT-23", "Package_TO_SOT_THT:TO-92_Inline"


def agreement(value: str, order: str, footprint: str, symbol: str = "my:Q_NPN", description: str = "") -> Agreement:
    """`order`: terminal of pads 1, 2, 3."""
    pins = {str(place): f"{letter.lower()}|{letter}" for place, letter in enumerate(order, start=1)}
    part = kicad_part("Q1", symbol, value, pins, footprint=footprint, description=description)
    return kicad(part, *(resistor(f"R{n}", n, "GND") for n in "bce")).parts["Q1"].agreement


@pytest.mark.parametrize(
    ("value", "order", "footprint"),
    [("MMBT3904", "BEC", SOT23), ("2N3904", "EBC", TO92), ("BC547", "CBE", TO92), ("2N5172", "ECB", TO92)],
)
def test_what_fits(value: str, order: str, footprint: str) -> None:
    found = agreement(value, order, footprint)
    assert found.judged and not found.wrong and not found.unknown


@pytest.mark.parametrize(
    ("value", "order", "footprint", "words"),
    [
        ("MMBT3904", "EBC", SOT23, ("E on 1, B on 2", "B on 1, E on 2")),  # a TO-92 symbol on a SOT-23
        ("BC817", "BCE", SOT23, ("C on 2, E on 3", "E on 2, C on 3")),
        ("2N3904", "CBE", TO92, ("C on 1, B on 2, E on 3", "E on 1, B on 2, C on 3")),  # the C-B-E family's order
        ("P2N2222A", "EBC", TO92, ()),
        ("2SC1815", "EBC", TO92, ("E on 1, C on 2, B on 3",)),
    ],
)
def test_pin_orders_that_clash(value: str, order: str, footprint: str, words: tuple[str, ...]) -> None:
    found = agreement(value, order, footprint)
    if value == "P2N2222A":  # C-B-E counted from the other end would be this: no proof
        assert not found.wrong and "pin-order" in found.unknown
    else:
        assert all(word in found.wrong["pin-order"] for word in words)


def test_unknown_parts_and_packages_are_gaps_not_guesses() -> None:
    assert set(agreement("XY9000", "EBC", SOT23).unknown) == {"pin-order", "part-polarity", "package-mismatch"}
    assert set(agreement("2N3904", "EBC", "my:odd").unknown) == {"pin-order", "package-mismatch"}
    assert set(agreement("MMBT4403", "EBC", "my:SOT23-MMBT440X").unknown) == {"pin-order"}


@pytest.mark.parametrize(
    ("value", "symbol", "wrong"),
    [
        ("BC557", "my:Q_NPN_BCE", True),
        ("BC547", "my:Q_NPN_BCE", False),
        ("2N2222A", "my:BC237", False),  # another type, one polarity
        ("BC557", "my:BC547", True),
    ],
)
def test_polarity(value: str, symbol: str, *, wrong: bool) -> None:
    found = agreement(value, "CBE", TO92, symbol)
    assert ("part-polarity" in found.wrong) == wrong


def test_a_description_alone_accuses_nobody() -> None:
    assert not agreement("2N5551", "EBC", TO92, "my:2N5551", "a PNP transistor").wrong


@pytest.mark.parametrize(
    ("value", "footprint", "wrong"),
    [
        ("2N3904", SOT23, True),
        ("MMBT3904", "x:SOT-323_SC-70", True),
        ("MMBT3904", TO92, True),
        ("2N2222A", TO92, False),  # sold in several leaded outlines
        ("S9018", SOT23, False),
        ("TIP31C", TO92, True),
    ],
)
def test_packages(value: str, footprint: str, *, wrong: bool) -> None:
    assert ("package-mismatch" in agreement(value, "BEC", footprint).wrong) == wrong


def test_a_junction_fet_in_a_symbol_of_its_channel_is_no_conflict() -> None:
    pins = {"1": "d|D", "2": "g|G", "3": "s|S"}
    for symbol, wrong in (("Device:Q_NMOS_DGS", False), ("Device:Q_PMOS_DGS", True)):
        part = kicad_part("Q1", symbol, "J310", pins, footprint=TO92)
        circuit = kicad(part, *(resistor(f"R{n}", n, "GND") for n in "dgs"))
        assert ("part-polarity" in circuit.parts["Q1"].agreement.wrong) == wrong
