"""Textbook stages as netlists, read and judged from end to end: the edit is found, the original is not blamed."""

from __future__ import annotations

import math
from pathlib import Path

from checker.pipeline import check_board
from checker.record import Finding, Report
from tests.published.book import VT_25C, assert_within, parallel, saturation_for

BAND = """
[band]
low = "{low}"
high = "{high}"
[ambient]
nominal = "25 degC"
"""
PORTS = """
[[port]]
name = "source"
net = "IN"
role = "input"
{reference}
[[port]]
name = "load"
net = "OUT"
role = "output"
attach = false
"""


def _checked(folder: Path, parts: str, *, low: str, high: str, reference: str = "") -> Report:
    netlist = folder / "board.cir"
    netlist.write_text(f"textbook stage\n{parts}\n.end\n", encoding="utf-8")
    intent = folder / "board.intent.toml"
    intent.write_text(BAND.format(low=low, high=high) + PORTS.format(reference=reference), encoding="utf-8")
    return check_board(netlist, intent).report


def _found(report: Report, rule: str) -> list[Finding]:
    return [f for f in report.findings if f.rule == rule]


def _bell(base_capacitor: bool) -> str:
    """A26: hie 2.1k, hfe 75, divider 68k/56k, RE 4.7k, RC 3.9k, RL 82k; supply chosen for the current.

    The source behind 600 ohm is that of the neighbouring Ex 6.12.
    """
    ic = 75.0 * VT_25C / 2.1e3
    ib = ic / 75.0
    vcc = ((ic + ib) * 4.7e3 + 0.7 + ib * parallel(68e3, 56e3)) * 124.0 / 56.0
    return f"""VCC VCC 0 {vcc:.6g}
VS S 0 AC 1
RS S IN 600
C1 IN E 470u
RE E 0 4.7k
R1 VCC B 68k
R2 B 0 56k
{"C2 B 0 100u" if base_capacitor else "* no base capacitor"}
RC VCC C 3.9k
C3 C OUT 10u
RL OUT 0 82k
Q1 C B E BELL
.model BELL NPN(IS={saturation_for(ic):.6g} BF=75 TNOM=25)"""


def test_base_capacitor_left_out_is_found(tmp_path: Path) -> None:
    """X1 from Bell Ex 6.10 and 6.11: without its capacitor the base is no ground, and 27 ohm become 395."""
    report = _checked(tmp_path, _bell(False), low="10 kHz", high="100 kHz")
    (finding,) = _found(report, "base-not-grounded")
    assert finding.outcome == "violates"
    assert "Q1" in finding.subject
    (stage,) = report.stages
    assert stage.specs.input_impedance_ohm is not None
    # Bell 395.4 exact; the band adds the reactance of C1 alone, a milliohm.
    assert_within(stage.specs.input_impedance_ohm.re, 395.4, 2e-3)


def test_base_capacitor_in_place_raises_nothing(tmp_path: Path) -> None:
    """X1, the original."""
    report = _checked(tmp_path, _bell(True), low="10 kHz", high="100 kHz")
    assert report.findings == ()
    (stage,) = report.stages
    assert stage.configuration == "common-base"
    assert stage.specs.input_impedance_ohm is not None
    assert_within(stage.specs.input_impedance_ohm.re, 27.47, 3e-3)


def _malvino(emitter_ohm: float) -> str:
    """A19: 10 V, 10k/2.2k, RC 3.6k, RL 10k; RE sets the current."""
    return f"""VCC VCC 0 10
C1 IN E 1u
RE E 0 {emitter_ohm:g}
R1 VCC B 10k
R2 B 0 2.2k
C2 B 0 10u
RC VCC C 3.6k
C3 C OUT 1u
RL OUT 0 10k
Q1 C B E MALVINO
.model MALVINO NPN(IS={saturation_for(0.514e-3):.6g} BF=400 TNOM=25)"""


def test_matched_common_base_raises_nothing(tmp_path: Path) -> None:
    """X2, the original: Malvino & Bates Ex 11-11 at .514 mA on 50 ohm."""
    report = _checked(tmp_path, _malvino(2137.0), low="1 MHz", high="10 MHz", reference='impedance = "50 ohm"')
    assert report.findings == ()
    assert report.stages[0].bias is not None
    assert_within(float(report.stages[0].bias.ic_a or 0.0), 0.514e-3, 1e-3)


def test_too_much_current_in_a_common_base_input_is_found(tmp_path: Path) -> None:
    """X2: 2 mA instead: about 4.6 dB of return loss on 50 ohm (R20 says 4.57 with RE left out)."""
    report = _checked(tmp_path, _malvino(537.0), low="1 MHz", high="10 MHz", reference='impedance = "50 ohm"')
    (finding,) = _found(report, "input-mismatch")
    assert finding.outcome == "violates"
    port = next(p for p in report.ports if p.name == "source")
    assert port.return_loss_db is not None
    assert abs(port.return_loss_db - 4.57) < 0.15
    assert finding.measured is not None
    assert abs(float(finding.measured.value) - 4.57) < 0.15


