"""The numbers of a scenario put into a rule's sentence."""

from __future__ import annotations

import numpy as np

from checker.quantity.show import show
from checker.rulekit import Check, Evidence, Figure

NO_FREQUENCY = "DC"


def frequency_hz(check: Check, scenario: int) -> float | None:
    """Where the check is worst in that scenario; None where the figure has no frequency."""
    if check.figure.f_hz is None:
        return None
    return float(check.figure.f_hz[check.worst[scenario]])


def value_at(check: Check, scenario: int) -> float:
    """The judged value there; of a complex figure its magnitude."""
    value = check.figure.values[scenario, check.worst[scenario]]
    return float(abs(value)) if np.iscomplexobj(value) else float(value)


def end_at(end: object, scenario: int) -> float:
    """One end of a bound in a scenario."""
    flat = np.ravel(np.asarray(end, dtype=np.float64))
    return float(flat[scenario] if flat.size > 1 else flat[0])


def filled(evidence: Evidence, text: str, scenario: int) -> str:
    """`text` with {value}, {limit}, {frequency} and the evidence's own figures as of that scenario."""
    check = evidence.check
    at_hz = frequency_hz(check, scenario)
    numbers = {
        "value": show(value_at(check, scenario), check.figure.unit),
        "limit": limit_text(check, scenario),
        "frequency": NO_FREQUENCY if at_hz is None else show(at_hz, "Hz"),
    }
    numbers |= {name: _shown(figure, scenario, at_hz) for name, figure in evidence.figures.items()}
    for name, number in numbers.items():
        text = text.replace("{" + name + "}", number)
    return text


def limit_text(check: Check, scenario: int) -> str:
    """The limit as an engineer writes it: "10 dB", "18 dB to 24 dB"."""
    bound = check.bound
    ends = (bound.low, bound.high) if check.relation == "within" else _single(check)
    return " to ".join(_short(end_at(end, scenario), bound.unit) for end in ends)


def _single(check: Check) -> tuple[object]:
    return (check.bound.high if check.relation == "at most" else check.bound.low,)


def _short(value: float, unit: str) -> str:
    """Without zeros behind the point."""
    number, space, sign = show(value, unit).partition(" ")
    return (number.rstrip("0").rstrip(".") if "." in number else number) + space + sign


def _shown(figure: Figure, scenario: int, at_hz: float | None) -> str:
    """A figure in words, at the frequency of the check where it has one near."""
    place = 0
    if figure.f_hz is not None and at_hz is not None and at_hz > 0:
        distance = np.abs(np.log(np.maximum(figure.f_hz, 1e-12) / at_hz))
        place = int(np.argmin(distance))
    value = figure.values[scenario, place]
    if not np.iscomplexobj(value) or abs(value.imag) < 0.01 * abs(value):
        return show(float(value.real), figure.unit)
    number, _, sign = show(float(abs(value)), figure.unit).partition(" ")
    return f"{number} {sign} at {np.degrees(np.angle(value)):.0f}°"
