"""Whether a transistor's symbol, part number and package fit each other: 0 where they do, 1 where they do not."""

from __future__ import annotations

import numpy as np

from checker.measure.bench import Bench
from checker.measure.make import figure
from checker.measure.registry import quantity
from checker.quantity.figure import Figure
from checker.trouble import CannotTell


def _register(name: str, question: str, meaning: str) -> None:
    @quantity(name, "", "stage", meaning)
    def measure(bench: Bench, part: str) -> Figure:
        agreement = bench.circuit.parts[part].agreement
        size = bench.circuit.size
        if not agreement.judged:
            return figure(name, part, np.full(size, np.nan), "", reason="not applicable: the export shows no pads")
        if question in agreement.wrong:
            return figure(name, part, np.ones(size), "", formula=agreement.wrong[question], source="the part's card")
        if question in agreement.unknown:
            if question != "pin-order":
                return figure(name, part, np.full(size, np.nan), "", reason="not applicable: part or package not known")
            datum, supply = agreement.unknown[question]
            raise CannotTell(datum=datum, supply=supply)
        return figure(name, part, np.zeros(size), "", formula="symbol, part number and package agree")


_register("pin_order_conflict", "pin-order", "1 where the symbol's pads are not those of the part in its package")
_register("polarity_conflict", "part-polarity", "1 where the part number has another polarity than the symbol")
_register("package_conflict", "package-mismatch", "1 where the part is not made in the package of its footprint")
