"""From a model's written parameters to the full table: spellings, defaults, area and parallel devices."""

from __future__ import annotations

import math
from collections.abc import Mapping

from checker.circuit import parameters as p
from checker.constants import (
    BOLTZMANN_JPK,
    CHARGE_C,
    DEFAULT_AMBIENT_C,
    INTRINSIC_PER_CM3,
    OXIDE_F_PER_M,
    SILICON_F_PER_M,
    ZERO_CELSIUS_K,
)
from checker.shape import frozen
from checker.trouble import NotAQuantity


@frozen
class Parameters:
    """A complete set: `values` by SPICE name in SI at `tnom_k` [K]; `unused` names that were written in
    vain."""

    values: Mapping[str, float]
    tnom_k: float
    unused: tuple[str, ...] = ()


def bipolar_parameters(written: Mapping[str, float], *, area: float = 1.0, count: float = 1.0) -> Parameters:
    """Gummel-Poon parameters of `count` devices of relative `area` in parallel.

    Absent effects are `inf` (Early voltages, knee currents). Source of defaults: see
    `checker.circuit.parameters`. These functions raise NotAQuantity for a figure that no device can have.
    """
    given = _respelt(written, p.BIPOLAR_SPELLINGS)
    saturation = given.get("is", p.BIPOLAR["is"])
    for ratio, name in (("ise_over_is", "ise"), ("isc_over_is", "isc")):
        factor = given.pop(ratio, None)
        if factor is not None:
            given.setdefault(name, factor * saturation)
    given.setdefault("rbm", given.get("rb", 0.0))
    values = _scaled(
        {name: given.get(name, default) for name, default in p.BIPOLAR.items()},
        area * count,
        p.BIPOLAR_TIMES_AREA,
        p.BIPOLAR_OVER_AREA,
    )
    return _finished(values, given, p.BIPOLAR)


def diode_parameters(written: Mapping[str, float], *, area: float = 1.0, count: float = 1.0) -> Parameters:
    """Junction-diode parameters of `count` devices of relative `area` in parallel; `bv` inf: no breakdown."""
    given = _respelt(written, p.DIODE_SPELLINGS)
    values = _scaled(
        {name: given.get(name, default) for name, default in p.DIODE.items()},
        area * count,
        p.DIODE_TIMES_AREA,
        p.DIODE_OVER_AREA,
    )
    return _finished(values, given, p.DIODE)


def jfet_parameters(written: Mapping[str, float], *, area: float = 1.0, count: float = 1.0) -> Parameters:
    """Shichman-Hodges parameters of `count` junction FETs of relative `area` in parallel."""
    given = _respelt(written, p.JFET_SPELLINGS)
    values = {name: given.get(name, default) for name, default in p.JFET.items()}
    # The cut-off voltage is negative for both polarities by the model's rule; some cards of P types write it positive.
    values["vto"] = -abs(values["vto"])
    return _finished(_scaled(values, area * count, p.JFET_TIMES_AREA, p.JFET_OVER_AREA), given, p.JFET)


def mosfet_parameters(
    written: Mapping[str, float], *, polarity: float, size: Mapping[str, float] | None = None, count: float = 1.0
) -> Parameters:
    """Level-1 parameters of `count` MOSFETs in parallel; `polarity` +1 N channel, -1 P channel; `size`: `w`, `l` [m] of
    this one.

    KP follows from mobility and oxide where it is not given, GAMMA and PHI from the doping; junctions from their areas
    where no whole figure is given; conduction below threshold where NFS asks for it (level-1 rules of the SPICE 2G6
    guide, NFS as its level 2 has it; from memory). What needs an area or an oxide that is not there is not used.
    """
    given = _respelt(written, p.MOSFET_SPELLINGS)
    values = {name: given.get(name, default) for name, default in p.MOSFET.items()}
    own = {name: value for name, value in (size or {}).items() if math.isfinite(value) and value >= 0.0}
    values |= {name: own[name] for name in ("w", "l") if own.get(name, 0.0) > 0.0}
    _require_sound("tox", given.get("tox", 0.0))
    values["l"] = max(values["l"] - 2.0 * given.get("ld", 0.0), 1e-9)
    values["channel"] = polarity
    values["vto"] *= polarity
    oxide = OXIDE_F_PER_M / given["tox"] if given.get("tox", 0.0) > 0.0 else 0.0
    values["cox"] = oxide * values["w"] * values["l"]
    used = {"ld"} | _junctions(values, given, own)
    if oxide:
        used |= {"tox", "u0", "nsub", "nfs"}
        if "kp" not in given:
            values["kp"] = given.get("u0", 600.0) * 1e-4 * oxide
        _from_doping(values, given, oxide)
        if given.get("nfs", 0.0) > 0.0:
            states = CHARGE_C * given["nfs"] * 1e4 / oxide
            values["weak"] = 1.0 + states + 0.5 * values["gamma"] / math.sqrt(values["phi"])
    values = _scaled(values, count, p.MOSFET_TIMES_COUNT, p.MOSFET_OVER_COUNT)
    return _finished(values, {k: v for k, v in given.items() if k not in used}, p.MOSFET)


