"""Intrinsic small-signal parameters at the operating point, one value a scenario."""

from __future__ import annotations

import numpy as np

from checker.arrays import FloatArray
from checker.measure.bench import Bench
from checker.measure.bias import require_bias
from checker.measure.make import figure, first, missing
from checker.measure.registry import quantity
from checker.quantity.figure import Figure
from checker.solve.admittance import intrinsic


def _of(bench: Bench, stage: str, key: str) -> FloatArray:
    """gm, g_pi, g_o [S] or c [F] of a stage's device, (S,)."""
    require_bias(bench, stage)
    return intrinsic(bench.point, bench.family(stage))[key][:, bench.place(stage)]


NO_SLOPE = {
    "bipolar": "infinite: the model has no Early voltage",
    "jfet": "infinite: the model has no channel-length modulation",
    "mosfet": "infinite: the model has no channel-length modulation",
}


def _slope(bench: Bench, stage: str) -> str:
    return "dIC/dVBE at VCE" if bench.family(stage) == "bipolar" else "dID/dVGS at VDS"


@quantity("gm_s", "S", "stage", "transconductance dIC/dVBE at VCE, dID/dVGS at VDS")
def gm(bench: Bench, stage: str) -> Figure:
    """Intrinsic, from the analytic derivatives."""
    return figure("gm_s", stage, _of(bench, stage, "gm"), "S", formula=f"gm = {_slope(bench, stage)}")


@quantity("rpi_ohm", "ohm", "stage", "base input resistance 1/(dIB/dVBE)")
def r_pi(bench: Bench, stage: str) -> Figure:
    """At constant VCE; infinite (null) at an insulated gate."""
    values = _inverse(_of(bench, stage, "g_pi"))
    reason = "" if np.isfinite(values[0]) else "infinite: no current enters the gate"
    return figure("rpi_ohm", stage, values, "ohm", formula="r_pi = 1/(dIB/dVBE), 1/(dIG/dVGS)", reason=reason)


@quantity("ro_ohm", "ohm", "stage", "output resistance 1/(dIC/dVCE)")
def r_o(bench: Bench, stage: str) -> Figure:
    """Infinite (null) where the model has no Early voltage."""
    values = _inverse(_of(bench, stage, "g_o"))
    reason = "" if np.isfinite(values[0]) else NO_SLOPE[bench.family(stage)]
    return figure("ro_ohm", stage, values, "ohm", formula="ro = 1/(dIC/dVCE), 1/(dID/dVDS)", reason=reason)


@quantity("re_ohm", "ohm", "stage", "hand figure VT/IE")
def r_e(bench: Bench, stage: str) -> Figure:
    """Declared a hand figure."""
    require_bias(bench, stage)
    if bench.family(stage) != "bipolar":
        return missing("re_ohm", stage, bench.size, "ohm", "not applicable: no emitter junction")
    ie = np.abs(bench.point.transistor["i_common_a"][:, bench.stage(stage).index])
    vt = bench.point.assembler.p[bench.family(stage)]["vt"][:, bench.place(stage)]
    return figure(
        "re_ohm",
        stage,
        _inverse(ie / vt),
        "ohm",
        formula="re' = VT/IE",
        numbers=(("VT", first(vt), "V"), ("IE", first(ie), "A")),
        source="common practice, hand figure",
    )


@quantity("ft_hz", "Hz", "stage", "transition frequency at this bias")
def f_t(bench: Bench, stage: str) -> Figure:
    """gm over 2 pi of all base charge, junction charge included."""
    c = _of(bench, stage, "c")
    values = _of(bench, stage, "gm") * _inverse(2.0 * np.pi * c)
    reason = "" if np.isfinite(values[0]) else "the model has no charges"
    return figure(
        "ft_hz", stage, values, "Hz", formula="fT = gm/(2 pi (Cpi + Cmu)), gm/(2 pi (Cgs + Cgd + Cgb))", reason=reason
    )


def _inverse(x: FloatArray) -> FloatArray:
    return np.asarray(1.0 / np.where(x > 0.0, x, np.nan))
