"""Lines, tables and headings of the text form. Every text that arrives here is clean already."""

from __future__ import annotations

from collections.abc import Iterable, Sequence

from checker.shape import frozen

CODES = {"must-fix": "1;31", "review": "1;33", "note": "1;36", "good": "1;32", "bold": "1", "dim": "2"}
"""Style to ANSI parameter; 8-colour codes, so that the terminal's own palette decides."""
NO_BREAK = "\u00a0"
"""Between a number and its unit while lines are broken; `clean` lets none through from a name."""
_OURS = frozenset("Ωµ°±—–−→·…√²")
"""Characters of the report's own words that are not ASCII; each takes one column."""
WRAPPED = 16
"""Columns that a wrapped last column gets at least."""


@frozen
class Page:
    """How wide a line may be [characters], and whether styles are painted."""

    width: int
    colour: bool

    def paint(self, text: str, style: str) -> str:
        """`text` in a style of `CODES`; the text itself where colour is off."""
        return f"\x1b[{CODES[style]}m{text}\x1b[0m" if self.colour and text else text

    def heading(self, title: str) -> list[str]:
        """A blank line and a title."""
        return ["", self.paint(title, "bold")]


def cells(text: str) -> int:
    """Terminal columns that `text` takes: wide characters two, combining marks none."""
    if text.isascii():
        return len(text)
    return sum(_cells_of(char) for char in text)


def _cells_of(char: str) -> int:
    if char in _OURS or char.isascii():
        return 1
    import unicodedata  # a millisecond; only names from elsewhere need it

    if unicodedata.combining(char):
        return 0
    return 2 if unicodedata.east_asian_width(char) in "WF" else 1


def pad(text: str, columns: int, *, right: bool = False) -> str:
    """`text` filled with spaces to a number of terminal columns."""
    fill = " " * (columns - cells(text))
    return fill + text if right else text + fill


def wrap(text: str, columns: int) -> list[str]:
    """`text` in lines of at most `columns`, broken at spaces, inside a word only if it fits no line."""
    lines: list[str] = []
    line = ""
    for word in text.split(" "):
        joined = f"{line} {word}" if line else word
        if cells(joined) <= columns:
            line = joined
            continue
        lines += [line] if line else []
        *full, line = _broken(word, columns)
        lines += full
    return [*lines, line] if line or not lines else lines


def _broken(word: str, columns: int) -> list[str]:
    pieces = [""]
    for char in word:
        if cells(pieces[-1] + char) > max(columns, 2):
            pieces.append("")
        pieces[-1] += char
    return pieces


def hanging(lead: str, text: str, page: Page, *, style: str = "") -> list[str]:
    """`lead` then `text`, its further lines indented to where it began; `style` paints the lead."""
    first, *rest = wrap(text, page.width - cells(lead))
    return [
        (page.paint(lead, style) if style else lead) + first,
        *(" " * cells(lead) + line for line in rest),
    ]


def table(header: Sequence[str], rows: Iterable[Sequence[str]], align: str, page: Page) -> list[str]:
    """Columns two spaces apart, indented by two; `align` has "l" or "r" for each.

    The last column, if flush left, wraps under itself. A table that is still too wide goes on below itself,
    its first column repeated.
    """
    body = [list(row) for row in rows]
    widths = [max(cells(row[i]) for row in [list(header), *body]) for i in range(len(header))]
    whole, last = widths[-1], len(widths) - 1
    if align[-1] == "l":
        widths[-1] = min(whole, WRAPPED)
    lines: list[str] = []
    for columns in _parts(widths, page.width):
        if align[-1] == "l" and columns[-1] == last:
            widths[-1] = min(whole, page.width - sum(widths[i] + 2 for i in columns[:-1]) - 2)
        head = _row(header, columns, widths, align)
        lines += [page.paint(line, "dim") for line in head]
        lines += [line for row in body for line in _row(row, columns, widths, align)]
    return lines


def _parts(widths: Sequence[int], width: int) -> list[list[int]]:
    """Which columns stand beside each other."""
    parts = [[0]]
    for i in range(1, len(widths)):
        if sum(widths[k] + 2 for k in [*parts[-1], i]) > width and len(parts[-1]) > 1:
            parts.append([0])
        parts[-1].append(i)
    return parts


def _row(row: Sequence[str], columns: Sequence[int], widths: Sequence[int], align: str) -> list[str]:
    *front, last = columns
    lead = "".join(f"  {pad(row[i], widths[i], right=align[i] == 'r')}" for i in front)
    first, *rest = wrap(row[last], widths[last])
    end = pad(first, widths[last], right=align[last] == "r")
    return [f"{lead}  {end}".rstrip(), *(" " * (cells(lead) + 2) + line for line in rest)]


def finished(lines: Iterable[str]) -> str:
    """The lines as text. No-break spaces have done their work once lines are broken; none come from names."""
    return "\n".join(lines).replace(NO_BREAK, " ") + "\n"
