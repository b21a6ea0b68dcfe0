"""Device tables for the model tests: one transistor or diode at many bias points, along the scenario axis."""

from __future__ import annotations

import numpy as np

from checker.constants import ZERO_CELSIUS_K
from checker.devices import bipolar, diode, jfet, mosfet
from tests.bench import BIPOLAR, DIODE, JFET, MOSFET
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


JFET_SETS: dict[str, dict[str, float]] = {
    "ideal": {},
    "full": {"vto": -2.8, "beta": 1.28e-3, "lambda": 0.012, "is": 3e-14, "n": 1.1, "rd": 12.0, "rs": 8.0,
             "cgs": 4e-12, "cgd": 5e-12, "pb": 0.8, "m": 0.4, "vtotc": -2.2e-3, "betatce": -0.5},
    "ionising, breaking down": {"vto": -1.9, "beta": 2e-3, "lambda": 0.01, "is": 2e-14, "isr": 3e-12, "nr": 2.1,
                                "alpha": 3e-4, "vk": 25.0, "bv": 9.0, "ibv": 1e-6, "nbv": 1.5, "rd": 5.0, "rs": 5.0},
    "doping tail": {"vto": -1.8, "beta": 9e-4, "lambda": 0.02, "b": 0.6, "pb": 0.9},
}  # fmt: skip
MOSFET_SETS: dict[str, dict[str, float]] = {
    "ideal": {},
    "full": {"vto": 0.9, "kp": 5e-5, "lambda": 0.02, "gamma": 0.55, "phi": 0.65, "w": 40e-6, "l": 4e-6, "rd": 9.0,
             "rs": 6.0, "isd": 2e-14, "iss": 3e-14, "n": 1.1, "cbd": 3e-13, "cbs": 4e-13, "cgso": 3e-10, "cgdo": 2e-10,
             "cgbo": 1e-10, "cox": 1.1e-13},
    "below threshold": {"vto": 0.7, "kp": 2e-4, "lambda": 0.03, "gamma": 0.4, "phi": 0.7, "weak": 1.7, "rd": 4.0},
    "depletion": {"vto": -2.5, "kp": 1e-3, "lambda": 0.01, "gamma": 0.3},
    "power": {"vto": 3.0, "kp": 28.0, "lambda": 0.005, "rd": 0.031, "isd": 1e-13, "iss": 1e-13, "n": 1.2, "cgdo": 4e-11,
              "cgso": 1.9e-9},
}  # fmt: skip


def jfet_params(given: dict[str, float], rows: int, t_c: float = 27.0) -> dict[str, np.ndarray]:
    """Complete parameters (rows, 1) at a temperature; nominal 27 degC."""
    t = np.full((rows, 1), t_c + ZERO_CELSIUS_K)
    return jfet.at_temperature(columns({**JFET, **given}, rows), t, np.full((rows, 1), 27.0 + ZERO_CELSIUS_K))


def mosfet_params(given: dict[str, float], rows: int, t_c: float = 27.0) -> dict[str, np.ndarray]:
    """Complete parameters (rows, 1) at a temperature; nominal 27 degC."""
    t = np.full((rows, 1), t_c + ZERO_CELSIUS_K)
    return mosfet.at_temperature(columns({**MOSFET, **given}, rows), t, np.full((rows, 1), 27.0 + ZERO_CELSIUS_K))
