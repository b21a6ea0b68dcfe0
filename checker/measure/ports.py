"""Figures of the board's ports: impedance at the plane, match, and gains from port to port."""

from __future__ import annotations

import numpy as np

from checker.arrays import ComplexArray, FloatArray
from checker.circuit.types import Port
from checker.measure.bench import Bench
from checker.measure.corners import band_grid_hz, corners, grid_hz
from checker.measure.links import load_current, port_current
from checker.measure.make import db, figure, missing, nominal
from checker.measure.match import mismatch_loss_db, return_loss_db
from checker.measure.registry import quantity
from checker.quantity.figure import Figure
from checker.solve.response import Response, port_drive
from checker.trouble import CannotTell

MATCH_POINTS = 9
"""Frequencies of the band at which a match is judged: edges and seven between, in equal ratios."""


def port_grid_hz(bench: Bench, port: Port) -> FloatArray:
    """Where a port's match is judged: its own band, else the board's, else f0 alone."""
    band = port.band_hz or bench.band_hz
    return np.array([bench.f0_hz]) if band is None else band_grid_hz(band, MATCH_POINTS)


def impedance(bench: Bench, response: Response, port: Port) -> ComplexArray:
    """Impedance that the board shows at the port's plane, (S, F) [ohm]: source or external load left out."""
    if port.role == "input":
        solution = response.solution(port_drive(port))
        return solution[..., port.node] / port_current(bench, response, port, solution)
    for name in port.load:
        response = response.opened(name)
    return response.impedance(port.node)


@quantity("impedance_ohm", "ohm", "port", "impedance of the board at the port's plane")
def port_impedance(bench: Bench, name: str) -> Figure:
    """At both band edges and f0."""
    response = bench.response(bench.edges_hz)
    z = impedance(bench, response, bench.port(name))
    return figure("impedance_ohm", name, z, "ohm", f_hz=response.f_hz, formula="v/i at the plane")