def _junctions(values: dict[str, float], given: Mapping[str, float], own: Mapping[str, float]) -> set[str]:
    """Fill in leakage, capacitance and lead of both junctions from the areas, perimeters and squares of this device
    where the model has figures per area; the names of those that were used."""
    both = own.get("ad", 0.0) > 0.0 and own.get("as", 0.0) > 0.0
    by_area = both and given.get("js", 0.0) > 0.0
    used = {"is"} | ({"js"} if by_area else set())
    for end in "ds":
        area, edge = own.get(f"a{end}", 0.0), own.get(f"p{end}", 0.0)
        values[f"is{end}"] = given["js"] * area if by_area else given.get("is", p.MOSFET[f"is{end}"])
        if area and f"cb{end}" not in given:
            values[f"cb{end}"] = given.get("cj", 0.0) * area
            used.add("cj")
        if edge:
            values[f"cb{end}sw"] = given.get("cjsw", 0.0) * edge
            used.add("cjsw")
        if f"r{end}" not in given:
            values[f"r{end}"] = given.get("rsh", 0.0) * own.get(f"nr{end}", 1.0)
            used.add("rsh")
    return used


def _from_doping(values: dict[str, float], given: Mapping[str, float], oxide: float) -> None:
    """PHI = 2 VT ln(NSUB/ni) and GAMMA = sqrt(2 eps q NSUB)/COX at 27 degC, where they are not given."""
    per_cm3 = given.get("nsub", 0.0)
    if per_cm3 <= INTRINSIC_PER_CM3:
        return
    vt = BOLTZMANN_JPK * (DEFAULT_AMBIENT_C + ZERO_CELSIUS_K) / CHARGE_C
    if "phi" not in given:
        values["phi"] = max(2.0 * vt * math.log(per_cm3 / INTRINSIC_PER_CM3), 0.1)
    if "gamma" not in given:
        values["gamma"] = math.sqrt(2.0 * SILICON_F_PER_M * CHARGE_C * per_cm3 * 1e6) / oxide


def _respelt(written: Mapping[str, float], spellings: Mapping[str, str]) -> dict[str, float]:
    """Canonical names; a canonical spelling outranks an older one beside it."""
    given: dict[str, float] = {}
    for name, value in written.items():
        given.setdefault(spellings.get(name, name), value)
    given.update({name: value for name, value in written.items() if name not in spellings})
    absent = {name for name in p.ZERO_IS_ABSENT & given.keys() if given[name] == 0.0 or given[name] > p.LARGEST}
    return {name: p.INF if name in absent else value for name, value in given.items()}


def _require_sound(name: str, value: float) -> None:
    """Raises NotAQuantity for a parameter outside of what its equation can be asked with."""
    low, high = p.RANGES.get(name, (0.0, p.LARGEST))
    if not low <= value <= high:
        raise NotAQuantity(f"{name.upper()} is {value:g}; it must lie from {low:g} to {high:g}")


def _scaled(values: dict[str, float], factor: float, times: tuple[str, ...], over: tuple[str, ...]) -> dict[str, float]:
    if factor == 1.0:
        return values
    scaled = dict(values)
    for name in times:
        scaled[name] = values[name] * factor
    for name in over:
        scaled[name] = values[name] / factor
    return scaled


def _finished(values: dict[str, float], given: Mapping[str, float], known: Mapping[str, float]) -> Parameters:
    if "bv" in values:
        values["bv"] = abs(values["bv"])
    for name, value in (*values.items(), ("tnom", given.get("tnom", DEFAULT_AMBIENT_C))):
        _require_sound(name, value)
    off = {name for names in p.LEFT_OUT.values() for name in names if given.get(name) == 0.0}
    unused = sorted(name for name in given if name not in known and name not in p.SILENT and name not in off)
    tnom_c = given.get("tnom", DEFAULT_AMBIENT_C)
    return Parameters(values=values, tnom_k=tnom_c + ZERO_CELSIUS_K, unused=tuple(unused))
