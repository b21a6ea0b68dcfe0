"""From the value text of a schematic to a card, and from a footprint to its pins."""

from __future__ import annotations

import subprocess
import sys
import time
from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from checker.cards.find import all_names, find_card, generic_card
from checker.cards.index import index_text
from checker.cards.load import DATA, INDEX, card_from, families, rows
from checker.cards.pins import package_of, pin_map
from checker.cards.types import CardKind

KINDS: tuple[CardKind, ...] = ("npn", "pnp", "diode", "zener", "led", "njf", "pjf", "nmos", "pmos")


@pytest.mark.parametrize(
    ("value", "name", "kind"),
    [
        ("2N3904", "2N3904", "npn"),
        ("2n3904 ", "2N3904", "npn"),
        ("2N3904BU", "2N3904", "npn"),
        ("2N3904_SOT23", "2N3904", "npn"),
        ("2N3904 (NPN)", "2N3904", "npn"),
        ("BC547", "BC547", "npn"),
        ("BC547B", "BC547B", "npn"),
        ("BC 547 B", "BC547B", "npn"),
        ("BC547BTA", "BC547B", "npn"),
        ("BC547BU", "BC547", "npn"),
        ("BC847B,215", "BC847B", "npn"),
        ("BC847BLT1G", "BC847B", "npn"),
        ("SBC847BLT1G", "BC847B", "npn"),
        ("BC847CE6327HTSA1", "BC847C", "npn"),
        ("BC847BW-7-F", "BC847BW", "npn"),
        ("BC857 (A-1345", "BC857", "pnp"),
        ("BC817-25", "BC817-25", "npn"),
        ("BC817-25W", "BC817-25W", "npn"),
        ("BC327-40ZL1G", "BC327-40", "pnp"),
        ("MMBT2222A-7-F", "MMBT2222A", "npn"),
        ("MMBT2222LT1G", "MMBT2222", "npn"),
        ("MMBT3904WT1G", "MMBT3904W", "npn"),
        ("JANTX2N2222A", "2N2222A", "npn"),
        ("2SC1815-GR", "2SC1815GR", "npn"),
        ("C1815", "2SC1815", "npn"),
        ("SS9018GBU", "S9018G", "npn"),
        ("1N4148W-7-F", "1N4148W", "diode"),
        ("IN4148", "1N4148", "diode"),
        ("green", "LED-GREEN", "led"),
        ("1N4007-T", "1N4007", "diode"),
        ("1N4001-E3/54", "1N4001", "diode"),
        ("BZX84C5V1", "BZX84-C5V1", "zener"),
        ("BZV55-B15", "BZX55-C15", "zener"),
        ("Red LED", "LED-RED", "led"),
        ("IRF510PBF", "IRF510", "nmos"),
        ("BSS84LT1G", "BSS84", "pmos"),
        ("MMBFJ310LT1G", "MMBFJ310", "njf"),
        ("BC547/BC548", "BC547", "npn"),
        ("generic-npn", "generic-npn", "npn"),
    ],
)
def test_known_values(value: str, name: str, kind: str) -> None:
    card = find_card(value)
    assert card is not None
    assert (card.name, card.kind) == (name, kind)


@pytest.mark.parametrize(
    "value",
    [
        *("", " ", "(", "/", "10k", "100n", "Q", "NPN", "Q_NPN_BEC", "LED", "D_Zener", "DNP"),
        *("BC", "BC54", "BC547D", "2N39044", "2N3904A", "IRF510N", "12N3904"),
        "BC847BPN",  # one of each polarity
        "BC547/BC557",  # two polarities
        "2N3904/6",
        "BF245A/B/C",
        "2N3906 NPN",  # contradicts itself
        "2N3904 PNP",
        "2N3904" * 1000,
        "\x00\u202e2N3904",
    ],
)
def test_doubt_is_no_card(value: str) -> None:
    assert find_card(value) is None


