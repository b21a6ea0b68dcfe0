"""Field-effect transistors: model parameters in closed form from what a data sheet states.

Keys of a row in `data/` (SI; lists are in this order)::

    idss      [min, typical, max]            junction FET: drain current at VGS = 0
    vgs_off   [min, typical, max]            cut-off voltage as printed (negative for N)
    vgs_th    [min, typical, max]            MOSFET: threshold as printed
    gfs       [ID, transconductance]         MOSFET, typical
    rds_on    [VGS, resistance]              MOSFET, typical; VGS as printed; without it the channel's own
    ciss, crss    [VDS, typical]             input and reverse transfer capacitance, VGS = 0
    lam       channel-length modulation 1/V  taken as it is, as are is, pb, n

MOSFETs get the square-law model with width and length of 1 m, so that KP is in A/V2 of the whole device and
the overlap capacitances per metre are those of the device.
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from typing import Any


def jfet_model(row: Mapping[str, Any]) -> dict[str, float]:
    """Square-law parameters of the typical unit; VTO is negative for both polarities, by the model's rule."""
    vto = -abs(row["vgs_off"][1])
    pb = row["pb"]
    crss_vds, crss = row["crss"]
    return {
        "vto": vto,
        "beta": row["idss"][1] / vto**2,
        "lambda": row["lam"],
        "is": row["is"],
        "n": row["n"],
        "pb": pb,
        "m": 0.5,
        "fc": 0.5,
        "cgd": crss * math.sqrt(1.0 + crss_vds / pb),
        "cgs": row["ciss"][1] - crss,
        "rd": 0.0,
        "rs": 0.0,
    }


def mosfet_model(row: Mapping[str, Any]) -> dict[str, float]:
    """Square-law parameters of the typical unit; VTO has the printed sign (negative for enhancement P types).

    KP follows from the transconductance, the rest of the on-resistance is RD. Raises ValueError where the
    channel alone has more than the stated on-resistance.
    """
    vto = row["vgs_th"][1]
    id_a, gfs = row["gfs"]
    kp = gfs**2 / (2.0 * id_a)
    rd = 0.0
    if "rds_on" in row:
        vgs, rds_on = row["rds_on"]
        rd = rds_on - 1.0 / (kp * abs(vgs - vto))
        if rd < 0.0:
            raise ValueError(f"{row['name']}: its channel alone has {rds_on - rd:.3g} ohm, more than stated")
    crss = row["crss"][1]
    return {
        "level": 1.0,
        "w": 1.0,
        "l": 1.0,
        "vto": vto,
        "kp": kp,
        "lambda": row["lam"],
        "rd": rd,
        "rs": 0.0,
        "cgdo": crss,
        "cgso": row["ciss"][1] - crss,
        "is": row["is"],
        "n": row["n"],
    }


def spread(row: Mapping[str, Any]) -> tuple[dict[str, float], dict[str, float]] | None:
    """Factors on VTO (and BETA of a junction FET) at the ends of lowest and of highest current; None where the row
    states no range.

    A junction FET's IDSS and cut-off voltage rise together, so both ends keep the square law through their own pair;
    a MOSFET's low current belongs to its high threshold.
    """
    volts = row["vgs_off"] if "vgs_off" in row else row["vgs_th"]
    if "vgs_off" in row:
        amps = row["idss"]
        ends = [(0, amps[0]), (2, amps[2])]
        if any(volts[k] is None or a is None for k, a in ends):
            return None
        typical = amps[1] / volts[1] ** 2
        low, high = ({"vto": volts[k] / volts[1], "beta": a / volts[k] ** 2 / typical} for k, a in ends)
        return low, high
    if volts[0] is None or volts[2] is None:
        return None
    return {"vto": volts[2] / volts[1]}, {"vto": volts[0] / volts[1]}
