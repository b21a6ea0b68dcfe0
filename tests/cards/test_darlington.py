"""The two transistors of each Darlington card together give back the gain that its data sheet states."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

import pytest
from scipy.optimize import brentq

from checker.cards.load import card_from, rows
from tests.cards import gummel_poon as gp

ROWS: Mapping[str, Mapping[str, Any]] = {row["name"]: row for row in rows("darlington").values()}


@pytest.mark.parametrize("name", sorted(ROWS))
def test_gain_of_the_pair(name: str) -> None:
    """Output transistor at what the driver leaves of IC; the driver's emitter feeds its base and the resistor there."""
    row, card = ROWS[name], card_from(ROWS[name])
    assert card.driver is not None
    low, typical, high, ic, vce = row["pair"]
    driver = card.driver.model

    def base_current(out_ic: float) -> tuple[float, float]:
        """(current into the base of the pair, collector current of the driver)."""
        out = gp.active(card.model, out_ic, vce)
        emitter = out.ib + out.vbe / card.resistors.get("be2", 1e99)
        first = brentq(
            lambda i: i + gp.active(driver, i, vce - out.vbe).ib - emitter, emitter * 1e-3, emitter, xtol=1e-15
        )
        at = gp.active(driver, first, vce - out.vbe)
        return at.ib + at.vbe / card.resistors.get("be1", 1e99), first

    out_ic = brentq(lambda i: i + base_current(i)[1] - ic, 0.3 * ic, ic, xtol=1e-12)
    gain = ic / base_current(out_ic)[0]
    assert low <= gain <= (high or float("inf"))
    assert gain == pytest.approx(typical, rel=0.5)  # typical gains of pairs are read off broad curves
