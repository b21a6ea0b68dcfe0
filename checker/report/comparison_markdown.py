"""The comparison as Markdown, for a comment on a pull request."""

from __future__ import annotations

from collections.abc import Iterator

from checker.record.comparison import Changed, Comparison
from checker.report.comparison import edited, row, titled, traced, verdict
from checker.report.markdown import finding_block, shortened
from checker.report.markup import fitted, folded, marked, table
from checker.report.sections.since import brief


def render(comparison: Comparison, *, width: int, colour: bool) -> str:  # noqa: ARG001 - one signature for all forms
    """Verdict, new findings, then edits and stages, figures folded."""
    old, new = comparison.old, comparison.new
    opening = [
        f"## Stageproof: {verdict(comparison)}",
        f"From {marked(old.name)} to {marked(new.name)}; {new.checked} of {new.of} stages checked, "
        f"before {old.checked} of {old.of}.",
    ]
    opening += [
        f"**Incomplete: a part of the program failed on {marked(s.name)}.**" for s in (old, new) if s.incomplete
    ]
    blocks = [finding_block(finding, "", " (new)") for finding in comparison.new_findings]
    return fitted(
        opening, [*blocks, *_edits(comparison), *map(_change, comparison.changed), *_rest(comparison)], "blocks"
    )


def _edits(comparison: Comparison) -> Iterator[str]:
    if comparison.edits:
        rows = [tuple(map(marked, edited(edit))) for edit in comparison.edits]
        yield "\n".join(shortened(table(("edited part", "change", "belongs to"), rows)))
    if comparison.conditions:
        told = [(marked(each.what), marked(each.before), marked(each.after)) for each in comparison.conditions]
        yield "\n".join(shortened(table(("condition", "before", "after"), told)))


def _change(change: Changed) -> str:
    title = f"<b>{marked(titled(change))}</b>: {marked(traced(change))}"
    rows = [tuple(map(marked, row(moved))) for moved in change.figures]
    return folded(title, table(("quantity", "before", "after", "change"), rows)) if rows else title


def _rest(comparison: Comparison) -> Iterator[str]:
    for title, findings in (
        ("Cured", comparison.cured),
        ("No longer judged", comparison.unjudged),
        ("Unchanged findings", comparison.unchanged),
    ):
        if findings:
            lines = [f"- {marked(brief(finding))}" for finding in findings]
            yield folded(f"{title} ({len(findings)})", shortened(lines))
    if comparison.renumbered:
        pairs = [f"- {marked(old)} → {marked(new)}" for old, new in comparison.renumbered.items()]
        yield folded(f"Renumbered ({len(pairs)})", shortened(pairs))
