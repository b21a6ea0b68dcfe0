"""Bipolar transistors: a Gummel-Poon model in closed form from what a data sheet states.

Keys of a row in `data/` (SI; lists are in this order)::

    gain      [min, typical, max, at IC, at VCE]   max may be null
    groups    group -> [min, typical, max]         gain groups at the same point
    vbe       [IC, VBE]                            typical, active, VCE 5 V
    ft        [IC, VCE, fT]                        typical transition frequency
    cob, cib  [reverse volts, typical, max]        collector-base, emitter-base capacitance
    vce_sat   [IC, IB, max]
    vaf       Early voltage
    ikf       collector current at which high injection has halved the gain
    ileak     collector current at which recombination takes half the base current; `ne` its exponent
    br rb rc re vje mje vjc mjc tr xtb             taken into the model as they are

    symbol  variable    meaning
    IC      ic_a        collector current
    IF      i_f         ideal forward transport current IS exp(VBE/VT), before base charge
    qb      -           base charge over its value at zero bias, q1 (1 + sqrt(1 + 4 IF/IKF)) / 2
    q1      -           1 / (1 + VCB/VAF): base-width modulation

Reference: G. Massobrio, P. Antognetti, Semiconductor Device Modeling with SPICE, 2nd edition, chapter 2
(equations from memory).
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from typing import Any, Final

from checker.constants import DEFAULT_AMBIENT_C, ZERO_CELSIUS_K, thermal_voltage_v

VT_V: Final = thermal_voltage_v(DEFAULT_AMBIENT_C + ZERO_CELSIUS_K)
FC: Final = 0.5
"""Fraction of the junction potential above which the depletion capacitance goes on as its tangent."""
_VBE_POINT_VCE_V: Final = 5.0

TAKEN: Final = ("vaf", "ikf", "ne", "br", "rb", "rc", "re", "vje", "mje", "vjc", "mjc", "tr", "xtb")


def bipolar_model(row: Mapping[str, Any]) -> dict[str, float]:
    """Model parameters at 27 degC of the typical unit that `row` describes.

    The model meets the typical gain, VBE, transition frequency and both capacitances at their stated points;
    the gain falls off as `ileak` and `ikf` say. Raises ValueError where the capacitances alone
    make the device slower than its stated transition frequency.
    """
    model = {name: float(row[name]) for name in TAKEN}
    model |= {"nf": 1.0, "nr": 1.0, "eg": 1.11, "xti": 3.0, "fc": FC}
    model["cje"] = _zero_bias(row["cib"], row["vje"], row["mje"])
    model["cjc"] = _zero_bias(row["cob"], row["vjc"], row["mjc"])
    leak = row["ileak"]
    model["bf"] = _ideal_gain(row)
    model["is"] = _saturation_current(row, model["bf"])
    model["ise"] = leak / model["bf"] * (model["is"] / leak) ** (1.0 / row["ne"])
    model["tf"] = _transit_time(row, model)
    return model


def _transport_current(row: Mapping[str, Any], ic_a: float, vce_v: float) -> float:
    """IF at a collector current: IC = IF/qb solved for IF, VCB taken as VCE less the typical VBE."""
    k = ic_a / (1.0 + (vce_v - row["vbe"][1]) / row["vaf"])
    return float(k * (1.0 + k / row["ikf"]))


def _base_shape(row: Mapping[str, Any], i_f: float) -> float:
    """BF times the base current at IF: the ideal part and the recombination, equal where IF = `ileak`."""
    return float(i_f + row["ileak"] * (i_f / row["ileak"]) ** (1.0 / row["ne"]))


def _ideal_gain(row: Mapping[str, Any]) -> float:
    """BF, by which the gain at its stated point is the typical one."""
    _, typical, _, ic_a, vce_v = row["gain"]
    return float(typical / ic_a * _base_shape(row, _transport_current(row, ic_a, vce_v)))


def _saturation_current(row: Mapping[str, Any], bf: float) -> float:
    """IS, by which VBE at its stated current is the typical one, drops over RB and RE included."""
    ic_a, vbe_v = row["vbe"]
    i_f = _transport_current(row, ic_a, _VBE_POINT_VCE_V)
    ib_a = _base_shape(row, i_f) / bf
    junction_v = vbe_v - (ic_a + ib_a) * row["re"] - ib_a * row["rb"]
    return i_f * math.exp(-junction_v / VT_V)


def _zero_bias(measured: list[float], potential_v: float, grading: float) -> float:
    """Capacitance at zero bias of a junction measured in reverse."""
    reverse_v, typical, _ = measured
    return float(typical * (1.0 + reverse_v / potential_v) ** grading)


def _transit_time(row: Mapping[str, Any], model: Mapping[str, float]) -> float:
    """TF from 1/(2 pi fT) = TF + (Cje' + Cjc')/gm at the stated current."""
    ic_a, vce_v, ft_hz = row["ft"]
    i_f = _transport_current(row, ic_a, vce_v)
    k = ic_a / (1.0 + (vce_v - row["vbe"][1]) / row["vaf"])
    gm = ic_a / VT_V * (1.0 + k / row["ikf"]) / (1.0 + 2.0 * k / row["ikf"])
    junction_v = VT_V * math.log(i_f / model["is"])
    cje = _forward(model["cje"], junction_v, model["vje"], model["mje"])
    cjc = model["cjc"] * (1.0 + (vce_v - row["vbe"][1]) / model["vjc"]) ** -model["mjc"]
    tf = 1.0 / (2.0 * math.pi * ft_hz) - (cje + cjc) / gm
    if tf <= 0.0:
        raise ValueError(f"{row['name']}: the junction capacitances leave no room for its transition frequency")
    return float(tf)


def _forward(zero_bias_f: float, v: float, potential_v: float, grading: float) -> float:
    if v < FC * potential_v:
        return float(zero_bias_f * (1.0 - v / potential_v) ** -grading)
    slope = 1.0 - FC * (1.0 + grading) + grading * v / potential_v
    return float(zero_bias_f * slope / (1.0 - FC) ** (1.0 + grading))
