"""A starter file must read back, whatever the names in a netlist are."""

from __future__ import annotations

from pathlib import Path
from tempfile import TemporaryDirectory

from hypothesis import given, settings
from hypothesis import strategies as st

from checker.intent.read import read_intent
from checker.intent.starter import starter_text
from checker.intent.types import Intent

_NAMES = st.text(max_size=30) | st.sampled_from(['a"b', "\\", "#", "a.b", "[x]", "\x7f", "\ud800", " ", "." * 150])
_OHMS = st.none() | st.floats(1e-3, 1e9)


def _read(text: str) -> Intent:
    with TemporaryDirectory() as folder:
        path = Path(folder, "x.toml")
        path.write_text(text, encoding="utf-8")
        return read_intent(path)


@settings(deadline=None, max_examples=60)
@given(
    st.lists(st.tuples(_NAMES, st.none() | st.floats(-1e6, 1e6)), max_size=4),
    st.lists(st.tuples(_NAMES, _NAMES, st.sampled_from(["input", "output"]), _OHMS), max_size=4),
    st.none() | st.tuples(st.floats(0.0, 1e6), st.floats(1.1e6, 1e10)),
)
def test_any_names_read_back(
    rails: list[tuple[str, float | None]],
    ports: list[tuple[str, str, str, float | None]],
    band: tuple[float, float] | None,
) -> None:
    intent = _read(starter_text(rails, ports, band))
    assert (intent.band and (intent.band.low_hz, intent.band.high_hz)) == band
    assert {rail.net: rail.volts for rail in intent.rails}.items() <= dict(rails).items()
    assert {(port.net, port.role, port.impedance_ohm) for port in intent.ports} <= {port[1:] for port in ports}
    assert len({port.name for port in intent.ports}) == len(intent.ports)


def test_ordinary_names_are_all_kept() -> None:
    intent = _read(
        starter_text(
            [("+12V", 12.0), ("VCC", None), ("/a/-5V2", -5.2)],
            [("in", "ANT", "input", 50.0), ("in", "Net-(C1-Pad2)", "output", None)],
            (3e6, 20e6),
        )
    )
    assert [(rail.net, rail.volts) for rail in intent.rails] == [("+12V", 12.0), ("/a/-5V2", -5.2)]
    assert [(p.name, p.net, p.role, p.impedance_ohm) for p in intent.ports] == [
        ("in", "ANT", "input", 50.0),
        ("in-2", "Net-(C1-Pad2)", "output", None),
    ]


def test_the_comments_are_valid_once_uncommented() -> None:
    """A starter's commented lines are examples to be used: with their marks taken away they must read."""
    starter = starter_text([], [("in", "ANT", "input", None)], None)
    intent = _read("\n".join(line.removeprefix("# ") for line in starter.splitlines()[1:]))
    assert intent.band is not None and intent.targets and intent.parts and intent.accepted
    assert intent.ports[0].level_v is not None and intent.ambient.max_c == 55.0
