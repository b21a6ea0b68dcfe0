"""A device card: what a data sheet says about one type, each figure with its origin."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import field
from typing import Literal

from checker.shape import frozen

CardKind = Literal["npn", "pnp", "diode", "zener", "led", "njf", "pjf", "nmos", "pmos"]


@frozen
class Ratings:
    """Absolute limits and thermal data; None where unknown. `p_max_w` at 25 degC ambient."""

    v_max_v: float | None = None
    v_control_max_v: float | None = None
    i_max_a: float | None = None
    p_max_w: float | None = None
    tj_max_c: float | None = None
    rth_ja_kpw: float | None = None


@frozen
class Card:
    """One type. `model`: SPICE-style parameters, lower case, SI, at 27 degC, typical unit.

    `gain_min`, `gain_max`: spread of the current gain of this gain group (bipolar). `packages`: package
    family ("TO-92", "SOT-23", ...) -> pad number -> terminal letter ("B", "C", "E", "A", "K", "D", "G", "S");
    of a dual device with its unit ("B1", "E2"; "K1A2" where a pad serves two).
    `resistors` [ohm], built in: of a pre-biased transistor `r1` in the base lead and `r2` from base to emitter; of a
    Darlington `be1` and `be2` from base to emitter of its two transistors. `driver`: the first transistor of a
    Darlington, whose second one the card itself describes. `free_wheel`: a diode from emitter to collector is built in.
    `upper`: the half at gate 2 of a dual-gate MOSFET, whose half at gate 1 the card itself describes (its pads: "G1",
    "G2"); ratings are of both halves together.
    `spread`: of a field-effect transistor, what its model parameters are multiplied by at the end of its range with the
    lowest current and at that with the highest (cut-off voltage and current go together).
    `assumed`: a generic card stood in for an unknown part. `source`: where the figures come from, in words.
    """

    name: str
    kind: CardKind
    model: Mapping[str, float]
    source: str
    ratings: Ratings = field(default_factory=Ratings)
    gain_min: float | None = None
    gain_max: float | None = None
    packages: Mapping[str, Mapping[str, str]] = field(default_factory=dict)
    aliases: tuple[str, ...] = ()
    assumed: bool = False
    note: str = ""
    resistors: Mapping[str, float] = field(default_factory=dict)
    driver: Card | None = None
    free_wheel: bool = False
    upper: Card | None = None
    spread: tuple[Mapping[str, float], Mapping[str, float]] | None = None
