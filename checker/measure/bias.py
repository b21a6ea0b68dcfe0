"""Figures of the operating point, one value a scenario."""

from __future__ import annotations

import numpy as np

from checker.arrays import FloatArray
from checker.constants import ZERO_CELSIUS_K
from checker.measure.bench import Bench
from checker.measure.feeds import reach, require_not_fed, require_supplied
from checker.measure.make import figure, first, missing
from checker.measure.registry import quantity
from checker.quantity.figure import Figure
from checker.solve.operating import OperatingPoint
from checker.stages.region import REGIONS, headroom_v, is_reversed, region_codes
from checker.trouble import CannotTell

SOLVED = "certified operating point (device and node equations)"


def _table(bench: Bench, key: str, stage: str, *, as_drawn: bool = False) -> FloatArray:
    """A figure of the stage's device; with drain and source exchanged, as seen with their words exchanged too."""
    table, place = bench.point.devices[bench.family(stage)], bench.place(stage)
    values = table[key][:, place]
    if key not in ("id_a", "vds_v", "vgs_v") or as_drawn:
        return values
    turned = is_reversed(bench.point, stage)
    other = {"id_a": table["is_a"], "vds_v": -table["vds_v"], "vgs_v": table["vgs_v"] - table["vds_v"]}[key]
    return np.where(turned, other[:, place], values)


def require_bias(bench: Bench, stage: str) -> None:
    """Raises CannotTell where a stage has no certified operating point."""
    values = bench.point.transistor["i_out_a"][:, bench.stage(stage).index]
    if not np.isfinite(values[0]):
        reason = bench.stage(stage).reason or "no certified operating point"
        raise CannotTell(datum=f"the operating point of {stage}", supply=reason)


KINDS = {"bipolar": "a bipolar", "jfet": "a field-effect transistor", "mosfet": "a field-effect transistor"}


def _plain(name: str, key: str, unit: str, meaning: str, formula: str) -> None:
    @quantity(name, unit, "stage", meaning)
    def measure(bench: Bench, stage: str) -> Figure:
        require_bias(bench, stage)
        if key not in bench.point.devices[bench.family(stage)]:
            return missing(name, stage, bench.size, unit, f"not applicable: {stage} is {KINDS[bench.family(stage)]}")
        return figure(
            name, stage, _table(bench, key, stage, as_drawn=name == "forward_v"), unit, formula=formula, source=SOLVED
        )


_plain("ic_a", "ic_a", "A", "collector current, into the terminal", "IC from the node equations")
_plain("ib_a", "ib_a", "A", "base current, into the terminal", "IB from the node equations")
_plain("vce_v", "vce_v", "V", "collector to emitter, times -1 for PNP", "VC - VE")
_plain("vbe_v", "vbe_v", "V", "base to emitter, times -1 for PNP", "VB - VE")
_plain("vbc_v", "vbc_v", "V", "base to collector, times -1 for PNP", "VB - VC")
_plain("id_a", "id_a", "A", "drain current, into the terminal", "ID from the node equations")
_plain("ig_a", "ig_a", "A", "gate current, into the terminal", "IG from the node equations")
_plain("vds_v", "vds_v", "V", "drain to source, times -1 for P channel; never negative", "VD - VS")
_plain("vgs_v", "vgs_v", "V", "gate to source, times -1 for P channel", "VG - VS")
_plain("forward_v", "vds_v", "V", "drain to source as drawn, times -1 for P channel; negative: reversed", "VD - VS")
_plain("power_w", "power_w", "W", "dissipation at rest", "sum of terminal currents times voltages")


def kept(bench: Bench, key: str) -> FloatArray:
    """Region codes and headroom of all devices, computed once."""
    if key not in bench.kept:
        bench.kept[key] = region_codes(bench.point) if key == "regions" else headroom_v(bench.point)
    value = bench.kept[key]
    assert isinstance(value, np.ndarray)  # noqa: S101 - narrows the type
    return value


@quantity(
    "region_code", "", "stage", "index: active, saturated, cut-off, reverse-active, ohmic, body-, gate-conducting"
)
def region_code(bench: Bench, stage: str) -> Figure:
    """Region as an index into `REGIONS`, so that it can be compared over scenarios."""
    require_bias(bench, stage)
    codes = kept(bench, "regions")[:, bench.stage(stage).index]
    if REGIONS[int(codes[0])] == "cut-off":
        # At rest means with everything connected: an open connector leaves that undecided.
        require_not_fed(bench, stage, reach(bench, stage))
        require_supplied(bench, stage)
        _require_off_in_all_states(bench, stage, codes)
    return figure(
        "region_code",
        stage,
        codes,
        "",
        formula="current against the shorted current, VBC and IC/IB, VDS against VGS - VTH",
    )


