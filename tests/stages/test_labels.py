"""Every label of one device and every group, in both polarities, by circuits of known make."""

from __future__ import annotations

import pytest

from checker.stages.types import Link, Recognition
from tests.stages.circuits import CASES, Case
from tests.whole import mirrored, set_up_from


def found(case: Case, polarity: str) -> Recognition:
    """What is recognised."""
    netlist = case.netlist if polarity == "as drawn" else mirrored(case.netlist)
    return set_up_from(netlist, case.intent).recognition


BOTH = pytest.mark.parametrize("polarity", ["as drawn", "mirrored"])
EACH = pytest.mark.parametrize("case", CASES, ids=lambda case: case.name)


@BOTH
@EACH
def test_labels_groups_and_links(case: Case, polarity: str) -> None:
    recognition = found(case, polarity)
    stages = {s.id: (s.configuration, s.entry, s.exit, s.role) for s in recognition.stages}
    assert {k: v for k, v in stages.items() if k in case.stages} == case.stages
    assert {g.id: g.configuration for g in recognition.groups} == case.groups
    for device, wanted in case.links.items():
        stage = recognition.stage(device)
        links = (stage.input_link, stage.output_link)
        assert tuple(told(link) for link in links) == wanted


def told(link: Link | None) -> str:
    """Kind and part of a link; a port's own part has no name of note."""
    if link is None:
        return "none"
    return "port" if link.kind == "port" else f"{link.kind} {link.part}"
