"""Which scenarios a board gets: nominal first, corners by name, states last, equal ones once."""

from __future__ import annotations

import numpy as np
import pytest

from checker.setup import Setup
from checker.spread.corners import MOST
from tests.whole import intent_text, set_up_from

STAGE = "V1 VCC 0 12\nR1 VCC B 47k\nR2 B 0 10k\nRC VCC C 4.7k\nRE E 0 1k\nC1 IN B 10u\nC2 C OUT 10u\nQ1 C B E QN"
AMBIENT = '[ambient]\nmin = "-10 degC"\nnominal = "25 degC"\nmax = "55 degC"\n'
PORTS = (("IN", "input", "600 ohm"), ("OUT", "output", "10 kohm"))


def names(setup: Setup) -> list[str]:
    """Of the scenarios, in order."""
    return [scenario.name for scenario in setup.scenarios]


def test_the_corners_of_one_stage() -> None:
    setup = set_up_from(STAGE, intent_text(*PORTS, more=AMBIENT))
    assert names(setup) == [
        "nominal",
        "-10 degC",
        "55 degC",
        "current gain lowest",
        "current gain highest",
        "capacitors smallest",
        "capacitors largest",
        "current of Q1 highest",
        "current of Q1 lowest",
    ]
    assert [s.kind for s in setup.scenarios] == ["nominal"] + ["corner"] * 8


def test_no_ambient_no_temperature_corner() -> None:
    assert not any("degC" in name for name in names(set_up_from(STAGE, intent_text(*PORTS))))


def test_an_ambient_on_one_side_alone() -> None:
    hot = '[ambient]\nnominal = "25 degC"\nmax = "55 degC"\n'
    assert [n for n in names(set_up_from(STAGE, intent_text(*PORTS, more=hot))) if "degC" in n] == ["55 degC"]


def test_states_come_last_and_keep_their_names() -> None:
    netlist = "XJ1 CTRL 0 CONN_01X02\nXJ2 VCC 0 CONN_01X02\nR1 CTRL B 1k\nR2 B 0 10k\nRL VCC C 400\nQ1 C B 0 QN"
    states = '[rails]\n"VCC" = "12 V"\n[[state]]\nname = "on"\npins = { "J1.1" = "3.3 V" }\n'
    states += '[[state]]\nname = "off"\npins = { "J1.1" = "low" }\n'
    setup = set_up_from(netlist, intent_text(band=None, more=states))
    assert names(setup)[-2:] == ["on", "off"]
    assert [s.kind for s in setup.scenarios[-2:]] == ["state", "state"]


def test_equal_corners_are_one() -> None:
    """A mirror's two transistors follow the same resistor: one pair of corners, named after the first."""
    mirror = "V1 VCC 0 12\nR1 VCC M 10k\nQ1 M M 0 QN\nQ2 X M 0 QN\nV2 X 0 6"
    currents = [n for n in names(set_up_from(mirror, intent_text(band=None))) if n.startswith("current of")]
    assert currents == ["current of Q1 highest", "current of Q1 lowest"]


def test_there_is_an_end_to_corners() -> None:
    stage = "R1{n} VCC B{n} 47k\nR2{n} B{n} 0 10k\nRC{n} VCC C{n} 4.7k\nRE{n} E{n} 0 1k\nQ{n} C{n} B{n} E{n} QN\n"
    netlist = "V1 VCC 0 12\n" + "".join(stage.format(n=n) for n in range(30))
    assert len(set_up_from(netlist, intent_text(band=None)).scenarios) == MOST


def test_the_board_has_all_of_them_on_axis_0() -> None:
    setup = set_up_from(STAGE, intent_text(*PORTS, more=AMBIENT))
    board = setup.board(setup.scenarios)
    assert board.ask("ic_a", "Q1").values.shape == (9, 1)
    assert board.ask("voltage_gain_db", "Q1").values.shape == (9, 3)
    assert np.isfinite(board.ask("voltage_gain_db", "Q1").values).all()


def test_frequencies_without_a_band() -> None:
    """Two RC corners bound the response; the middle of what lies within 1 dB is looked at, and told."""
    setup = set_up_from(STAGE, intent_text(*PORTS, band=None))
    assert 100.0 < setup.f0_hz < 1e6
    assert any(words.startswith("no band declared") for words in setup.recognition.assumptions)


@pytest.mark.parametrize(
    ("band", "f0"), [(("100 Hz", "10 kHz"), 1e3), (("0 Hz", "5 kHz"), 500.0), (("0 Hz", "1 MHz"), 1e3)]
)
def test_f0(band: tuple[str, str], f0: float) -> None:
    """Geometric mean; with a low edge of 0, min(1 kHz, high/10)."""
    assert set_up_from(STAGE, intent_text(*PORTS, band=band)).f0_hz == pytest.approx(f0, rel=1e-9)
