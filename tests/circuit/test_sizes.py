"""Ratings of passive parts from text, fields and footprint, each with where it is from."""

from __future__ import annotations

import pytest

from checker.circuit.sizes import AXIAL, CHIP, chip_size, stated_watts
from checker.circuit.types import PartFact
from tests.circuit.make import kicad, kicad_part, resistor


def fact(value: str, footprint: str = "", **more: object) -> PartFact:
    part = kicad_part("R9", "Device:R", value, {"1": "a", "2": "GND"}, footprint=footprint, **more)
    return kicad(part, resistor("R1", "a", "GND")).parts["R9"]


@pytest.mark.parametrize(
    ("footprint", "size"),
    [
        ("Resistor_SMD:R_0805_2012Metric", "0805"),
        ("R_0603_1608Metric_Pad0.98x0.95mm_HandSolder", "0603"),
        ("SM0805", "0805"),
        ("Package_SO:SOIC-8_3.9x4.9mm", ""),
        ("x:C_1206", "1206"),
    ],
)
def test_sizes(footprint: str, size: str) -> None:
    assert chip_size(footprint) == size


@pytest.mark.parametrize(
    ("text", "watts"),
    [("10R 1/2W", 0.5), ("0R22 2W", 2.0), ("1k 100mW", 0.1), ("4k7 0,25 W", 0.25), ("1k", None), ("1W5", None)],
)
def test_watts(text: str, watts: float | None) -> None:
    assert stated_watts(text) == watts


def test_common_practice_is_marked_as_what_it_is() -> None:
    """Chip sizes: 0402 1/16 W, 0603 1/10 W, 0805 1/8 W, 1206 1/4 W, 2512 1 W (common practice, no source)."""
    assert [CHIP[size][0] for size in ("0402", "0603", "0805", "1206", "2512")] == [0.063, 0.1, 0.125, 0.25, 1.0]
    assert AXIAL["0207"] == 0.25
    found = fact("1k", "Resistor_SMD:R_0805_2012Metric")
    assert (found.ratings.p_max_w, found.ratings.v_max_v) == (0.125, 150.0)
    assert "common practice, no source" in found.ratings_source


def test_text_outranks_the_footprint() -> None:
    found = fact("1k 1/2W", "Resistor_SMD:R_0805_2012Metric")
    assert found.ratings.p_max_w == 0.5 and "power by the value" in found.ratings_source


def test_a_field_tells_too() -> None:
    found = fact("1k", "", fields={"Power": "2W"})
    assert found.ratings.p_max_w == 2.0 and found.ratings_source == "power by the field Power"


def test_volts_of_a_capacitor() -> None:
    part = kicad_part("C9", "Device:C", "10uF/25V", {"1": "a", "2": "GND"})
    found = kicad(part, resistor("R1", "a", "GND")).parts["C9"]
    assert found.ratings.v_max_v == 25.0 and found.ratings_source == "voltage by the value"


def test_nothing_said_is_nothing_known() -> None:
    found = fact("1k")
    assert found.ratings.p_max_w is None and found.ratings_source == ""
    assert found.value is not None and found.value.assumed_tolerance
    assert not fact("1k 1%").value.assumed_tolerance  # type: ignore[union-attr]