def _require_off_in_all_states(bench: Bench, stage: str, codes: FloatArray) -> None:
    """Raises CannotTell for a device that is cut off at rest and conducts in some state: it is switched on purpose."""
    on = [
        scenario.name
        for scenario, code in zip(bench.scenarios, codes, strict=True)
        if scenario.kind == "state" and np.isfinite(code) and REGIONS[int(code)] != "cut-off"
    ]
    if on:
        raise CannotTell(f"the state in which {stage} is to be judged (it conducts in: {on[0]})", "a [[state]] entry")


def region_words(bench: Bench, stage: str, scenario: int) -> str:
    """The region in words; empty without bias."""
    code = kept(bench, "regions")[scenario, bench.stage(stage).index]
    return REGIONS[int(code)] if np.isfinite(code) else ""


@quantity("headroom_v", "V", "stage", "how far VCE or VDS may fall before the stage leaves the active region")
def headroom(bench: Bench, stage: str) -> Figure:
    """VBC at the edge of saturation minus VBC; |VDS| of the channel minus the overdrive."""
    require_bias(bench, stage)
    values = kept(bench, "headroom")[:, bench.stage(stage).index]
    formula = "|VDS| - (VGS - VTH)"
    if bench.family(stage) == "bipolar":
        formula = "VBC where IC/IB is 0.9 of its value at VBC = 0, minus VBC"
    return figure("headroom_v", stage, values, "V", formula=formula)


@quantity("tj_c", "degC", "stage", "junction temperature of the self-heated solution")
def junction_temperature(bench: Bench, stage: str) -> Figure:
    """TA + P RthJA, solved together with the bias."""
    require_bias(bench, stage)
    index = bench.stage(stage).index
    rth = float(bench.circuit.transistors.rth_kpw[index])
    if not np.isfinite(rth):
        raise CannotTell(datum=f"thermal resistance of {stage}", supply=f'[[part]] ref = "{stage}" with rth_ja_kpw')
    tj = bench.heated.device_k[bench.family(stage)][:, bench.place(stage)] - ZERO_CELSIUS_K
    p = _chip_power(bench, bench.heated, stage)
    ambient = bench.circuit.temperature_k - ZERO_CELSIUS_K
    return figure(
        "tj_c",
        stage,
        np.where(np.isfinite(p), tj, np.nan),
        "degC",
        formula="TJ = TA + P RthJA",
        numbers=(("TA", first(ambient), "degC"), ("P", first(p), "W"), ("RthJA", rth, "K/W")),
        source="self-heated operating point",
    )


@quantity("tj_max_c", "degC", "stage", "rated junction temperature")
def junction_limit(bench: Bench, stage: str) -> Figure:
    """From the card or the intent."""
    value = bench.facts[stage].ratings.tj_max_c
    if value is None:
        raise CannotTell(datum=f"rated junction temperature of {stage}", supply=f'[[part]] ref = "{stage}" tj_max_c')
    return figure("tj_max_c", stage, np.full(bench.size, value), "degC", formula="rating", source=_origin(bench, stage))


@quantity("power_limit_w", "W", "stage", "rated dissipation at the ambient temperature")
def power_limit(bench: Bench, stage: str) -> Figure:
    """Ptot at 25 degC, falling in a straight line to nothing at the rated junction temperature."""
    ratings = bench.facts[stage].ratings
    if ratings.p_max_w is None:
        raise CannotTell(datum=f"rated dissipation of {stage}", supply=f'[[part]] ref = "{stage}" with p_max_w')
    ambient = bench.circuit.temperature_k - ZERO_CELSIUS_K
    tj = ratings.tj_max_c if ratings.tj_max_c is not None else 150.0
    values = ratings.p_max_w * np.clip((tj - ambient) / (tj - 25.0), 0.0, 1.0)
    own = bench.point.transistor["power_w"][:, bench.stage(stage).index]
    others = np.nan_to_num(_chip_power(bench, bench.point, stage) - own)
    shared = bool(np.any(others != 0.0))
    return figure(
        "power_limit_w",
        stage,
        values - others,
        "W",
        formula="Ptot (TJmax - TA)/(TJmax - 25 degC), at most Ptot" + (", less the other half's" if shared else ""),
        numbers=(
            ("Ptot", ratings.p_max_w, "W"),
            ("TJmax", tj, "degC"),
            ("TA", first(ambient), "degC"),
            *((("P of the other half", first(others), "W"),) if shared else ()),
        ),
        source=_origin(bench, stage),
    )


def _chip_power(bench: Bench, point: OperatingPoint, stage: str) -> FloatArray:
    """Dissipation (S,) [W] of the chip on which a stage's device is."""
    family = bench.family(stage)
    return bench.circuit.devices[family].chip_power(point.devices[family]["power_w"])[:, bench.place(stage)]


def _origin(bench: Bench, stage: str) -> str:
    card = bench.facts[stage].card
    return f"card {card.name}: {card.source}" if card is not None else "intent file"
