from __future__ import annotations

import random
from pathlib import Path

import numpy as np
import pytest

from checker.circuit.build import build_circuit
from checker.circuit.types import Circuit
from checker.intent.read import read_intent
from checker.intent.types import Ambient, Band, Intent
from checker.netlist.read import read_netlist
from tests.circuit.make import (
    assumed,
    bipolar,
    kicad,
    kicad_part,
    model,
    netlist,
    resistor,
    spice,
    spice_part,
    volts,
)

SAMPLES = Path(__file__).parents[2] / "sample_schematics"
BOARDS = sorted(path.name for path in SAMPLES.iterdir() if path.is_dir())


def tables(circuit: Circuit) -> dict[str, object]:
    """Everything that a solve uses, but for the name of ground, which is the format's."""
    made: dict[str, object] = {"nets": circuit.nets[1:], "rails": circuit.rails}
    made["temperature"] = circuit.temperature_k.tolist()
    for name in ("resistors", "capacitors", "inductors", "voltages", "currents"):
        table = getattr(circuit, name)
        made[name] = (table.names, table.nodes.tolist(), table.value.tolist())
    for name in ("bipolars", "diodes"):
        table = getattr(circuit, name)
        params = {key: value.tolist() for key, value in table.params.items()}
        made[name] = (table.names, table.nodes.tolist(), table.polarity.tolist(), params, table.tnom_k.tolist())
    return made


@pytest.mark.parametrize("board", BOARDS)
def test_both_formats_of_a_board_are_one_circuit(board: str) -> None:
    folder = SAMPLES / board
    intent = read_intent(folder / f"{board}.intent.toml")
    text, export = (build_circuit(read_netlist(folder / f"{board}.{end}"), intent) for end in ("cir", "net"))
    assert tables(text) == tables(export)
    assert [(port.name, port.net, port.role, port.load) for port in text.ports] == [
        (port.name, port.net, port.role, port.load) for port in export.ports
    ]
    assert text.unknowns == export.unknowns == ()


@pytest.mark.parametrize("seed", range(5))
def test_the_order_of_lines_changes_nothing(seed: int) -> None:
    board = read_netlist(SAMPLES / "coax_cascade" / "coax_cascade.cir")
    parts = list(board.parts)
    random.Random(seed).shuffle(parts)  # noqa: S311
    shuffled = netlist(parts, models=board.models.values())
    assert tables(build_circuit(board, Intent())) == tables(build_circuit(shuffled, Intent()))
    assert build_circuit(board, Intent()).assumptions == build_circuit(shuffled, Intent()).assumptions


def test_families_that_a_board_has_none_of_are_empty() -> None:
    circuit = spice(spice_part("R1", "a 0", 1e3))
    assert circuit.devices == {} and circuit.bipolars.names == circuit.diodes.names == ()
    assert circuit.capacitors.nodes.shape == (0, 2) and circuit.couplings.k.shape == (1, 0)


def test_an_empty_netlist_is_a_circuit() -> None:
    circuit = build_circuit(netlist([]), Intent())
    assert circuit.nets == ("0",) and circuit.parts == {}


def test_nets_without_elements_have_no_node() -> None:
    circuit = kicad(resistor("R1", "a", "GND"), kicad_part("U1", "my:X", "x", {"1": "bus||output"}))
    assert circuit.nets == ("GND", "a")
    assert circuit.parts["U1"].terminals == {"1": "bus"}


@pytest.mark.parametrize(
    ("said", "written", "expected"), [(25.0, 40.0, 298.15), (None, 40.0, 313.15), (None, None, 300.15)]
)
def test_nominal_temperature(said: float | None, written: float | None, expected: float) -> None:
    intent = Intent(ambient=Ambient(nominal_c=said))
    circuit = spice(spice_part("R1", "a 0", 1e3), intent=intent, temperature_c=written)
    np.testing.assert_allclose(circuit.temperature_k, [expected], rtol=1e-15)


def test_the_band_is_carried() -> None:
    assert spice(spice_part("R1", "a 0", 1.0), intent=Intent(band=Band(low_hz=0.0, high_hz=5.0))).band_hz == (0.0, 5.0)


def test_natural_order_of_elements() -> None:
    circuit = spice(*(spice_part(f"R{place}", f"n{place} 0", 1e3) for place in (10, 2, 1)))
    assert circuit.resistors.names == ("R1", "R2", "R10") and circuit.nets == ("0", "n1", "n2", "n10")


# --- supplies that nothing shows ----------------------------------------------------------------------------

BCE = {"1": "b|B", "2": "c|C", "3": "GND|E"}


def test_a_schematic_stage_that_only_ground_feeds_is_unsupplied_not_cut_off() -> None:
    circuit = kicad(
        kicad_part("Q1", "my:2N3904", "2N3904", BCE), resistor("R1", "feed", "c"), resistor("R2", "feed", "b"),
        kicad_part("J1", "Connector:Conn_01x02", "x", {"1": "feed", "2": "GND"}),
    )  # fmt: skip
    (unknown,) = circuit.unknowns
    assert (unknown.datum, unknown.blocks_dc, unknown.nets) == ("the supply of Q1", True, ("b", "c", "feed"))
    assert '"feed"' in unknown.supply


def test_a_fed_stage_and_spice_text_are_taken_as_written() -> None:
    fed = kicad(kicad_part("Q1", "my:2N3904", "2N3904", BCE), resistor("R1", "+5V", "c"), resistor("R2", "c", "b"))
    assert fed.unknowns == ()
    text = spice(bipolar("Q1", "c b 0", "N"), spice_part("R1", "c b", 1e3), models=[model("N", "npn")])
    assert text.unknowns == ()


def test_a_link_carries_the_supply_on() -> None:
    circuit = kicad(
        kicad_part("Q1", "my:2N3904", "2N3904", BCE), kicad_part("F1", "Device:Fuse", "1A", {"1": "+5V", "2": "x"}),
        resistor("R1", "x", "c"), resistor("R2", "c", "b"),
    )  # fmt: skip
    assert circuit.unknowns == () and assumed(circuit, "F1", "as a wire")


def test_sources_placed_once_only() -> None:
    circuit = spice(volts("V1", "a 0", 5.0), spice_part("R1", "a 0", 1e3))
    assert circuit.voltages.names == ("V1",)