def _common_emitter(vcc: float, r1: float, r2: float, rc: float, re: float, bypass: str, model: str) -> str:
    return f"""VCC VCC 0 {vcc:.6g}
VS S 0 AC 1
RS S IN 1
C1 IN B 100u
R1 VCC B {r1:g}
R2 B 0 {r2:g}
RC VCC C {rc:g}
RE E 0 {re:g}
C2 E 0 {bypass}
C3 C OUT 100u
RL OUT 0 1meg
Q1 C B E BOOK
.model BOOK NPN({model} TNOM=25)"""


def test_soft_divider_is_found_and_not_called_saturated(tmp_path: Path) -> None:
    """X4 from Boylestad & Nashelsky (earlier printing) Ex 4.10: the shortcut without base current is 31 % off."""
    parts = _common_emitter(18.0, 82e3, 22e3, 5.6e3, 1.2e3, "1000u", f"IS={saturation_for(1.9783e-3):.6g} BF=50")
    report = _checked(tmp_path, parts, low="1 kHz", high="10 kHz")
    (finding,) = _found(report, "soft-divider")
    assert "Q1" in finding.subject or {"R1", "R2"} & set(finding.subject)
    assert _found(report, "saturated-at-rest") == []
    assert report.stages[0].bias is not None
    assert_within(float(report.stages[0].bias.ic_a or 0.0), 1.9783e-3, 2e-3)


def _bell_12_1() -> str:
    """L6: RE 330, hie 1k, hfe 50, RC 3.3k and 4.7 uF; divider of a tenth of what the base could disturb."""
    ic = 50.0 * VT_25C / 1e3
    base = 0.7 + ic * 1.02 * 330.0
    r2 = 1e3
    r1 = (12.0 - base) / (base / r2 + ic / 50.0)
    return _common_emitter(12.0, r1, r2, 3.3e3, 330.0, "4.7u", f"IS={saturation_for(ic):.6g} BF=50")


def test_undersized_bypass_is_found_from_the_bottom_of_the_band(tmp_path: Path) -> None:
    """X11 from Bell Ex 12.1: 4.7 uF across 330 ohm at 100 Hz leaves 8 % of the gain (6 % with RE left out)."""
    report = _checked(tmp_path, _bell_12_1(), low="100 Hz", high="100 kHz")
    (finding,) = _found(report, "bypass-loss")
    assert finding.outcome == "violates"
    assert "C2" in finding.subject
    assert finding.measured is not None
    z_e = 1.0 / (1 / 330.0 + 2j * math.pi * 100.0 * 4.7e-6)
    loss_db = 20.0 * math.log10(abs(1e3 + 51.0 * z_e) / 1e3)
    # The 1 ohm source and the coupling capacitor, 16 ohm at 100 Hz beside 1 kohm, move it a little.
    assert abs(float(finding.measured.value) - loss_db) < 0.5


def test_the_same_bypass_is_enough_for_a_higher_band(tmp_path: Path) -> None:
    """X11, the band from 10 kHz on."""
    assert _checked(tmp_path, _bell_12_1(), low="10 kHz", high="100 kHz").findings == ()


def test_the_same_stage_on_the_other_line_is_judged_by_its_limit(tmp_path: Path) -> None:
    """X10 from R20: matched to 50 ohm, the stage is 14 dB off a 75 ohm line; a limit of 20 dB finds it.

    13.98 dB is 50 ohm itself; VT/IE with RE beside it is 48.7 ohm and 13.46 dB.
    """
    netlist = tmp_path / "board.cir"
    netlist.write_text(f"textbook stage\n{_malvino(2137.0)}\n.end\n", encoding="utf-8")
    intent = tmp_path / "board.intent.toml"
    ports = PORTS.format(reference='impedance = "75 ohm"')
    limit = "[limits.input-mismatch]\nreturn_loss_db = 20\n"
    intent.write_text(BAND.format(low="1 MHz", high="10 MHz") + ports + limit, encoding="utf-8")
    report = check_board(netlist, intent).report
    (finding,) = _found(report, "input-mismatch")
    port = next(p for p in report.ports if p.name == "source")
    assert port.return_loss_db is not None
    z = parallel(VT_25C / (0.514e-3 * 401 / 400), 2137.0)
    assert abs(port.return_loss_db + 20.0 * math.log10((75.0 - z) / (75.0 + z))) < 0.02
    assert finding.outcome == "violates"
