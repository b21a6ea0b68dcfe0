"""A fingerprint survives renumbering, reformatting and new values, and only equal places share one."""

from __future__ import annotations

import re
from pathlib import Path

import pytest

from checker.record import Finding, Report
from tests.compare.boards import PLANTED, SAMPLES, lay, renumbered, report_of, shuffled_lines

FAULTY = [SAMPLES / "audio_follower" / "audio_follower.cir"]
FAULTY += sorted(path for path in PLANTED.glob("*.cir") if not path.stem.startswith("clean"))


def prints(report: Report) -> dict[str, tuple[str, str]]:
    return {finding.fingerprint: (finding.rule, finding.severity) for finding in report.findings}


def texts(path: Path) -> tuple[str, str]:
    return path.read_text("utf-8"), path.with_name(f"{path.stem}.intent.toml").read_text("utf-8")


@pytest.mark.parametrize("path", FAULTY, ids=lambda path: path.stem)
def test_renumbering_and_reordering_keep_every_fingerprint(path: Path, tmp_path: Path) -> None:
    text, intent = texts(path)
    before = prints(report_of(path))
    assert before
    for seed in (1, 2):
        other, said, _ = renumbered(text, intent, seed)
        assert other != text
        after = report_of(lay(tmp_path / str(seed), shuffled_lines(other, seed), said))
        assert prints(after) == before


def test_both_formats_have_the_same_fingerprints() -> None:
    folder = SAMPLES / "audio_follower"
    reports = [report_of(folder / f"audio_follower.{suffix}") for suffix in ("cir", "net")]
    assert prints(reports[0]) == prints(reports[1]) != {}


def test_a_finding_keeps_its_fingerprint_when_values_change(tmp_path: Path) -> None:
    text, intent = texts(FAULTY[0])
    other = text.replace("C2 E1 0 33u", "C2 E1 0 22u").replace("R4 VF COL1 6.8k", "R4 VF COL1 6.2k")
    assert other != text
    of = {f.rule: f.fingerprint for f in report_of(FAULTY[0]).findings}
    after = {f.rule: f.fingerprint for f in report_of(lay(tmp_path, other, intent)).findings}
    assert after["bypass-loss"] == of["bypass-loss"] and after["soft-divider"] == of["soft-divider"]


def test_a_port_taken_from_a_connector_is_no_name(tmp_path: Path) -> None:
    """Without declared ports the name of a port is its connector's reference, which renumbering changes."""
    text, intent = texts(PLANTED / "input-mismatch.cir")
    intent = re.sub(r"\[\[port\]\].*?(?=\n\[|\Z)", "", intent, flags=re.DOTALL)
    bare: list[set[str]] = []
    for seed, netlist in enumerate([text, renumbered(text, intent, 1)[0], renumbered(text, intent, 2)[0]]):
        found = report_of(lay(tmp_path / str(seed), netlist, intent))
        assert any(port.name in found.parts for port in found.ports)
        bare.append({finding.fingerprint for finding in found.findings})
    assert bare[0] and bare[0] == bare[1] == bare[2]


def test_equal_places_are_told_apart_by_a_number(tmp_path: Path) -> None:
    """Two equal channels, each with the same fault, have two fingerprints, and a changed part of one channel gives
    no third."""
    channel = (
        "R{0}1 +12V C{0} 4.7k\nR{0}2 +12V B{0} 680k\nR{0}3 B{0} 0 120k\nR{0}4 E{0} 0 1k\nQ{0} C{0} B{0} E{0} 2N3904\n"
    )
    text = "two equal channels\n" + channel.format(1) + channel.format(2) + ".end\n"
    intent = '[rails]\n"+12V" = "12 V"\n'

    def soft(report: Report) -> list[Finding]:
        return [finding for finding in report.findings if finding.rule == "soft-divider"]

    found = soft(report_of(lay(tmp_path / "a", text, intent)))
    assert [finding.subject[0] for finding in found] == ["Q1", "Q2"]
    assert found[1].fingerprint == found[0].fingerprint + "-2"
    other = soft(report_of(lay(tmp_path / "b", text.replace("R24 E2 0 1k", "R24 E2 0 820"), intent)))
    assert [finding.fingerprint for finding in other] == [finding.fingerprint for finding in found]
