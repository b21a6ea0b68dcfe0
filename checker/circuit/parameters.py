"""SPICE-style model parameters: names, values where a card is silent, other spellings, scaling with area.

Source: the parameter tables of the SPICE 2G6/3F5 user guides (Gummel-Poon bipolar, junction diode), from
memory. `inf` stands for "effect absent" where the guide's default is infinite; a written 0 means the same
there.
"""

from __future__ import annotations

from collections.abc import Mapping
from typing import Final

import numpy as np

INF: Final = float(np.inf)

BIPOLAR: Final[Mapping[str, float]] = {
    "is": 1e-16,
    "bf": 100.0,
    "nf": 1.0,
    "vaf": INF,
    "ikf": INF,
    "ise": 0.0,
    "ne": 1.5,
    "br": 1.0,
    "nr": 1.0,
    "var": INF,
    "ikr": INF,
    "isc": 0.0,
    "nc": 2.0,
    "rb": 0.0,
    "irb": INF,
    "rbm": 0.0,
    "re": 0.0,
    "rc": 0.0,
    "cje": 0.0,
    "vje": 0.75,
    "mje": 0.33,
    "tf": 0.0,
    "xtf": 0.0,
    "vtf": INF,
    "itf": 0.0,
    "cjc": 0.0,
    "vjc": 0.75,
    "mjc": 0.33,
    "xcjc": 1.0,
    "tr": 0.0,
    "cjs": 0.0,
    "vjs": 0.75,
    "mjs": 0.0,
    "xtb": 0.0,
    "eg": 1.11,
    "xti": 3.0,
    "fc": 0.5,
    "kf": 0.0,
    "af": 1.0,
}
"""`rbm` follows `rb` where it is not given."""

DIODE: Final[Mapping[str, float]] = {
    "is": 1e-14,
    "n": 1.0,
    "rs": 0.0,
    "cjo": 0.0,
    "vj": 1.0,
    "m": 0.5,
    "tt": 0.0,
    "eg": 1.11,
    "xti": 3.0,
    "bv": INF,
    "ibv": 1e-3,
    "fc": 0.5,
    "isr": 0.0,
    "nr": 2.0,
    "ikf": INF,
    "nbv": 1.0,
    "tbv1": 0.0,
    "kf": 0.0,
    "af": 1.0,
}

JFET: Final[Mapping[str, float]] = {
    "vto": -2.0,
    "beta": 1e-4,
    "lambda": 0.0,
    "b": 1.0,
    "is": 1e-14,
    "n": 1.0,
    "isr": 0.0,
    "nr": 2.0,
    "alpha": 0.0,
    "vk": 0.0,
    "bv": INF,
    "ibv": 1e-3,
    "nbv": 1.0,
    "rd": 0.0,
    "rs": 0.0,
    "cgs": 0.0,
    "cgd": 0.0,
    "pb": 1.0,
    "m": 0.5,
    "fc": 0.5,
    "vtotc": 0.0,
    "betatce": 0.0,
    "eg": 1.11,
    "xti": 3.0,
    "kf": 0.0,
    "af": 1.0,
}

MOSFET: Final[Mapping[str, float]] = {
    "vto": 0.0,
    "kp": 2e-5,
    "lambda": 0.0,
    "gamma": 0.0,
    "phi": 0.6,
    "channel": 1.0,
    "w": 1e-4,
    "l": 1e-4,
    "rd": 0.0,
    "rs": 0.0,
    "isd": 1e-14,
    "iss": 1e-14,
    "n": 1.0,
    "cbd": 0.0,
    "cbs": 0.0,
    "cbdsw": 0.0,
    "cbssw": 0.0,
    "pb": 0.8,
    "mj": 0.5,
    "mjsw": 0.5,
    "fc": 0.5,
    "cgso": 0.0,
    "cgdo": 0.0,
    "cgbo": 0.0,
    "cox": 0.0,
    "weak": 0.0,
    "kf": 0.0,
    "af": 1.0,
}
"""`vto` is counted positive for enhancement of either polarity, `channel` is +1 for N and -1 for P, `l` is the
effective length, `cox` [F] the oxide over the whole channel; `isd`, `cbd`, `cbdsw` are of the drain's whole junction
and its sidewall, `iss`, `cbs`, `cbssw` of the source's; `weak` is the slope n of exp(VGS/(n VT)) below threshold, 0 for
none."""

OPAMP: Final[Mapping[str, float]] = {"gain": 1e5, "gbw": 1e6, "rout": 75.0, "high": 1.5, "low": 1.5}
"""Open-loop gain, gain-bandwidth product [Hz], output resistance [ohm], what the output keeps from its supplies [V]."""

PARAMETERS: Final[Mapping[str, Mapping[str, float]]] = {
    "bipolar": BIPOLAR,
    "jfet": JFET,
    "mosfet": MOSFET,
    "diode": DIODE,
    "opamp": OPAMP,
}
"""Every device family of a board with the parameters of its table and their defaults."""

