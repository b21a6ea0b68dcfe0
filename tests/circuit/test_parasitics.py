"""Declared parasitics against the impedance of the same network by hand, from all three places they come from."""

from __future__ import annotations

import numpy as np
import pytest

from checker.setup import Setup
from checker.solve.response import Drive, small_signal
from tests.circuit.make import kicad, kicad_part, resistor
from tests.whole import board_from, intent_text, outcome_from, set_up_from

F_HZ = np.array([1e3, 1e5, 5e6, 25e6, 3e8])
S = 2j * np.pi * F_HZ


def impedance(setup: Setup) -> np.ndarray:
    """Of what stands between net a and ground, from the divider with 100 ohm."""
    drive = Drive(source=setup.circuit.voltages.names.index("V1"))
    a = small_signal(setup.point, F_HZ).voltages(drive)[0, :, setup.circuit.node("a")]
    return np.asarray(100.0 * a / (1.0 - a))


def deck(part: str, said: str = "") -> Setup:
    return set_up_from(f"V1 in 0 1\nR1 in a 100\nR2 a 0 1g\n{part}\n", intent_text(band=None, more=said))


def across(z: np.ndarray, other: complex = 1e9) -> np.ndarray:
    return z * other / (z + other)


def part(ref: str, **keys: str | int) -> str:
    lines = [f'{key} = "{value}"' if isinstance(value, str) else f"{key} = {value}" for key, value in keys.items()]
    return "\n".join(["[[part]]", f'ref = "{ref}"', *lines, ""])


@pytest.mark.parametrize(
    ("text", "said", "z"),
    [
        ("C1 a 0 100n Rser=50m", "", 0.05 + 1.0 / (S * 1e-7)),
        ("C1 a 0 100n Rser=50m Lser=2n", "", 0.05 + S * 2e-9 + 1.0 / (S * 1e-7)),
        ("C1 a 0 100n Rpar=1meg", "", 1e6 / (1.0 + S * 0.1)),
        ("L1 a 0 10u Rser=2 Cpar=3p", "", 1.0 / (S * 3e-12 + 1.0 / (2.0 + S * 1e-5))),
        ("C1 a 0 100n", part("C1", series_resistance="50 mohm", series_inductance="2 nH"),
         0.05 + S * 2e-9 + 1.0 / (S * 1e-7)),
        ("C1 a 0 100n Rser=9", part("C1", series_resistance="50 mohm"), 0.05 + 1.0 / (S * 1e-7)),
        ("C1 a 0 100n", part("C1", self_resonance="25 MHz"),
         S / ((2e6 * np.pi * 25.0) ** 2 * 1e-7) + 1.0 / (S * 1e-7)),
        ("C1 a 0 100n", part("C1", quality=50, quality_at="1 MHz"), 1.0 / (2e6 * np.pi * 1e-7 * 50) + 1.0 / (S * 1e-7)),
        ("L1 a 0 10u", part("L1", self_resonance="25 MHz"),
         1.0 / (S / ((2e6 * np.pi * 25.0) ** 2 * 1e-5) + 1.0 / (S * 1e-5))),
        ("L1 a 0 10u", part("L1", quality=60, quality_at="10 MHz", series_resistance="1 ohm"),
         1.0 / (1.0 / (2e7 * np.pi * 1e-5 * 60) + 1.0 / (1.0 + S * 1e-5))),
    ],
)  # fmt: skip
def test_impedance(text: str, said: str, z: np.ndarray) -> None:
    np.testing.assert_allclose(impedance(deck(text, said)), across(z), rtol=2e-9)


def test_fields_of_a_schematic() -> None:
    circuit = kicad(
        kicad_part("C1", "Device:C", "100n", {"1": "a", "2": "GND"}, fields={"ESR": "50m", "ESL": "2nH"}),
        kicad_part("L1", "Device:L", "10u", {"1": "a", "2": "GND"}, fields={"DCR": "2", "SRF": "25MHz"}),
        resistor("R1", "a", "GND"),
    )
    values = dict(zip(circuit.resistors.names, circuit.resistors.value[0].tolist(), strict=True))
    assert (values["C1.rser"], values["L1.rser"]) == (0.05, 2.0)
    assert circuit.inductors.value[0, circuit.inductors.names.index("C1.lser")] == pytest.approx(2e-9)
    assert circuit.capacitors.value[0, circuit.capacitors.names.index("L1.cpar")] == pytest.approx(
        1.0 / ((2e6 * np.pi * 25.0) ** 2 * 1e-5)
    )


STAGE = (
    "V1 VCC 0 12\nC1 IN B 100n {}\nR1 VCC B 47k\nR2 B 0 10k\nRC VCC C 1k\nRE E 0 1k\nCE E 0 100n {}\n"
    "C2 C OUT 100n\nQ1 C B E QN\n"
)
INTENT = intent_text(("IN", "input", "50 ohm"), ("OUT", "output", "1 kohm"), band=("1 MHz", "30 MHz"))


@pytest.mark.parametrize("extra", ["", "Rser=0.1", "Rser=0.1 Lser=5n", "Lser=5n"])
def test_a_stage_keeps_its_links(extra: str) -> None:
    """Coupling and bypass capacitors are found as whole parts."""
    setup = set_up_from(STAGE.format(extra, extra), INTENT)
    assert [stage.configuration for stage in setup.recognition.stages] == ["common-emitter"]
    board = setup.board(setup.scenarios[:1])
    for name in ("C1", "CE"):
        assert np.isfinite(board.ask("own_loss_db", name).values).all()


def test_the_loss_of_a_capacitor_counts_its_inductance() -> None:
    """40 nH in the emitter's bypass cost gain at 30 MHz, where 100 nF alone is a short."""
    ideal, real = (board_from(STAGE.format("", each), INTENT).ask("own_loss_db", "CE") for each in ("", "Lser=40n"))
    assert abs(ideal.values[0, 1]) < 0.1
    assert real.values[0, 1] > 1.0


@pytest.mark.parametrize(
    ("keys", "said"),
    [({"quality": 50}, "quality_at"), ({"self_resonance": "0 Hz"}, "not above 0")],
)
def test_what_is_declared_by_halves(keys: dict[str, str | int], said: str) -> None:
    from checker.trouble import InputTrouble

    with pytest.raises(InputTrouble, match=said):
        outcome_from(STAGE.format("", ""), INTENT + part("C1", **keys))
