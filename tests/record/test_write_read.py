"""The report as JSON: round trip, order, rounding, what it refuses."""

from __future__ import annotations

import copy
import json
import math
from dataclasses import FrozenInstanceError, is_dataclass, replace

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from checker.record import Complex, Conditions, NetFigures, Report, in_order, natural
from checker.record.read import from_json
from checker.record.write import to_json
from checker.trouble import InputTrouble, Internal
from tests.record.invented import report


def test_round_trip_keeps_everything() -> None:
    text = to_json(report())
    again = from_json(text)
    assert again == in_order(report())
    assert to_json(again) == text


def test_keys_are_those_of_the_contract() -> None:
    value = json.loads(to_json(report()))
    assert {"schema", "tool", "netlist", "conditions", "checked", "assumptions", "cautions", "rails"} <= set(value)
    assert {"nets", "islands", "stages", "groups", "ports", "gains", "findings"} <= set(value)
    assert {"accepted", "unchecked", "unavailable"} <= set(value)
    assert value["schema"] == "stageproof-report/1"
    change = value["findings"][0]["remedy"]["changes"][0]
    assert set(change) == {"part", "property", "from", "to", "unit"}
    assert value["gains"][0]["from"] == "ANT"
    assert value["stages"][1]["specs"]["voltage_gain"] == {"re": 24.1, "im": -6.2}
    assert set(value["stages"][0]["bias"]) >= {"id_a", "ig_a", "vds_v", "vgs_v"}
    assert set(value["findings"][1]["limit"]) == {"relation", "low", "high", "unit", "source"}
    assert set(value["findings"][0]["limit"]) == {"relation", "value", "unit", "source"}


def test_order_does_not_depend_on_the_order_of_solving() -> None:
    one = report()
    turned = replace(
        one,
        stages=one.stages[::-1],
        findings=one.findings[::-1],
        ports=one.ports[::-1],
        islands=one.islands[::-1],
        nets=dict(reversed(list(one.nets.items()))),
        unavailable=dict(reversed(list(one.unavailable.items()))),
    )
    assert to_json(turned) == to_json(one)
    ids = [stage["id"] for stage in json.loads(to_json(one))["stages"]]
    assert ids == ["J1", "Q1", "Q2", "Q10"]
    assert [f["severity"] for f in json.loads(to_json(one))["findings"]] == ["must-fix", "review", "note"]


@given(st.lists(st.text("Qq0123456789./é²", max_size=8), max_size=6))
def test_natural_order_is_total(names: list[str]) -> None:
    turned = names[::-1]
    assert sorted(names, key=natural) == sorted(turned, key=natural)
    assert len({natural(name) for name in names}) == len(set(names))


def test_natural_order_of_endless_digits() -> None:
    long = "Q" + "9" * 10_000
    assert sorted([long, "Q10", "Q2"], key=natural) == ["Q2", "Q10", long]


def test_rounds_to_twelve_digits() -> None:
    volts = 0.1 + 0.2
    text = to_json(replace(report(), nets={"A": NetFigures(dc_v=volts), "B": NetFigures(dc_v=-0.0)}))
    nets = json.loads(text)["nets"]
    assert nets == {"A": {"dc_v": 0.3}, "B": {"dc_v": 0.0}}
    assert '"dc_v": -0.0' not in text


@pytest.mark.parametrize("bad", [math.nan, math.inf, -math.inf, np.float64("nan")])
def test_refuses_numbers_that_do_not_exist(bad: float) -> None:
    with pytest.raises(Internal, match=r"nets\['A'\]\.dc_v"):
        to_json(replace(report(), nets={"A": NetFigures(dc_v=bad)}))


@pytest.mark.parametrize("bad", [np.int64(3), np.bool_(True), 1j, {"a"}, b"x"])
def test_refuses_what_is_not_plain(bad: object) -> None:
    with pytest.raises(Internal, match="dc_v"):
        to_json(replace(report(), nets={"A": NetFigures(dc_v=bad)}))  # type: ignore[arg-type]


