"""Letters of IEC 60062: the tolerance codes that follow a value.

Source: IEC 60062, letter codes for tolerance, from memory (E, L, P and W with less certainty than the rest).
"""

from __future__ import annotations

TOLERANCE_LETTERS = {
    "E": 0.00005,
    "L": 0.0001,
    "P": 0.0002,
    "W": 0.0005,
    "B": 0.001,
    "C": 0.0025,
    "D": 0.005,
    "F": 0.01,
    "G": 0.02,
    "H": 0.03,
    "J": 0.05,
    "K": 0.10,
    "M": 0.20,
    "N": 0.30,
}
"""Symmetrical tolerance, as a fraction."""

LOPSIDED_LETTERS = {"Q": (-0.10, 0.30), "T": (-0.10, 0.50), "S": (-0.20, 0.50), "Z": (-0.20, 0.80)}
"""Unequal tolerance: the lower and the upper limit, as fractions."""

PICOFARAD_LETTERS = {"B": 0.1e-12, "C": 0.25e-12, "D": 0.5e-12, "F": 1e-12, "G": 2e-12}
"""Below 10 pF the letter is an absolute tolerance [F]."""

_SMALL_CAPACITOR_F = 10e-12


def tolerance_of_letter(letter: str, si: float, unit: str) -> float | None:
    """Tolerance as a fraction of `si` [unit], the wider side of an unequal one; None for a letter without
    meaning.

    Source: IEC 60062 (from memory).
    """
    if unit == "F" and 0 < si < _SMALL_CAPACITOR_F and letter in PICOFARAD_LETTERS:
        return PICOFARAD_LETTERS[letter] / si
    if letter in LOPSIDED_LETTERS:
        return max(abs(limit) for limit in LOPSIDED_LETTERS[letter])
    return TOLERANCE_LETTERS.get(letter)
