"""The report as JSON, one or several."""

from __future__ import annotations

from collections.abc import Sequence

from checker.record import Report, in_order, to_json
from checker.record.read import SEVERAL
from checker.record.write import dump, plain


def render(report: Report, *, width: int, colour: bool) -> str:  # noqa: ARG001 - one signature for all forms
    """The report as JSON text; width and colour mean nothing here."""
    return to_json(report) + "\n"


def render_several(reports: Sequence[Report], unusable: Sequence[tuple[str, str]]) -> str:
    """Several reports as one JSON object; `unusable`: path and message of each netlist that gave none."""
    return (
        dump(
            {
                "schema": SEVERAL,
                "reports": [plain(in_order(report)) for report in reports],
                "unusable": [{"path": path, "message": message} for path, message in unusable],
            }
        )
        + "\n"
    )
