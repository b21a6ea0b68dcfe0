"""The registry of report forms: a name and the module whose `render` makes it, imported on use."""

from __future__ import annotations

from importlib import import_module
from typing import Protocol

from checker.record import Report
from checker.trouble import InputTrouble

FORMS = {"text": "checker.report.text", "json": "checker.report.json_form"}
"""Name to module. To add a form: a module with `render` and a line here."""


class Render(Protocol):
    """What the module of a form offers: the whole report as text that ends in a newline."""

    def __call__(self, report: Report, *, width: int, colour: bool) -> str: ...


def form(name: str) -> Render:
    """The form of that name. Raises InputTrouble for one that does not exist."""
    if name not in FORMS:
        raise InputTrouble(f"no report form {name!r}; there are {', '.join(FORMS)}")
    render: Render = import_module(FORMS[name]).render
    return render