@settings(max_examples=300, deadline=None)
@given(st.text(max_size=40) | st.builds(lambda a, b: a + b, st.sampled_from(all_names()), st.text(max_size=6)))
def test_any_text_is_answered(value: str) -> None:
    card = find_card(value)
    assert card is None or card.kind in KINDS


def test_a_hostile_text_takes_no_time() -> None:
    start = time.perf_counter()
    for value in ("BC847" + "Z" * 10**6, "2N" * 10**6, "/" * 10**6, " " * 10**6):
        assert find_card(value) is None
        package_of(value)
    assert time.perf_counter() - start < 2.0


@pytest.mark.parametrize("name", all_names())
def test_every_name_and_alias_finds_its_own_card(name: str) -> None:
    card = find_card(name)
    assert card is not None and card.name == name
    for alias in card.aliases:
        found = find_card(alias)
        assert found is not None and found.name == name


@pytest.mark.parametrize("kind", KINDS)
def test_generic_cards_are_marked_assumed(kind: CardKind) -> None:
    card = generic_card(kind)
    assert (card.kind, card.assumed) == (kind, True)
    assert card.ratings.p_max_w is None


def test_only_generic_cards_are_assumed() -> None:
    for family in families():
        for row in rows(family).values():
            assert card_from(row).assumed == (family == "generic")


def test_the_index_is_made_from_the_card_files() -> None:
    assert (DATA / INDEX).read_text("utf-8") == index_text()


def test_one_part_a_line_and_no_name_twice() -> None:
    for family in families():
        content = (DATA / f"{family}.json").read_text("utf-8").splitlines()
        parts = [line for line in content if '"name":' in line]
        assert len(parts) == len({row["name"] for row in rows(family).values()})
        assert all(line.count('"name":') == 1 for line in parts)


def test_a_lookup_reads_only_the_family_it_needs() -> None:
    script = (
        "import time; from checker.cards import find, load; start = time.perf_counter();"
        "assert find.find_card('BC547B'); print(time.perf_counter() - start, load.rows.cache_info().misses)"
    )
    root = Path(__file__).parents[2]
    done = subprocess.run([sys.executable, "-c", script], cwd=root, capture_output=True, text=True, check=True)
    seconds, families_read = done.stdout.split()
    assert int(families_read) == 1
    assert float(seconds) < 0.05  # some 2 ms on a quiet machine


@pytest.mark.parametrize(
    ("footprint", "package"),
    [
        ("Package_TO_SOT_SMD:SOT-23", "SOT-23"),
        ("TO_SOT_Packages_SMD:SOT-23_Handsoldering", "SOT-23"),
        ("lib:SOT-23-3", "SOT-23"),
        ("SOT23-2N7002", "SOT-23"),
        ("Package_TO_SOT_SMD:SOT-23-5", None),
        ("Package_TO_SOT_SMD:SOT-23-6", None),
        ("TSOT-23", None),
        ("Package_TO_SOT_SMD:SOT-323_SC-70", "SOT-323"),
        ("TO_SOT_Packages_SMD:SOT-363_SC-70-6_Handsoldering", "SOT-363"),
        ("TO_SOT_Packages_SMD:SOT-353_SC-70-5_Handsoldering", None),
        ("Package_TO_SOT_SMD:SOT-223-3_TabPin2", "SOT-223"),
        ("SC-59", "SC-59"),
        ("Package_TO_SOT_THT:TO-92_Inline", "TO-92"),
        ("Housings_TO-92:TO-92_Inline_Narrow_Oval", "TO-92"),
        ("TO-92-2", None),
        ("Package_TO_SOT_THT:TO-18-3", "TO-18"),
        ("Package_TO_SOT_THT:TO-39-3", "TO-39"),
        ("Package_TO_SOT_THT:TO-126-3_Vertical", "TO-126"),
        ("Package_TO_SOT_THT:TO-220-3_Vertical", "TO-220"),
        ("Package_TO_SOT_THT:TO-220-2_Vertical", None),
        ("Package_TO_SOT_THT:TO-3P-3_Vertical", "TO-247"),
        ("Diode_SMD:D_SOD-123", "two-lead"),
        ("Diode_THT:D_DO-41_SOD81_P10.16mm_Horizontal", "two-lead"),
        ("Diode_SMD:D_SMA", "two-lead"),
        ("Connector_Coaxial:SMA_Amphenol_132134_Vertical", None),
        ("Diode_SMD:D_MiniMELF_Handsoldering", "two-lead"),
        ("LED_SMD:LED_0805_2012Metric", "two-lead"),
        ("LED_THT:LED_D5.0mm-4_RGB", None),
        ("SOIC-8", None),
        ("", None),
    ],
)
def test_package_of_a_footprint(footprint: str, package: str | None) -> None:
    assert package_of(footprint) == package


