"""Two boards side by side: the forms of `stageproof compare`, and the words that they share."""

from __future__ import annotations

from collections.abc import Callable
from importlib import import_module

from checker.record import Complex
from checker.record.comparison import Changed, Comparison, Edit, Moved
from checker.record.write import dump, plain
from checker.report.clean import clean, name
from checker.report.layout import NO_BREAK
from checker.report.quantities import figure, given, number, unit_of, words

FORMS = {
    "text": "checker.report.comparison_text",
    "markdown": "checker.report.comparison_markdown",
    "json": "checker.report.comparison",
}
"""Name to the module whose `render` makes it."""

Render = Callable[..., str]


def comparison_form(form: str) -> Render:
    """The form of that name, called with the comparison, `width` and `colour`."""
    render: Render = import_module(FORMS[form]).render
    return render


def render(comparison: Comparison, *, width: int, colour: bool) -> str:  # noqa: ARG001 - one signature for all forms
    """The comparison as JSON."""
    return dump(plain(comparison, "comparison")) + "\n"


def verdict(comparison: Comparison) -> str:
    """What changed, counted."""
    parts = len({edit.part for edit in comparison.edits})
    stages = [each for each in comparison.changed if each.kind == "stage"]
    own = [each for each in stages if each.how != "follows"]
    counts = [
        _many(parts, "part", "edited"),
        _many(len(own), "stage", "changed"),
        f"{len(stages) - len(own)} following" if len(own) < len(stages) else "",
        f"{len(comparison.new_findings)} new, {len(comparison.cured)} cured",
        f"{len(comparison.unchanged)} unchanged findings",
        f"{len(comparison.unjudged)} no longer judged" if comparison.unjudged else "",
    ]
    return ", ".join(filter(None, counts))


def _many(count: int, noun: str, verb: str) -> str:
    return f"{count} {noun}{'' if count == 1 else 's'} {verb}"


def edited(edit: Edit) -> tuple[str, str, str]:
    """Part, what happened to it, and the stages it belongs to; clean."""
    before, after = (_end(value, edit.unit) for value in (edit.before, edit.after))
    told = {
        "added": f"added{f', {after}' if after else ''}",
        "removed": f"removed{f', was {before}' if before else ''}",
        "data": "other ratings, tolerance or model parameters",
        "wiring": f"pin {before}, now {after}",
    }.get(edit.what, f"{before or '—'} → {after or '—'}")
    return f"{name(edit.part)}", told, ", ".join(map(name, edit.stages)) or "no stage"


def _end(value: float | str | None, unit: str) -> str:
    if value is None or isinstance(value, str):
        return clean(value or "", 80)
    return given(value, clean(unit)).replace(NO_BREAK, " ")


def traced(change: Changed) -> str:
    """In words, what a change is traced to."""
    because = some_of(change.because)
    return {
        "edited": f"changed by {because}",
        "follows": f"follows {because}",
        "conditions": f"moved by {because}",
        "added": f"new{f', with {because}' if because else ''}",
        "removed": "gone",
        "unexplained": "nothing that was edited explains it",
    }[change.how]


def some_of(names: tuple[str, ...], most: int = 6) -> str:
    """The first few names, the rest counted."""
    more = f" and {len(names) - most} more" if len(names) > most else ""
    return ", ".join(map(name, names[:most])) + more


def titled(change: Changed) -> str:
    """What changed, with its old name where that was another."""
    kind = {"stage": "", "group": "group ", "port": "port ", "gain": ""}[change.kind]
    was = f" (was {name(change.was)})" if change.was is not None and change.was != change.id else ""
    return f"{kind}{name(change.id)}{was}"


def row(moved: Moved) -> tuple[str, str, str, str]:
    """Quantity, before, after, and by how much."""
    label = words(clean(moved.quantity))
    return label, _shown(moved, moved.before), _shown(moved, moved.after), _difference(moved)


def _shown(moved: Moved, value: object) -> str:
    if value is None:
        return "—"
    if isinstance(value, (str, bool)):
        return clean(str(value))
    assert isinstance(value, (Complex, float, int))  # noqa: S101 - nothing else is a figure
    return figure(value, moved.quantity).replace(NO_BREAK, " ")


def _difference(moved: Moved) -> str:
    old, new = moved.before, moved.after
    if isinstance(old, (str, bool)) or isinstance(new, (str, bool)) or old is None or new is None:
        return ""
    unit = unit_of(moved.quantity)
    if isinstance(old, Complex) or isinstance(new, Complex):
        return ""
    if unit in ("dB", "dBm", "degC"):
        return f"{'+' if new > old else ''}{number(new - old, unit)}".replace(NO_BREAK, " ")
    return f"{(new - old) / abs(old) * 100:+.3g} %" if old else ""
