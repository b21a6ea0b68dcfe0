"""What the report says of the board beyond its stages: rails, nets, islands, ports, gains, cautions."""

from __future__ import annotations

import math

import numpy as np

from checker.measure.ports import gain_subject
from checker.record import Certificate, Gain, Island, NetFigures, Port, Rail
from checker.setup import Setup
from checker.solve import operating
from checker.summary.ledger import Ledger
from checker.trouble import CannotTell

HAZARDOUS_V = 60.0
"""DC above this on any net gets the caution; under the 70 V dry limit of IEC 61010-1:2010, 6.3.1 (from memory)."""
HOT_C = 85.0


def rails(setup: Setup) -> tuple[Rail, ...]:
    """Nets of known voltage."""
    return tuple(Rail(net=rail.net, volts=float(rail.volts), source=rail.source) for rail in setup.circuit.rails)


def nets(setup: Setup, ledger: Ledger) -> dict[str, NetFigures]:
    """DC voltage of every net the netlist names."""
    out = {}
    named = set(setup.netlist.nets)
    for index, net in enumerate(setup.circuit.nets):
        if net not in named and index:
            continue
        volts = float(setup.point.v_v[0, index])
        if not math.isfinite(volts):
            ledger.missing(setup.point.reason(net), "nets", net, "dc_v")
        out[net] = NetFigures(dc_v=volts if math.isfinite(volts) else None)
    return out


def islands(setup: Setup, ledger: Ledger) -> tuple[Island, ...]:
    """Each DC island with its certificate."""
    out = []
    for place, island in enumerate(setup.point.islands):
        if not island.nets:
            continue
        name = min(island.nets)
        if not island.ok[0]:
            ledger.missing(island.reason or "not certified", "islands", name)
            out.append(Island(nets=island.nets, certificate=None))
        else:
            out.append(Island(nets=island.nets, certificate=_certificate(setup, ledger, place, island)))
    return tuple(out)


def _certificate(setup: Setup, ledger: Ledger, place: int, island: operating.Island) -> Certificate:
    # Stability is judged for the board as a whole; with a growing pole no island can claim it.
    stable = None if setup.growing else True
    if stable is None:
        ledger.missing(
            "the linearised board has a pole that grows", "islands", min(island.nets), "certificate", "stable"
        )
    condition, sign = setup.point.jacobian(place)
    if not math.isfinite(condition):
        ledger.missing("singular after scaling", "islands", min(island.nets), "certificate", "condition")
    return Certificate(
        kcl=float(island.kcl[0]),
        step_v=float(island.step_v[0]),
        condition=condition if math.isfinite(condition) else None,
        sign=int(np.sign(sign)),
        stable=stable,
        states=island.states,
        search="exhaustive" if island.exhaustive else "partial",
    )


def ports(setup: Setup, ledger: Ledger) -> tuple[Port, ...]:
    """Ports with their match."""
    return tuple(_port(ledger, port.name) for port in setup.ports)


def _port(ledger: Ledger, name: str) -> Port:
    port = ledger.board.port(name)
    path = ("ports", name)
    if port.role is None:
        ledger.missing("the port's direction is not known", *path)
        return Port(name=name, net=port.net, role=None, reference_ohm=port.reference_ohm)
    worst, worst_hz = _worst(ledger, name, path)
    return Port(
        name=name,
        net=port.net,
        role=port.role,
        reference_ohm=port.reference_ohm,
        impedance_ohm=ledger.complex_at("impedance_ohm", name, *path, "impedance_ohm"),
        return_loss_db=_middle(ledger, "return_loss_db", name, path),
        return_loss_worst_db=worst,
        return_loss_worst_hz=worst_hz,
        mismatch_loss_db=_middle(ledger, "mismatch_loss_db", name, path),
    )


def _middle(ledger: Ledger, quantity: str, name: str, path: tuple[str, ...]) -> float | None:
    """A match figure at f0: the middle of its grid over the band."""
    try:
        figure = ledger.board.ask(quantity, name)
    except CannotTell as gap:
        ledger.missing(f"{gap.datum} is not known", *path, quantity)
        return None
    value = float(figure.values[0, figure.values.shape[1] // 2])
    if not math.isfinite(value):
        ledger.missing(figure.reason or "no figure: the port's surroundings have no bias", *path, quantity)
        return None
    ledger.note(figure, value)
    return value


def _worst(ledger: Ledger, name: str, path: tuple[str, ...]) -> tuple[float | None, float | None]:
    try:
        figure = ledger.board.ask("return_loss_db", name)
    except CannotTell as gap:
        for key in ("return_loss_worst_db", "return_loss_worst_hz"):
            ledger.missing(f"{gap.datum} is not known", *path, key)
        return None, None
    if not np.isfinite(figure.values[0]).any():
        for key in ("return_loss_worst_db", "return_loss_worst_hz"):
            ledger.missing(figure.reason or "no figure: the port's surroundings have no bias", *path, key)
        return None, None
    at = int(np.nanargmin(figure.values[0]))
    f = figure.f_hz[at] if figure.f_hz is not None else ledger.board.bench.f0_hz
    return float(figure.values[0, at].real), float(f)


def gains(setup: Setup, ledger: Ledger) -> tuple[Gain, ...]:
    """From every input port to every output port that a signal path joins."""
    out = []
    for source, to in setup.recognition.paths:
        subject, path = gain_subject(source, to), ("gains", source, to)
        reals = {
            key: ledger.real_at(key, subject, *path, key)
            for key in ("voltage_gain_db", "emf_gain_db", "transducer_gain_db", "low_corner_hz", "high_corner_hz")
        }
        gain = ledger.complex_at("voltage_gain", subject, *path, "voltage_gain")
        out.append(Gain(from_=source, to=to, voltage_gain=gain, **reals))
    return tuple(out)


def cautions(setup: Setup) -> tuple[str, ...]:
    """The usual cautions, where the board gives cause."""
    out = ["This report is no safety approval; local codes and licensed practice come first."]
    volts = np.abs(setup.point.v_v[0, : len(setup.circuit.nets)])
    if np.any(volts[np.isfinite(volts)] > HAZARDOUS_V):
        out.append(f"Hazardous voltage: nets above {HAZARDOUS_V:g} V DC. Work on them only as local rules allow.")
    power = setup.point.transistor["power_w"][0]
    if np.any(power[np.isfinite(power)] > 0.5):
        out.append(
            "Hot parts: a transistor dissipates more than 0.5 W at rest; it can burn skin and needs its heat led away."
        )
    if setup.growing:
        out.append(
            "The linearised board has a growing natural frequency: it oscillates or rests elsewhere than computed. "
            "Figures hold at the balance point alone."
        )
    return tuple(out)
