"""The figures of a stage, group or port. SI units, the unit in the key; None: see `unavailable`."""

from __future__ import annotations

from checker.record.base import Record
from checker.shape import frozen


@frozen
class Complex(Record):
    """A complex number."""

    re: float
    """Real part."""
    im: float
    """Imaginary part."""

    @classmethod
    def of(cls, value: complex) -> Complex:
        """The record of a Python or numpy complex number."""
        return cls(re=float(value.real), im=float(value.imag))


@frozen
class Specs(Record):
    """What a stage or group does, loaded as it really is, from input to output reference, at `f0_hz`."""

    voltage_gain: Complex | None = None
    """v(output reference) / v(input reference)."""
    voltage_gain_db: float | None = None
    """20 log10 of the magnitude of the voltage gain."""
    current_gain: Complex | None = None
    """Output-link current (out of the upstream) over input-link current (into the stage)."""
    power_gain_db: float | None = None
    """10 log10 of Re(v i*) out over in."""
    input_impedance_ohm: Complex | None = None
    """v/i at the input reference, driven from the input port in place; the source is left out."""
    output_impedance_ohm: Complex | None = None
    """Looking back at the output reference with the output link open; the load is left out."""
    low_corner_hz: float | None = None
    """First crossing of reference/sqrt 2 below the band's largest response."""
    high_corner_hz: float | None = None
    """First crossing of reference/sqrt 2 above the band's largest response."""
    droop_low_db: float | None = None
    """Loss at the low band edge against the largest response in the band."""
    droop_high_db: float | None = None
    """Loss at the high band edge against the largest response in the band."""
    clip_up_v: float | None = None
    """Largest excursion upward of the output reference from rest."""
    clip_down_v: float | None = None
    """Largest excursion downward of the output reference from rest."""
    swing_vpp: float | None = None
    """Twice the smaller excursion."""
    noise_figure_db: float | None = None
    """At f0, T0 = 290 K, from the declared source impedance."""


@frozen
class TerminalFigures(Record):
    """The same quantities at the device terminals: what the rule of thumb is compared with."""

    voltage_gain: Complex | None = None
    """v(exit terminal) / v(entry terminal)."""
    input_impedance_ohm: Complex | None = None
    """Into the entry terminal."""
    output_impedance_ohm: Complex | None = None
    """Looking back into the exit terminal."""


@frozen
class Thumb(Record):
    """A hand formula's figure beside the exact one."""

    value: float | None
    """What the formula gives, in the unit of the quantity's key; a magnitude where that is complex."""
    exact: float | None
    """The exact terminal figure that it is compared with, same unit, magnitude."""
    deviation: float | None
    """(value - exact) / |exact|, a fraction."""
    agrees: bool | None
    """Whether the two agree within the formula's validity; null where they cannot be compared."""
    formula: str
    """The formula in textbook symbols."""
    note: str = ""
    """Why they differ, where they do."""


@frozen
class Span(Record):
    """The range of one figure over part spread and temperature."""

    min: float
    """Smallest value, in the unit of the key."""
    max: float
    """Largest value, in the unit of the key."""
    dominant: str | None = None
    """The part or condition that moves it most."""
