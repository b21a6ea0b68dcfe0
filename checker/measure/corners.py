"""Band corners and droop of T(f), refined to 1e-6; nominal scenario alone (corners over part spread cost a sweep each).

Reference = largest |T| in the band; corner = first crossing of reference/sqrt 2 walking outward from there.
"""

from __future__ import annotations

from collections.abc import Callable

import numpy as np

from checker.arrays import FloatArray
from checker.constants import CORNER_HIGH_HZ, CORNER_LOW_HZ, CORNER_REL
from checker.measure.bench import Bench
from checker.measure.chain import transfer
from checker.measure.links import Outer, outer_of
from checker.measure.make import figure, missing, nominal
from checker.measure.registry import Subject, quantity
from checker.quantity.figure import Figure

PER_DECADE = 8
MOST_PASSES = 10
"""Every other pass cuts the bracket in sixteen: five of them leave 1e-6 of a step of the grid."""
Magnitude = Callable[[FloatArray], FloatArray]


def grid_hz() -> FloatArray:
    """The outward walk: 1 mHz to 100 GHz, (F,)."""
    decades = np.log10(CORNER_HIGH_HZ / CORNER_LOW_HZ)
    return np.logspace(np.log10(CORNER_LOW_HZ), np.log10(CORNER_HIGH_HZ), round(decades * PER_DECADE) + 1)


def band_grid_hz(band_hz: tuple[float, float], points: int = 25) -> FloatArray:
    """Frequencies inside a band, edges included; a low edge of 0 starts five decades under the high one."""
    low, high = band_hz
    return np.geomspace(low if low > 0.0 else high * 1e-5, high, points)


def corners(
    magnitude: Magnitude, grid: FloatArray, on_grid: FloatArray, f_ref: float, ref: float
) -> tuple[float, float]:
    """Low and high corner [Hz]; nan for none. `on_grid`: |T| on `grid`; `ref` = |T| at `f_ref`."""
    level = ref / np.sqrt(2.0)
    found = [float("nan"), float("nan")]
    if not (np.isfinite(level) and level > 0.0):
        return found[0], found[1]
    brackets = {}
    for end, order in enumerate((np.flatnonzero(grid < f_ref)[::-1], np.flatnonzero(grid > f_ref))):
        below = np.flatnonzero(on_grid[order] < level)
        if len(below):
            walked = np.concatenate([[f_ref], grid[order]])
            brackets[end] = np.log(walked[below[0] : below[0] + 2])
    for end, corner in zip(brackets, _refined(magnitude, list(brackets.values()), level), strict=True):
        found[end] = corner
    return found[0], found[1]


def _refined(magnitude: Magnitude, brackets: list[FloatArray], level: float) -> list[float]:
    """Crossings [Hz] in brackets of ln f (inside, outside), all refined in the same sweeps.

    A bracket is cut in sixteen, and in turn around where a cubic through the crossing says it is, until it is 1e-6
    wide; then the crossing is read off the chord. Both ends are known: |T| of other batches differs in the last bits.
    """
    cuts = {k: np.linspace(a, b, 17) for k, (a, b) in enumerate(brackets)}
    out = [float("nan")] * len(brackets)
    for attempt in range(MOST_PASSES):
        if not cuts:
            break
        rows = np.log(magnitude(np.exp(np.concatenate(list(cuts.values())))) / level).reshape(-1, 17)
        for (k, x), y in zip(list(cuts.items()), rows, strict=True):
            crossed = np.flatnonzero(~(y[1:-1] >= 0.0))
            first = 1 + int(crossed[0]) if len(crossed) else 16
            a, b = x[first - 1], x[first]
            ya, yb = y[first - 1], y[first]
            out[k] = float(np.exp(a + (b - a) * (np.clip(ya / (ya - yb), 0.0, 1.0) if ya != yb else 0.5)))
            cuts[k] = _closer(x, y, first) if attempt % 2 == 0 else np.linspace(a, b, 17)
            if abs(b - a) < 16.0 * CORNER_REL:
                del cuts[k]
    return out