def test_numpy_floats_become_python_floats() -> None:
    text = to_json(replace(report(), nets={"A": NetFigures(dc_v=np.float64(1.5))}))
    assert json.loads(text)["nets"]["A"]["dc_v"] == 1.5
    made = Complex.of(np.complex128(1 + 2j))
    assert type(made.re) is float and (made.re, made.im) == (1.0, 2.0)


HOSTILE = 'a\x1b[31m\u202eb\u2066\ud800\u2028\x85\U000e0041\n"/\\'


def test_hostile_names_cannot_mislead_a_reader_of_the_file() -> None:
    text = to_json(replace(report(), nets={HOSTILE: NetFigures(dc_v=1.0)}))
    assert all(line.isprintable() for line in text.split("\n"))
    assert from_json(text).nets == {HOSTILE: NetFigures(dc_v=1.0)}
    text.encode("utf-8")


def test_records_are_frozen_dataclasses() -> None:
    one = report()
    assert is_dataclass(one) and not hasattr(one, "__dict__")
    with pytest.raises(FrozenInstanceError):
        one.tool = one.tool  # type: ignore[misc]
    with pytest.raises(FrozenInstanceError):
        del one.tool
    with pytest.raises(TypeError, match="needs temperature_c"):
        Conditions(band_hz=None, f0_hz=None)  # type: ignore[call-arg]
    with pytest.raises(TypeError, match="no field colour"):
        NetFigures(dc_v=None, colour="red")  # type: ignore[call-arg]
    assert copy.deepcopy(one) == one and one != replace(one, incomplete=True)
    assert repr(NetFigures(dc_v=1.0)) == "NetFigures(dc_v=1.0)"


def edited(path: str, value: object) -> str:
    """The report's JSON with one value replaced; `...` removes the key."""
    whole = json.loads(to_json(report()))
    *steps, last = (int(step) if step.isdigit() else step for step in path.split("/"))
    inner = whole
    for step in steps:
        inner = inner[step]
    if value is ...:
        del inner[last]
    else:
        inner[last] = value
    return json.dumps(whole)


@pytest.mark.parametrize(
    ("path", "value", "told"),
    [
        ("schema", "stageproof-report/2", "not a report"),
        ("checked", ..., "the key 'checked' is missing"),
        ("checked/stages", "3", r"report\.checked\.stages: expected a value of type int, got \"3\""),
        ("checked/stages", True, "expected a value of type int"),
        ("conditions/temperature_c", 10**400, "expected a finite number"),
        ("conditions/temperature_c", True, "type float"),
        ("conditions/band_hz", [1, 2, 3], "an array of 2"),
        ("stages", {}, "an array"),
        ("stages/0", [], "expected an object"),
        ("stages/0/role", "boss", "'signal' or 'bias' or 'switch'"),
        ("nets", [], "an object"),
        ("findings/0/limit/relation", "about", "expected"),
    ],
)
def test_reading_says_what_is_wrong(path: str, value: object, told: str) -> None:
    with pytest.raises(InputTrouble, match=told) as caught:
        from_json(edited(path, value), file="old.json")
    assert str(caught.value).startswith("old.json: ")


@pytest.mark.parametrize(
    "text", ["", "{", "[]", "3", "null", "[" * 100_000, '{"schema": NaN}', "9" * 5000, '{"a":1e999}']
)
def test_reading_refuses_what_is_no_report(text: str) -> None:
    with pytest.raises(InputTrouble):
        from_json(text)


def test_reading_names_the_line_of_broken_json() -> None:
    with pytest.raises(InputTrouble, match=r"^old\.json:2: "):
        from_json('{"schema":\n x}', file="old.json")


def test_reading_passes_over_later_additions_and_fills_in_defaults() -> None:
    assert isinstance(from_json(edited("weather", "fine")), Report)
    assert from_json(edited("unavailable", ...)).unavailable == {}