@quantity("return_loss_db", "dB", "port", "return loss at the port's plane against its reference, over the band")
def port_return_loss(bench: Bench, name: str) -> Figure:
    """-20 log10 |(Z - R)/(Z + R)|."""
    port = bench.port(name)
    if port.reference_ohm is None:
        return missing("return_loss_db", name, bench.size, "dB", "not applicable: the port has no reference impedance")
    response = bench.response(port_grid_hz(bench, port))
    z = impedance(bench, response, port)
    if not np.isfinite(z[0]).all():
        raise CannotTell(f"the bias of the circuit at port {name}", "see the stages without an operating point")
    if bench.band_hz is None and port.band_hz is None and not _leads_on(bench, port):
        raise CannotTell(f"the band at port {name}, which leads to no recognised stage", "[band] low and high")
    return figure(
        "return_loss_db",
        name,
        return_loss_db(z, port.reference_ohm),
        "dB",
        f_hz=response.f_hz,
        formula="-20 log10 |(Z - R)/(Z + R)|",
        numbers=(("|Z|", float(np.abs(z[0, len(response.f_hz) // 2])), "ohm"), ("R", port.reference_ohm, "ohm")),
        source="in-place small-signal solution",
    )


def _leads_on(bench: Bench, port: Port) -> bool:
    """Whether a signal path starts or ends at the port."""
    return any(port.name in path for path in bench.recognition.paths)


@quantity("mismatch_loss_db", "dB", "port", "power lost to reflection at the port's plane")
def port_mismatch_loss(bench: Bench, name: str) -> Figure:
    """-10 log10(1 - |G|^2), over the band."""
    port = bench.port(name)
    if port.reference_ohm is None:
        return missing(
            "mismatch_loss_db", name, bench.size, "dB", "not applicable: the port has no reference impedance"
        )
    response = bench.response(port_grid_hz(bench, port))
    values = mismatch_loss_db(impedance(bench, response, port), port.reference_ohm)
    return figure("mismatch_loss_db", name, values, "dB", f_hz=response.f_hz, formula="-10 log10(1 - |G|^2)")


def gain_subject(source: str, to: str) -> str:
    """Subject of a port-to-port figure."""
    return f"{source}->{to}"


def _ends(bench: Bench, subject: str) -> tuple[Port, Port]:
    for source in bench.ports:
        for to in bench.ports:
            if gain_subject(source.name, to.name) == subject:
                return source, to
    raise KeyError(subject)


@quantity("voltage_gain", "", "gain", "v(out) over v(in) at the planes, in place")
def port_voltage_gain(bench: Bench, subject: str) -> Figure:
    """At both band edges and f0."""
    source, to = _ends(bench, subject)
    response = bench.response(bench.edges_hz)
    v = response.voltages(port_drive(source))
    ratio = v[..., to.node] / v[..., source.node]
    return figure("voltage_gain", subject, ratio, "", f_hz=response.f_hz, formula="v(out)/v(in)")


@quantity("voltage_gain_db", "dB", "gain", "voltage gain from port to port")
def port_voltage_gain_db(bench: Bench, subject: str) -> Figure:
    """20 log10 of it."""
    gain = port_voltage_gain(bench, subject)
    return figure("voltage_gain_db", subject, db(gain.values), "dB", f_hz=gain.f_hz, formula="20 log10 |v(out)/v(in)|")


@quantity("emf_gain_db", "dB", "gain", "v(out) over the input port's e.m.f.")
def emf_gain(bench: Bench, subject: str) -> Figure:
    """Needs an e.m.f.: a port with an impedance, or a source in the netlist."""
    source, to = _ends(bench, subject)
    if source.emf < 0:
        return missing("emf_gain_db", subject, bench.size, "dB", f"port {source.name} has no source of its own")
    response = bench.response(bench.edges_hz)
    values = db(response.voltages(port_drive(source))[..., to.node])
    return figure("emf_gain_db", subject, values, "dB", f_hz=response.f_hz, formula="20 log10 |v(out)/e|")


@quantity("transducer_gain_db", "dB", "gain", "power into the load over power available from the source")
def transducer_gain(bench: Bench, subject: str) -> Figure:
    """10 log10 of Re(v i*) in the load over |e|^2/(4 R)."""
    source, to = _ends(bench, subject)
    if source.emf < 0 or source.series < 0 or not to.load:
        reason = "needs a source impedance and a load"
        return missing("transducer_gain_db", subject, bench.size, "dB", reason)
    response = bench.response(bench.edges_hz)
    s = response.solution(port_drive(source))
    power = np.real(s[..., to.node] * np.conj(load_current(bench, to, s)))
    r = bench.circuit.resistors.value[:, source.series, None]
    values = 10.0 * np.log10(power * 4.0 * r)
    return figure("transducer_gain_db", subject, values, "dB", f_hz=response.f_hz, formula="10 log10 PL/(|e|^2/(4 RS))")


def _port_corners(bench: Bench, subject: str) -> tuple[float, float]:
    """Corners [Hz] of the gain from e.m.f. (or plane) to the output plane; kept."""
    key = f"corners {subject}"
    if key not in bench.kept:
        source, to = _ends(bench, subject)

        def magnitude(f: FloatArray) -> FloatArray:
            v = bench.nominal_response(f).voltages(port_drive(source))[0]
            return np.asarray(np.abs(v[:, to.node] if source.emf >= 0 else v[:, to.node] / v[:, source.node]))

        inside = band_grid_hz(bench.band_hz) if bench.band_hz else np.array([bench.f0_hz])
        best = magnitude(inside)
        peak = int(np.argmax(best))
        grid = grid_hz()
        bench.kept[key] = corners(magnitude, grid, magnitude(grid), float(inside[peak]), float(best[peak]))
    value = bench.kept[key]
    assert isinstance(value, tuple)  # noqa: S101 - narrows the type
    return value


def _corner(name: str, which: int, meaning: str) -> None:
    @quantity(name, "Hz", "gain", meaning)
    def measure(bench: Bench, subject: str) -> Figure:
        found = _port_corners(bench, subject)[which]
        reason = "" if np.isfinite(found) else "no crossing of -3 dB between 1 mHz and 100 GHz"
        formula = "e.m.f. gain 3 dB under its best in the band"
        return nominal(name, subject, found, bench.size, "Hz", formula=formula, reason=reason)


_corner("low_corner_hz", 0, "lower -3 dB corner of the e.m.f. gain")
_corner("high_corner_hz", 1, "upper -3 dB corner of the e.m.f. gain")