BIPOLAR_SPELLINGS: Final[Mapping[str, str]] = {
    "va": "vaf",
    "vb": "var",
    "vbf": "vaf",
    "ik": "ikf",
    "jbf": "ikf",
    "jbr": "ikr",
    "jlc": "isc",
    "jle": "ise",
    "c2": "ise_over_is",
    "c4": "isc_over_is",
    "pe": "vje",
    "me": "mje",
    "pc": "vjc",
    "mc": "mjc",
    "ps": "vjs",
    "ms": "mjs",
    "ccs": "cjs",
    "csub": "cjs",
    "psub": "vjs",
    "esub": "mjs",
    "jrb": "irb",
    "iob": "irb",
    "tref": "tnom",
    "t_measured": "tnom",
    "pt": "xti",
    "tb": "xtb",
    "tcb": "xtb",
}
"""Older and other spellings of the same bipolar parameter."""

DIODE_SPELLINGS: Final[Mapping[str, str]] = {
    "cj0": "cjo",
    "cj": "cjo",
    "pb": "vj",
    "mj": "m",
    "vb": "bv",
    "vrb": "bv",
    "js": "is",
    "ik": "ikf",
    "tref": "tnom",
    "t_measured": "tnom",
}

JFET_SPELLINGS: Final[Mapping[str, str]] = {"vt0": "vto", "tref": "tnom", "t_measured": "tnom"}
MOSFET_SPELLINGS: Final[Mapping[str, str]] = {
    "vt0": "vto",
    "uo": "u0",
    "tref": "tnom",
    "t_measured": "tnom",
}

ZERO_IS_ABSENT: Final = frozenset({"vaf", "var", "ikf", "ikr", "irb", "vtf", "bv"})
"""A written 0 means infinite: the effect is switched off."""

LARGEST: Final = 1e24
"""Written figures beyond this are no board's; where a default is infinite they mean it."""
_EMISSION: Final = dict.fromkeys(("nf", "nr", "ne", "nc", "n", "nbv"), (0.1, 100.0))
_BUILT_IN: Final = dict.fromkeys(("vje", "vjc", "vjs", "vj", "pb", "phi"), (0.01, 100.0))
_GRADING: Final = dict.fromkeys(("mje", "mjc", "mjs", "m", "mj", "fc"), (0.0, 0.999))
RANGES: Final[Mapping[str, tuple[float, float]]] = {
    **_EMISSION,
    **_BUILT_IN,
    **_GRADING,
    **dict.fromkeys(("is", "isd", "iss", "w", "l", "ibv"), (1e-60, LARGEST)),
    **dict.fromkeys(("bf", "br"), (1e-6, 1e9)),
    **dict.fromkeys(("vaf", "var", "ikf", "ikr", "irb", "vtf", "bv"), (1e-9, INF)),
    **dict.fromkeys(("xti", "xtb", "tbv1", "vto", "vtotc", "betatce"), (-1e4, 1e4)),
    "eg": (0.1, 10.0),
    "xcjc": (0.0, 1.0),
    "channel": (-1.0, 1.0),
    "tnom": (-270.0, 1e3),
}
"""What the equations can be asked with: outside, a figure is a slip of the pen. Others lie from 0 to `LARGEST`."""

BIPOLAR_TIMES_AREA: Final = (
    "is",
    "ise",
    "isc",
    "ikf",
    "ikr",
    "irb",
    "itf",
    "cje",
    "cjc",
    "cjs",
)
BIPOLAR_OVER_AREA: Final = ("rb", "rbm", "re", "rc")
DIODE_TIMES_AREA: Final = ("is", "isr", "ikf", "ibv", "cjo")
DIODE_OVER_AREA: Final = ("rs",)
JFET_TIMES_AREA: Final = ("beta", "is", "isr", "ibv", "cgs", "cgd")
JFET_OVER_AREA: Final = ("rd", "rs")
MOSFET_TIMES_COUNT: Final = ("w", "isd", "iss", "cbd", "cbs", "cbdsw", "cbssw", "cgbo", "cox")
MOSFET_OVER_COUNT: Final = ("rd", "rs")

SILENT: Final = frozenset({"level", "tnom", "vceo", "vcbo", "icrating", "iave", "vpk", "irms", "isurge", "mfg", "type"})
"""Written in models without an effect on what is computed here: no remark is made."""

LEFT_OUT: Final[Mapping[str, tuple[str, ...]]] = {
    "quasi-saturation": ("rco", "vo", "gamma", "qco", "quasimod", "vg", "cn", "d"),
    "excess phase": ("ptf",),
}
"""Effects of a bipolar that are not modelled, with the parameters that ask for them where they are not zero."""
