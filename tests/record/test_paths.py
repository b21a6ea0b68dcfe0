"""Paths into `unavailable`."""

from __future__ import annotations

from dataclasses import replace

from checker.record import at, reason_for, unexplained
from tests.record.invented import report


def test_path_escapes_names() -> None:
    assert at("nets", "/rx/A~B", "dc_v") == "nets/~1rx~1A~0B/dc_v"


def test_reason_of_the_nearest_path_above() -> None:
    one = report()
    assert reason_for(one, "stages", "Q2", "specs", "high_corner_hz") == "no corner below 100 GHz"
    assert reason_for(one, "stages", "Q10", "specs", "swing_vpp").startswith("its island has no")
    assert reason_for(one, "stages", "Q1", "specs", "swing_vpp") == ""


def test_unexplained_nulls_are_found() -> None:
    assert unexplained(report()) == []
    found = unexplained(replace(report(), unavailable={}))
    assert {"nets/N9/dc_v", "islands/DRV/certificate", "stages/Q1/specs/noise_figure_db"} <= set(found)
    assert {"ports/IF/return_loss_db", "gains/ANT/IF/high_corner_hz", "stages/Q10/bias"} <= set(found)
    assert "stages/Q10/entry" not in found
