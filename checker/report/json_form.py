"""The report as JSON, one or several."""

from __future__ import annotations

from checker.record import Report, in_order
from checker.record.read import SEVERAL
from checker.record.write import dump, plain, to_json
from checker.report.bundle import Bundle


def render(report: Report, *, width: int, colour: bool) -> str:  # noqa: ARG001 - one signature for all forms
    """The report as JSON text; width and colour mean nothing here."""
    return to_json(report) + "\n"


def render_bundle(bundle: Bundle, *, width: int, colour: bool) -> str:
    """The report alone where one board was asked for, else all of them as one object."""
    if not bundle.several:
        return "".join(render(report, width=width, colour=colour) for report in bundle.reports)
    return (
        dump(
            {
                "schema": SEVERAL,
                "reports": [plain(in_order(report)) for report in bundle.reports],
                "unusable": [{"path": path, "message": message} for path, message in bundle.without],
            }
        )
        + "\n"
    )