def _at_zero(y: FloatArray, x: FloatArray) -> float:
    """x where y = 0 on the polynomial x(y) through the points (Lagrange)."""
    total = 0.0
    for j in range(len(y)):
        others = np.delete(y, j)
        total += float(x[j] * np.prod(others / (others - y[j]))) if np.all(others != y[j]) else np.nan
    return total


def _closer(x: FloatArray, y: FloatArray, first: int) -> FloatArray:
    """17 points in the bracket x[first - 1]..x[first]: its ends, and a cluster around the likely crossing."""
    a, b = x[first - 1], x[first]
    near = slice(max(first - 2, 0), first + 2)
    guess = _at_zero(y[near], x[near])
    low, high = min(a, b), max(a, b)
    if not low < guess < high:
        return np.linspace(a, b, 17)
    reach = 4.0 * CORNER_REL
    cluster = np.clip(guess + np.linspace(-reach, reach, 15) * np.sign(b - a), low, high)
    return np.concatenate([[a], cluster, [b]])


def _stage_corners(bench: Bench, ident: str, outer: Outer) -> tuple[float, float, float, float]:
    """Low and high corner [Hz], reference |T| and its frequency [Hz]; kept."""
    key = f"corners {ident}"
    if key not in bench.kept:

        def magnitude(f: FloatArray) -> FloatArray:
            return np.asarray(np.abs(transfer(bench, bench.nominal_response(f), outer)[0]))

        band = bench.band_hz or (bench.f0_hz, bench.f0_hz)
        f_band = band_grid_hz(band) if bench.band_hz else np.array([bench.f0_hz])
        grid = grid_hz()
        in_band, on_grid = np.split(magnitude(np.concatenate([f_band, grid])), [len(f_band)])
        peak = int(np.argmax(in_band))
        low, high = corners(magnitude, grid, on_grid, float(f_band[peak]), float(in_band[peak]))
        bench.kept[key] = (low, high, float(in_band[peak]), float(f_band[peak]))
    value = bench.kept[key]
    assert isinstance(value, tuple)  # noqa: S101 - narrows the type
    return value


def _corner(name: str, which: int, meaning: str, subject: Subject) -> None:
    @quantity(name, "Hz", subject, meaning)
    def measure(bench: Bench, ident: str) -> Figure:
        outer = outer_of(bench, ident, group=subject == "group")
        if isinstance(outer, str):
            return missing(name, ident, bench.size, "Hz", outer)
        found = _stage_corners(bench, ident, outer)
        reason = "" if np.isfinite(found[which]) else "no crossing of -3 dB between 1 mHz and 100 GHz"
        return nominal(
            name,
            ident,
            found[which],
            bench.size,
            "Hz",
            formula="|T(f)| = |T|ref/sqrt 2, first crossing walking outward",
            numbers=(("|T|ref", found[2], ""), ("at", found[3], "Hz")),
            source="sweep of the in-place solution, refined to 1e-6",
            reason=reason,
        )


def _droop(name: str, edge: int, meaning: str, subject: Subject) -> None:
    @quantity(name, "dB", subject, meaning)
    def measure(bench: Bench, ident: str) -> Figure:
        outer = outer_of(bench, ident, group=subject == "group")
        if isinstance(outer, str):
            return missing(name, ident, bench.size, "dB", outer)
        if bench.band_hz is None:
            return missing(name, ident, bench.size, "dB", "not applicable: no band is declared")
        _, _, _, f_ref = _stage_corners(bench, ident, outer)
        f = np.array([bench.edges_hz[edge], f_ref])
        t = np.abs(transfer(bench, bench.response(f), outer))
        values = 20.0 * np.log10(t[:, 1] / t[:, 0])
        return figure(name, ident, values, "dB", formula="|T|ref/|T(band edge)|", numbers=(("at", float(f[0]), "Hz"),))


for _subject in ("stage", "group"):
    _corner("low_corner_hz", 0, "lower -3 dB corner of T", _subject)
    _corner("high_corner_hz", 1, "upper -3 dB corner of T", _subject)
    _droop("droop_low_db", 0, "loss at the lower band edge against the best in the band", _subject)
    _droop("droop_high_db", 2, "loss at the upper band edge against the best in the band", _subject)
