"""The registry of report forms: a name, the module whose `render` makes it, imported on use, and a file suffix."""

from __future__ import annotations

from importlib import import_module
from typing import TYPE_CHECKING, Protocol

from checker.record import Report
from checker.trouble import InputTrouble

if TYPE_CHECKING:
    from checker.report.bundle import Bundle

FORMS = {
    "text": ("checker.report.text", ".txt"),
    "json": ("checker.report.json_form", ".json"),
    "sarif": ("checker.report.sarif", ".sarif"),
    "junit": ("checker.report.junit", ".junit.xml"),
    "markdown": ("checker.report.markdown", ".md"),
}
"""Name to module and suffix. To add a form: a module with `render` and a line here."""


class Render(Protocol):
    """What the module of a form offers: the whole report as text that ends in a newline."""

    def __call__(self, report: Report, *, width: int, colour: bool) -> str: ...


class RenderBundle(Protocol):
    """What it may offer besides, as `render_bundle`: several boards as one text, if not one after another."""

    def __call__(self, bundle: Bundle, *, width: int, colour: bool) -> str: ...


def form(name: str) -> Render:
    """The form of that name. Raises InputTrouble for one that does not exist."""
    if name not in FORMS:
        raise InputTrouble(f"no report form {name!r}; there are {', '.join(FORMS)}")
    render: Render = import_module(FORMS[name][0]).render
    return render


def whole(name: str) -> RenderBundle | None:
    """How that form puts several boards into one text; None: one after another."""
    form(name)
    render: RenderBundle | None = getattr(import_module(FORMS[name][0]), "render_bundle", None)
    return render
