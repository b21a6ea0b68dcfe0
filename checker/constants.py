"""Physical constants and solver tolerances: value, unit, reference, and for tolerances the reason for the size."""

from __future__ import annotations

from typing import Final

# --- physics (exact since 2019; SI Brochure, 9th edition, table 1) -------------------------------------------
BOLTZMANN_JPK: Final = 1.380649e-23
CHARGE_C: Final = 1.602176634e-19
ZERO_CELSIUS_K: Final = 273.15
"""0 degC in kelvin (SI Brochure, 9th edition, section 2.3.1)."""
OXIDE_F_PER_M: Final = 3.9 * 8.8541878188e-12
"""Permittivity of silicon dioxide: 3.9 (from memory) times that of vacuum (CODATA 2022)."""
SILICON_F_PER_M: Final = 11.7 * 8.8541878188e-12
"""Permittivity of silicon: 11.7 (from memory) times that of vacuum (CODATA 2022)."""
INTRINSIC_PER_CM3: Final = 1.45e10
"""Intrinsic carriers of silicon at 300 K as level-1 models have them [1/cm3] (SPICE 2G6 guide, from memory)."""
REFERENCE_NOISE_K: Final = 290.0
"""T0 of noise figure (IEC 60050-702, 702-08-57)."""
DEFAULT_AMBIENT_C: Final = 27.0
"""Nominal temperature where neither intent nor netlist gives one (the SPICE-text default)."""

# --- solver ------------------------------------------------------------------------------------------------
KCL_REL: Final = 1e-9
"""Certificate: largest |sum of currents| over largest |current| at a node. Double precision leaves about 1e-13."""
STEP_ABS_V: Final = 1e-9
"""Certificate: last full Newton correction. 1 nV moves a junction current by 4e-8 of itself."""
STEP_REL: Final = 1e-9
CURRENT_FLOOR_A: Final = 1e-15
"""Currents below this count as zero in the certificate (a femtoampere is under any board's leakage)."""
QUICK_ITERATIONS: Final = 40
"""Newton iterations of a trial that starts at a neighbour's answer: what takes more is left out of the running."""
MAX_ITERATIONS: Final = 60
"""Newton iterations of the plain start; well-posed stages take under 15, a chain of five 21: 60 means stuck."""
RUNG_ITERATIONS: Final = 40
"""Newton iterations at one value of a helper, which starts from the neighbouring value's answer."""
FIRST_RUNG: Final = 0.05
SMALLEST_RUNG: Final = 1e-3
"""First and smallest step of a helper's parameter, which runs from 0 to 1."""
MAX_RUNGS: Final = 150
"""Steps a helper may take; with 40 iterations each this bounds the time that a hopeless island can cost."""
RUNAWAY: Final = 1e9
"""A Newton step beyond this [V or A] has left the physics; the island is taken back to a helper."""
CORNER_REL: Final = 1e-6
"""Relative width to which a band corner is refined."""
CORNER_LOW_HZ: Final = 1e-3
CORNER_HIGH_HZ: Final = 1e11
"""Corners outside these are reported as none."""


def thermal_voltage_v(temperature_k: float) -> float:
    """kT/q [V] at an absolute temperature [K]."""
    return BOLTZMANN_JPK * temperature_k / CHARGE_C
