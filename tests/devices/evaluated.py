"""Device tables for the model tests: one transistor or diode at many bias points, along the scenario axis."""

from __future__ import annotations

import numpy as np

from checker.constants import ZERO_CELSIUS_K
from checker.devices import bipolar, diode
from tests.bench import BIPOLAR, DIODE
from tests.reference.boards import NPN, PNP, SIGNAL_DIODE, ZENER

BIPOLAR_SETS: dict[str, dict[str, float]] = {
    "full": NPN,
    "base crowding": PNP,
    "ideal": {},
    "no lead resistance": {**NPN, "rb": 0.0, "rbm": 0.0, "re": 0.0, "rc": 0.0},
    "strong transit rise": {**NPN, "xtf": 40.0, "itf": 0.02, "vtf": 1.5},
}
DIODE_SETS: dict[str, dict[str, float]] = {"signal": SIGNAL_DIODE, "breakdown": ZENER, "ideal": {}}


def columns(values: dict[str, float], rows: int) -> dict[str, np.ndarray]:
    """Parameters as (rows, 1) arrays."""
    return {key: np.full((rows, 1), float(value)) for key, value in values.items()}


def bipolar_params(given: dict[str, float], rows: int, t_c: float = 27.0) -> dict[str, np.ndarray]:
    """Complete parameters (rows, 1) at a temperature; nominal 27 degC."""
    p = {**BIPOLAR, **{k.rstrip("_"): v for k, v in given.items()}}
    t = np.full((rows, 1), t_c + ZERO_CELSIUS_K)
    return bipolar.at_temperature(columns(p, rows), t, np.full((rows, 1), 27.0 + ZERO_CELSIUS_K))


def diode_params(given: dict[str, float], rows: int, t_c: float = 27.0) -> dict[str, np.ndarray]:
    """Complete parameters (rows, 1) at a temperature; nominal 27 degC."""
    p = {**DIODE, **{k.rstrip("_"): v for k, v in given.items()}}
    t = np.full((rows, 1), t_c + ZERO_CELSIUS_K)
    return diode.at_temperature(columns(p, rows), t, np.full((rows, 1), 27.0 + ZERO_CELSIUS_K))