@pytest.mark.parametrize(
    ("value", "footprint", "pins"),
    [
        # pad orders from memory of data sheets
        ("2N3904", "TO-92_Inline", {"1": "E", "2": "B", "3": "C"}),
        ("BC547", "TO-92_Inline", {"1": "C", "2": "B", "3": "E"}),
        ("BC639", "TO-92_Inline", {"1": "E", "2": "C", "3": "B"}),
        ("MMBT3904", "SOT-23", {"1": "B", "2": "E", "3": "C"}),
        ("2SC2712", "SC-59", {"1": "B", "2": "E", "3": "C"}),
        ("BC847", "SC-59", {"1": "B", "2": "E", "3": "C"}),
        ("BC847", "SOT-323_SC-70", None),  # the type is not made in this outline under this name
        ("2N3904", "SOT-23", None),
        ("BFP420", "SOT-343_SC-70-4", {"1": "B", "2": "E", "3": "C", "4": "E"}),
        ("BC847BS", "SOT-363", {"1": "E1", "2": "B1", "3": "C2", "4": "E2", "5": "B2", "6": "C1"}),
        ("BAS16", "SOT-23", {"1": "A", "3": "K"}),
        ("BAV70", "SOT-23", {"1": "A1", "2": "A2", "3": "K1K2"}),
        ("1N4148", "D_DO-35_SOD27_P7.62mm_Horizontal", {"1": "K", "2": "A"}),
        ("2N7000", "TO-92_Inline", {"1": "S", "2": "G", "3": "D"}),
        ("BS170", "TO-92_Inline", {"1": "D", "2": "G", "3": "S"}),
        ("BCP56", "SOT-223", {"1": "B", "2": "C", "3": "E", "4": "C"}),
        ("2N3819", "TO-92_Inline", None),  # makers differ
    ],
)
def test_pin_map(value: str, footprint: str, pins: dict[str, str] | None) -> None:
    card = find_card(value)
    assert card is not None
    assert pin_map(card, footprint) == pins


@pytest.mark.parametrize(
    ("name", "r1", "r2"),
    [
        ("PDTC114ET", 10e3, 10e3),
        ("DTA143ZE", 4.7e3, 47e3),
        ("MUN5212DW1T1G", 22e3, 22e3),
        ("MMUN2215LT1G", 10e3, None),
        ("DTC144EUA", 47e3, 47e3),
    ],
)
def test_base_resistors_by_the_code_in_the_name(name: str, r1: float, r2: float | None) -> None:
    """114E 10 k/10 k, 143Z 4.7 k/47 k, 144E 47 k/47 k; 5212 22 k/22 k, 2215 10 k alone (makers' codes, from memory)."""
    card = find_card(name)
    assert card is not None
    assert card.resistors == ({"r1": r1} if r2 is None else {"r1": r1, "r2": r2})


def test_a_darlington_has_a_driver() -> None:
    card = find_card("TIP122")
    assert card is not None and card.driver is not None and card.driver.driver is None
    assert card.ratings.v_max_v == 100 and card.driver.ratings.v_max_v is None
    assert card.resistors == {"be1": 8e3, "be2": 120.0}
