"""Markdown for a comment: short enough, worst first, folded, and every name shown letter by letter."""

from __future__ import annotations

import html
import re
from dataclasses import replace

import pytest

from checker.record import Report, Since
from checker.report.bundle import Bundle
from checker.report.markup import MOST, fitted, folded, marked
from tests.record.invented import report
from tests.report.hostile import NASTY, PATH, hostile


def shown(*reports: Report, without: tuple[tuple[str, str], ...] = ()) -> str:
    text = Bundle(reports=reports, without=without, several=len(reports) != 1).render(
        "markdown", width=80, colour=False
    )
    assert len(text) < MOST == 60_000
    assert text.count("<details>") == text.count("</details>") and text.endswith("\n")
    return text


def test_worst_first_and_folded() -> None:
    text = shown(report())
    assert text.startswith("## Stageproof: 1 to fix, 1 to review, 1 to note, 1 accepted, 2 not judged\n")
    assert text.index("<b>Must fix</b>") < text.index("<b>Review</b>") < text.index("<b>Note</b>")
    summaries = re.findall("<summary>(.*?)</summary>", text)
    assert summaries[0].endswith("The input of Q1 does not match the 50 Ω of port ANT.")
    assert "Accepted (1)" in summaries and "Assumed (1)" in summaries
    outside = re.sub("<details>.*?</details>", "", text, flags=re.DOTALL)
    assert "stages checked" in outside and "found" not in outside


def test_worst_first_over_all_boards() -> None:
    mild = replace(report(), findings=report().findings[2:])
    text = shown(mild, report())
    assert re.findall("<b>(Must fix|Review|Note)</b>", text) == ["Must fix", "Review", "Note", "Note"]


def test_thousands_of_findings_fit_and_the_worst_are_kept() -> None:
    worst, *_, mildest = report().findings
    many = [replace(mildest, fingerprint=str(i), message=f"{i} " + "x" * 300) for i in range(3000)]
    text = shown(replace(report(), findings=(*many, worst)), *[report()] * 200)
    assert text.count("<b>Must fix</b>") > 40 and "more blocks left out for length" in text
    assert text.index("<b>Must fix</b>") < 10_000


def test_one_huge_finding_still_fits() -> None:
    long = replace(report().findings[0], message="@" * 5000, effect="<" * 5000, why="|" * 5000)
    assert "Must fix" in shown(replace(report(), findings=(long,), cautions=("_" * 100_000,)))


def test_new_and_cured_are_told() -> None:
    since = Since(path="old", new=("f1a2b3c4",), cured=(report().findings[2],))
    text = shown(replace(report(), since=since))
    assert text.count("(new)") == 1 and "Cured since the earlier report (1)" in text


ACTIVE = re.compile(r"[\\`*_\[\]<>|~$@]|#\d|://|www\.")


@pytest.mark.parametrize(
    "text",
    [
        "<script>",
        "[a](b)",
        "@everyone",
        "#12",
        "http://x",
        "www.x",
        "a|b",
        "`c`",
        "**b**",
        "~~s~~",
        "$x$",
        "&lt;",
        "\n# x",
    ],
)
def test_nothing_in_a_name_is_markup(text: str) -> None:
    made = marked(text)
    bare = re.sub(r"&#\d+;", "\u200b", made)
    assert not ACTIVE.search(bare) and "&" not in bare and "\n" not in made
    assert html.unescape(made).replace("\u200b", "") == text.replace("\n", "<U+000A>")


def test_hostile_names_open_nothing() -> None:
    text = shown(hostile(), without=((PATH, NASTY),))
    known = re.sub(r"</?(details|summary|b)>", "", text)
    assert not re.search(r"<[a-zA-Z/!]", known) and "](" not in known and "://" not in known and "@" not in known
    assert "\x1b" not in text and "\u202e" not in text
    rows = [line for line in text.splitlines() if line.startswith("| ")]
    assert {line.count("|") for line in rows} == {3, 8}  # two cells, or the table of boards


def test_what_does_not_fit_is_counted() -> None:
    text = fitted(["# title"], [folded("t", ["x" * 1000])] * 100, "blocks")
    assert len(text) < MOST and re.search(r"\*\d+ more blocks left out", text)
