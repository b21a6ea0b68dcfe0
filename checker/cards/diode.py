"""Diodes, zeners and LEDs: model parameters in closed form from what a data sheet states.

Keys of a row in `data/` (SI)::

    vf        three pairs [IF, VF], typical; IS, N and RS follow from them
    cjo vj m tt bv ibv eg xti      taken into the model as they are
    zener     [VZ, at IZ, dynamic resistance there, temperature coefficient in 1/K]
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from typing import Any, Final

from checker.cards.bipolar import VT_V

TAKEN: Final = ("cjo", "vj", "m", "tt", "bv", "ibv", "eg", "xti")


def diode_model(row: Mapping[str, Any]) -> dict[str, float]:
    """Model parameters at 27 degC: V = N VT ln(I/IS) + RS I through the three points of `vf`.

    A zener also gets its breakdown: I = IBV exp((|V| - BV)/(NBV VT)) with BV the stated voltage less the drop
    over RS, NBV from the dynamic resistance; `tbv1` is the relative temperature coefficient of BV.
    Raises ValueError where the three points give no positive N or a negative RS.
    """
    model = {name: float(row[name]) for name in TAKEN if name in row}
    model |= _forward(row)
    if "zener" in row:
        vz, iz, rz, tc = row["zener"]
        model["bv"] = vz - iz * model["rs"]
        model["ibv"] = iz
        model["nbv"] = (rz - model["rs"]) * iz / VT_V
        model["tbv1"] = tc
    return model


def _forward(row: Mapping[str, Any]) -> dict[str, float]:
    (i1, v1), (i2, v2), (i3, v3) = row["vf"]
    l21, l32 = math.log(i2 / i1), math.log(i3 / i2)
    # two slopes, linear in N VT and RS: v2 - v1 = NVT l21 + RS (i2 - i1), and the same from 2 to 3
    determinant = l21 * (i3 - i2) - l32 * (i2 - i1)
    n_vt = ((v2 - v1) * (i3 - i2) - (v3 - v2) * (i2 - i1)) / determinant
    rs = (l21 * (v3 - v2) - l32 * (v2 - v1)) / determinant
    if n_vt <= 0.0 or rs < 0.0:
        raise ValueError(f"{row['name']}: the three forward points are no diode")
    return {"n": n_vt / VT_V, "rs": rs, "is": i1 * math.exp(-(v1 - rs * i1) / n_vt)}
