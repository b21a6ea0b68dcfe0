"""All that one call has to report: one board or several, those that gave no report, and the rules that took part."""

from __future__ import annotations

from typing import TYPE_CHECKING

from checker.record import Report
from checker.report.forms import FORMS, form, whole
from checker.shape import frozen
from checker.words import Gate

if TYPE_CHECKING:
    from checker.report.catalogue import RuleShown


@frozen
class Bundle:
    """`without`: path and message of each netlist that gave no report. `several`: whether more than one board was
    asked for, whatever came of it. `rules`: all that took part; empty where the form is not to list them. `gate`: the
    least severity that fails the run.
    """

    reports: tuple[Report, ...]
    without: tuple[tuple[str, str], ...] = ()
    several: bool = False
    rules: tuple[RuleShown, ...] = ()
    gate: Gate = "must-fix"

    def render(self, name: str, *, width: int, colour: bool) -> str:
        """Everything in the form of that name, as one text that ends in a newline."""
        make = whole(name)
        if make is not None:
            return make(self, width=width, colour=colour)
        one = form(name)
        return "\n".join(one(report, width=width, colour=colour) for report in self.reports)

    def render_all(self, *, width: int) -> dict[str, str]:
        """Every form: file name to text."""
        return {
            f"stageproof{suffix}": self.render(name, width=width, colour=False) for name, (_, suffix) in FORMS.items()
        }
