"""A first intent file from what a netlist shows, with the rest as comments to fill in."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Sequence

from checker.intent.source import MAX_DOTTED
from checker.intent.values import BadValueError, text
from checker.quantity.parse import parse_with_unit
from checker.quantity.show import show_value

Rail = tuple[str, float | None]
"""Net and voltage [V]."""
Port = tuple[str, str, str, float | None]
"""Name, net, role, reference impedance [ohm]."""

_MAX_NAME = 200

_HEAD = """\
# What this board is meant to do. Values carry their unit; lines that start with # are not read.
"""

_TAIL = """
# [[target]]  # a figure the board must reach
# stage = "Q1"  # or group = "Q1+Q2", or from = "a port" and to = "a port"
# quantity = "voltage_gain_db"
# min = 18  # min, max or both
# max = 24

# [[part]]  # what the netlist does not say of a part
# ref = "Q1"
# card = "2N3904"

# [[accepted]]  # a finding the team lives with
# rule = "the rule's name"  # with subject; or fingerprint alone
# subject = "Q1"
# reason = "why it is right here"
# by = "who decided"
# until = 2030-12-31
"""


def starter_text(rails: Sequence[Rail], ports: Sequence[Port], band: tuple[float, float] | None) -> str:
    """Text of an intent file that `read_intent` accepts.

    `rails`: net and volts, None where unknown; `ports`: name, net, role ("input" or "output") and reference
    impedance [ohm] or None; `band`: lowest and highest frequency [Hz] or None. What is unknown becomes a
    commented line. Names that an intent file cannot hold are left out and counted in a comment.
    """
    return "\n".join([_HEAD, *_band(band), *_ambient(), *_rails(rails), *_ports(ports)]) + "\n" + _TAIL


def _band(band: tuple[float, float] | None) -> Iterator[str]:
    mark = "# " if band is None else ""
    low_hz, high_hz = band or (20.0, 20e3)
    yield f"{mark}[band]  # lowest and highest frequency of the signal"
    yield f'{mark}low = "{_written(low_hz, "Hz")}"'
    yield f'{mark}high = "{_written(high_hz, "Hz")}"\n'


def _ambient() -> Iterator[str]:
    yield "# [ambient]  # the temperatures around the board"
    yield '# min = "-10 degC"\n# nominal = "25 degC"\n# max = "55 degC"\n'


def _rails(rails: Sequence[Rail]) -> Iterator[str]:
    yield "[rails]  # supplies by net; every key below is the name of a net"
    usable = {net: volts for net, volts in rails if _usable(net)}
    for net, volts in usable.items():
        if volts is None:
            yield f'# {quoted(net)} = "? V"  # voltage not known: fill in and remove the first #'
        else:
            yield f'{quoted(net)} = "{_written(volts, "V")}"'
    yield from _left_out(len({net for net, _ in rails}) - len(usable))


def _ports(ports: Sequence[Port]) -> Iterator[str]:
    names: set[str] = set()
    usable = [port for port in ports if _usable(port[0]) and _usable(port[1])]
    for name, net, role, impedance_ohm in usable:
        yield f"\n[[port]]\nname = {quoted(_unused(name, names))}\nnet = {quoted(net)}\nrole = {quoted(role)}"
        if impedance_ohm is None:
            yield '# impedance = "50 ohm"  # the reference that the port is matched to'
        else:
            yield f'impedance = "{_written(impedance_ohm, "ohm")}"'
        if role == "input":
            yield '# level = "10 mV"  # largest signal: dBm available, or V (r.m.s.), Vpp, Vpk'
    yield from _left_out(len(ports) - len(usable))


def _unused(name: str, names: set[str]) -> str:
    """`name`, or with the first free number behind it; entered into `names`."""
    candidate, number = name, 1
    while candidate in names:
        number += 1
        candidate = f"{name}-{number}"
    names.add(candidate)
    return candidate


def _usable(name: str) -> bool:
    """Whether the file may hold `name`: within the bounds of one line, and a text that reads back."""
    try:
        text(name).encode("utf-8")
    except (BadValueError, UnicodeEncodeError):
        return False
    return len(name) <= _MAX_NAME and name.count(".") < MAX_DOTTED - 1


def _written(si: float, unit: str) -> str:
    """With a prefix where that loses no digit; none below 1, where milli could be taken for mega."""
    short = show_value(si, unit) if abs(si) >= 1.0 else ""
    written = short if short and parse_with_unit(short, unit) == si else f"{si!r} {unit}"
    return written.replace("Ω", "ohm")  # as a keyboard has it


def _left_out(count: int) -> Iterable[str]:
    return [f"# left out: {count} with a name that cannot be written here"] if count else []


def quoted(name: str) -> str:
    """`name` as a TOML basic string; it must hold no control characters."""
    return '"' + name.replace("\\", "\\\\").replace('"', '\\"') + '"'
