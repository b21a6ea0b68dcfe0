"""On boards with a planted mistake: the remedy is found, and applied to the text of the netlist it clears the finding.

The second run reads, builds and solves the changed netlist from the start, so it shares nothing with the search but
the program.
"""

from __future__ import annotations

import re
from pathlib import Path

import pytest

from checker.pipeline import check_board
from checker.record.finding import Finding

PLANTED = Path(__file__).parents[1] / "boards" / "planted"


def findings(netlist: Path) -> tuple[Finding, ...]:
    """Of one board."""
    return check_board(netlist, netlist.with_name(netlist.stem + ".intent.toml")).report.findings


@pytest.mark.parametrize(
    "rule",
    [
        "input-mismatch",
        "coupling-loss",
        "bypass-loss",
        "dissipation",
        "junction-temperature",
        "saturated-at-rest",
        "cut-off-at-rest",
        "soft-divider",
        "target-missed",
        "base-not-grounded",
    ],
)
def test_the_proposed_change_made_in_the_netlist_clears_the_finding(rule: str, tmp_path: Path) -> None:
    source = PLANTED / f"{rule}.cir"
    before = findings(source)
    root = next(finding for finding in before if finding.caused_by is None)
    assert root.remedy is not None
    text = source.read_text("utf-8")
    for change in root.remedy.changes:
        assert isinstance(change.to, float)
        text, count = re.subn(rf"(?m)^({change.part}\s+\S+\s+\S+\s+)\S+", rf"\g<1>{change.to!r}", text)
        assert count == 1
    changed = tmp_path / source.name
    changed.write_text(text, "utf-8")
    (tmp_path / f"{rule}.intent.toml").write_text((PLANTED / f"{rule}.intent.toml").read_text("utf-8"), "utf-8")
    after = findings(changed)
    assert not [finding for finding in after if finding.rule == root.rule and finding.subject[0] == root.subject[0]]
    heavier = {"must-fix": 0, "review": 1, "note": 2}
    known = {(finding.rule, finding.subject[0]) for finding in before}
    new = [finding for finding in after if (finding.rule, finding.subject[0]) not in known]
    assert not [finding for finding in new if heavier[finding.severity] <= heavier[root.severity]]
