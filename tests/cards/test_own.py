"""A project's own cards: what they add to a card of the library, and what is refused."""

from __future__ import annotations

from pathlib import Path

import pytest

from checker.cards.own import read_cards
from checker.intent.types import Intent
from checker.pipeline import ready
from checker.trouble import InputTrouble
from tests.circuit.make import kicad_part, netlist, resistor

GOOD = """
[[card]]
name = "HOUSE-NPN-1"
like = "BC547B"
v_max_v = 60
gain = [300, 400, 500, 0.002, 5.0]
packages = { "SOT-23" = "BEC" }
source = "our drawing"
"""


def written(folder: Path, text: str) -> Path:
    path = folder / "cards.toml"
    path.write_text(text.replace('"BC547B"', '"BC547"'), "utf-8")
    return path


def test_what_is_not_given_is_as_in_the_card_it_is_like(tmp_path: Path) -> None:
    (card,) = read_cards(written(tmp_path, GOOD)).values()
    assert (card.name, card.kind, card.source) == ("HOUSE-NPN-1", "npn", "our drawing")
    assert card.ratings.v_max_v == 60 and card.ratings.i_max_a == 0.1
    assert (card.gain_min, card.gain_max) == (300.0, 500.0)
    assert card.packages == {"SOT-23": {"1": "B", "2": "E", "3": "C"}}


def test_it_outranks_the_library_and_serves_the_board(tmp_path: Path) -> None:
    from checker.circuit.build import build_circuit

    text = GOOD.replace("HOUSE-NPN-1", "2N3904")
    own = read_cards(written(tmp_path, text))
    board = netlist(
        [
            kicad_part("Q1", "Device:Q_NPN", "2N3904", {"1": "b|B", "2": "c|C", "3": "GND|E"}),
            resistor("R1", "b", "+5V"),
            resistor("R2", "c", "+5V"),
        ],
        format="kicad",
    )
    fact = build_circuit(board, Intent(), own).parts["Q1"]
    assert fact.card is not None and fact.card.source == "our drawing"


def test_the_file_beside_the_netlist_is_read(tmp_path: Path) -> None:
    board = tmp_path / "board.cir"
    board.write_text("* own\nV1 vcc 0 5\nR1 vcc b 100k\nR2 vcc c 1k\nQ1 c b 0 HOUSE-NPN-1\n.end\n", "utf-8")
    written(tmp_path, GOOD)
    card = ready(board, None).circuit.parts["Q1"].card
    assert card is not None and card.name == "HOUSE-NPN-1"


@pytest.mark.parametrize(
    ("text", "words"),
    [
        ("[[card]]\nname = 'A1'\nlike = 'NO SUCH'\n", "like"),
        ("[[card]]\nlike = 'BC547'\n", "name is missing"),
        ("[[card]]\nname = 'A1'\nlike = 'BC547'\nvmax = 3\n", "'vmax' is no key"),
        ("[[card]]\nname = 'A1'\nlike = 'BC547'\nv_max_v = 'high'\n", "not of the form"),
        ("[[card]]\nname = 'A1'\nlike = 'BC547'\nv_max_v = -3\n", "not of the form"),
        ("[[card]]\nname = 'A1'\nlike = 'BC547'\ngain = [1, 2]\n", "not of the form"),
        ("[card\n", "TOML"),
        ("other = 1\n", "nothing else"),
        ("[[card]]\nname='A1'\nlike='BC547'\n[[card]]\nname='A 1'\nlike='BC547'\n", "twice"),
    ],
)
def test_what_is_refused_names_the_file(tmp_path: Path, text: str, words: str) -> None:
    with pytest.raises(InputTrouble, match=words) as caught:
        read_cards(written(tmp_path, text))
    assert "cards.toml" in str(caught.value)
