"""From a model's written parameters to the full table: spellings, defaults, area and parallel devices."""

from __future__ import annotations

from collections.abc import Mapping

from checker.circuit import parameters as p
from checker.constants import DEFAULT_AMBIENT_C, ZERO_CELSIUS_K
from checker.shape import frozen


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
    `checker.circuit.parameters`.
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


def _respelt(written: Mapping[str, float], spellings: Mapping[str, str]) -> dict[str, float]:
    """Canonical names; a canonical spelling outranks an older one beside it."""
    given: dict[str, float] = {}
    for name, value in written.items():
        given.setdefault(spellings.get(name, name), value)
    given.update({name: value for name, value in written.items() if name not in spellings})
    return {name: p.INF if value == 0.0 and name in p.ZERO_IS_ABSENT else value for name, value in given.items()}


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
    unused = sorted(name for name in given if name not in known and name not in p.SILENT)
    tnom_c = given.get("tnom", DEFAULT_AMBIENT_C)
    return Parameters(values=values, tnom_k=tnom_c + ZERO_CELSIUS_K, unused=tuple(unused))
