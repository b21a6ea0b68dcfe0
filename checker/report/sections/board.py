"""What belongs to the board and not to one stage: ports, gains, groups, rails, proofs."""

from __future__ import annotations

from collections.abc import Iterator

from checker.record import Certificate, Group, Island, Port, Report, reason_for
from checker.report.clean import cell, clean, name
from checker.report.layout import Page, hanging, table
from checker.report.quantities import figure, given, number
from checker.report.sections.dashes import dashes


def ports(report: Report, page: Page) -> list[str]:
    """One row a port: match against its reference."""
    if not report.ports:
        return []
    header = ("port", "net", "role", "reference", "impedance", "return loss", "worst in band", "mismatch")
    rows = map(_port_row, report.ports)
    # The other figures of a port hang on its impedance: one reason is enough.
    nulls = [
        (name(port.name), ("ports", port.name, "impedance_ohm")) for port in report.ports if port.impedance_ohm is None
    ]
    return [*page.heading("Ports"), *table(header, rows, "lllrrrrr", page), *dashes(report, nulls, page)]


def _port_row(port: Port) -> tuple[str, ...]:
    worst = number(port.return_loss_worst_db, "dB")
    if port.return_loss_worst_db is not None and port.return_loss_worst_hz is not None:
        worst += f" at {number(port.return_loss_worst_hz, 'Hz')}"
    return (
        cell(port.name),
        cell(port.net),
        port.role or "unknown",
        "none" if port.reference_ohm is None else given(port.reference_ohm, "ohm"),
        figure(port.impedance_ohm, "impedance_ohm"),
        number(port.return_loss_db, "dB"),
        worst,
        number(port.mismatch_loss_db, "dB"),
    )


GAINS = {
    "voltage_gain_db": "voltage gain",
    "emf_gain_db": "from e.m.f.",
    "transducer_gain_db": "transducer",
    "low_corner_hz": "f low",
    "high_corner_hz": "f high",
}
"""Figures of the gain table and what stands above them."""


def gains(report: Report, page: Page) -> list[str]:
    """One row a path from an input to an output port."""
    if not report.gains:
        return []
    rows = [
        (f"{cell(gain.from_)} → {cell(gain.to)}", *(figure(getattr(gain, key), key) for key in GAINS))
        for gain in report.gains
    ]
    nulls = [
        (f"{name(gain.from_)} → {name(gain.to)} {label}", ("gains", gain.from_, gain.to, key))
        for gain in report.gains
        for key, label in GAINS.items()
        if getattr(gain, key) is None
    ]
    lines = table(("path", *GAINS.values()), rows, "lrrrrr", page)
    return [*page.heading("Port to port"), *lines, *dashes(report, nulls, page)]


GROUPS = ("voltage_gain_db", "input_impedance_ohm", "output_impedance_ohm")


def groups(report: Report, page: Page) -> list[str]:
    """One row a group, and why it is one."""
    if not report.groups:
        return []
    header = ("group", "configuration", "gain", "Zin", "Zout", "because")
    return [*page.heading("Groups"), *table(header, map(_group_row, report.groups), "llrrrl", page)]


def _group_row(group: Group) -> tuple[str, ...]:
    figures = (figure(getattr(group.specs, key), key) for key in GROUPS)
    return cell(group.id), group.configuration, *figures, "; ".join(map(clean, group.evidence))


def rails(report: Report, page: Page) -> list[str]:
    """The supplies in one paragraph."""
    if not report.rails:
        return []
    told = ", ".join(f"{name(rail.net)} {given(rail.volts, 'V')} ({rail.source})" for rail in report.rails)
    return [*page.heading("Rails"), *hanging("  ", told, page)]


def proofs(report: Report, page: Page) -> list[str]:
    """Only what is out of the ordinary: islands unsolved, unstable, with several states or half searched."""
    odd = [(island, told) for island in report.islands if (told := _odd(report, island))]
    if not odd:
        return []
    lines = page.heading("Operating points to doubt")
    for island, told in odd:
        lines += hanging(f"  {_some_nets(island)}: ", told, page)
    return lines


def _odd(report: Report, island: Island) -> str:
    proof = island.certificate
    if proof is None:
        return clean(reason_for(report, "islands", min(island.nets, default=""))) or "none found"
    return ", ".join(_oddities(proof))


def _oddities(proof: Certificate) -> Iterator[str]:
    if proof.stable is False:
        yield "not stable"
    if proof.states != 1:
        yield f"{proof.states} states"
    if proof.search == "partial":
        yield "not every state was searched for"


def _some_nets(island: Island) -> str:
    shown = ", ".join(map(name, island.nets[:3]))
    return f"{shown} and {len(island.nets) - 3} more nets" if len(island.nets) > 3 else shown
