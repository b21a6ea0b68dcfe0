"""Which pad of a footprint is which terminal."""

from __future__ import annotations

import re
from collections.abc import Mapping
from typing import Final

from checker.cards.types import Card

TWO_LEAD: Final = "two-lead"
"""Every two-lead diode outline: its pad 1 is the cathode by the convention of the footprint libraries."""

_PACKAGES: Final = (
    ("SOT-23", r"SOT-?23(?:-3)?(?!\d|-\d(?![A-Z\d]))"),
    ("SOT-323", r"SOT-?323|SC-?70(?:-3)?(?![-\d])"),
    ("SOT-363", r"SOT-?363|SC-?70-6|SC-?88(?!\d|A)"),
    ("SOT-143", r"SOT-?143B?(?!R|\d)"),
    ("SOT-143R", r"SOT-?143R"),
    ("SOT-343", r"SOT-?343|SC-?82(?!\d)"),
    ("SOT-223", r"SOT-?223(?:-3)?(?![-\d])"),
    ("SOT-89", r"SOT-?89(?:-3)?(?![-\d])"),
    ("SC-59", r"SC-?59(?!\d)"),
    ("TO-92", r"TO-?92(?!-2)(?!\d)"),
    ("TO-18", r"TO-?18(?!\d)"),
    ("TO-39", r"TO-?39(?!\d)|TO-?5(?!\d)"),
    ("TO-72", r"TO-?72(?!\d)"),
    ("TO-126", r"TO-?126(?!\d)|TO-?225(?!\d)|SOT-?32(?!\d)"),
    ("TO-220", r"TO-?220(?!-2|-4|-5|\d)|TO-?220F"),
    ("TO-247", r"TO-?247(?!-4|\d)|TO-?3P|TO-?218(?!\d)|TO-?264(?!\d)"),
    ("TO-3", r"TO-?3(?![\dP])"),
    ("TO-252", r"TO-?252(?!\d)|(?<!D2)(?<!D)DPAK"),
    ("TO-263", r"TO-?263(?!\d)|D2PAK|DDPAK"),
    (
        TWO_LEAD,
        r"(?:MINI)?MELF|SOD-?\d|DO-?\d|SM[ABC](?:_HAND\w+)?$|D_\d{4}|A-?405|LED(?!.*(?:-[3-9]|RGB|5050))",
    ),
)


def package_of(footprint: str) -> str | None:
    """Package family ("SOT-23", "TO-92", ...) that a footprint's name tells, None where it tells none."""
    name = footprint[-200:].rpartition(":")[2].upper().replace(" ", "-")
    for package, pattern in _PACKAGES:
        if re.search(rf"(?<![A-Z0-9]){pattern}", name):
            return package
    return None


def pin_map(card: Card, footprint: str) -> Mapping[str, str] | None:
    """Pad number -> terminal of `card` in `footprint`; None where either leaves doubt.

    A terminal of a dual device carries its unit: "B1", "E2".
    """
    package = package_of(footprint)
    if package is None:
        return None
    if package == "SC-59" and package not in card.packages:
        package = "SOT-23"  # the same outline under its other name
    return card.packages.get(package)
