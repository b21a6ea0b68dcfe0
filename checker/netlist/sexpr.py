"""S-expressions in which every atom is text.

The library turns `5E123456` into infinity, `t` into True and `nil` into a list, takes brackets, backslashes,
commas and semicolons inside bare atoms for syntax, and recurses as deep as the file wishes. Here atoms stay
as they are, only `(`, `)`, blanks and `"` are syntax, and a scan checks nesting before anything is built.
"""

from __future__ import annotations

import re
from bisect import bisect_right

import sexpdata

from checker.netlist.limits import over
from checker.pattern import lazy
from checker.shape import frozen
from checker.trouble import InputTrouble

Tree = list["Tree | str"]
"""A list whose first item is usually its tag."""

_TOKEN = lazy(r'"[^"\\]*+(?:\\.[^"\\]*+)*+"|\(\s*(?:comp|net)(?=[\s()])|[()"]', re.DOTALL | re.ASCII)
_APOSTROPHE = "\0"
# The library takes only ASCII blanks for blanks: where an atom ends must be where it goes on.
_ATOM_END = lazy(r'[\s()"]', re.ASCII)


@frozen
class Parsed:
    """`root`: the outermost list. `lines`: by tag (`comp`, `net`), the line of each such list of the third
    level, in the order of the file."""

    root: Tree
    lines: dict[str, list[int]]


class _TextParser(sexpdata.Parser):  # type: ignore[misc]
    """The library's parser with bare atoms read as plain text up to the next blank, bracket or quote."""

    def __init__(self, text: str) -> None:
        # No line comments, and an apostrophe is a letter like any other: the library knows no switch for it, so
        # another character, which no netlist may hold, takes its place until `_atom` puts it back.
        super().__init__(text.replace("'", _APOSTROPHE), line_comment="")
        self.brackets = {"(": ")"}
        self.closing_brackets = {")"}

    def parse_str(self, i: int) -> tuple[int, str]:
        """As the library does, but the text in one step: most quoted texts hold no escape."""
        end = self.string.index('"', i + 1)
        text = self.string[i + 1 : end]
        return (end + 1, text) if "\\" not in text else super().parse_str(i)

    def parse_atom(self, i: int) -> tuple[int, str]:
        found = _ATOM_END.search(self.string, i)
        end = found.start() if found else len(self.string)
        return end, self.string[i:end]


def parse(text: str, *, name: str, depth: int) -> Parsed:
    """Parse one S-expression. Raises `InputTrouble` with the line for unbalanced, unended or too deep
    text."""
    lines = _scan(text, name, depth)
    try:
        forest = _TextParser(text).parse()
    except (sexpdata.ExpectNothing, sexpdata.ExpectClosingBracket, IndexError) as error:
        raise InputTrouble("is not a well-formed S-expression", file=name) from error
    root = next((tree for tree in forest if isinstance(tree, list)), None)
    if root is None:
        raise InputTrouble("holds no S-expression", file=name)
    return Parsed(root=root, lines=lines)


def _scan(text: str, name: str, limit: int) -> dict[str, list[int]]:
    starts = [match.start() for match in re.finditer("\n", text)]
    lines: dict[str, list[int]] = {"comp": [], "net": []}
    level = 0
    for match in _TOKEN.finditer(text):
        mark = match.group()
        if mark == ")":
            level -= 1
            if level < 0:
                line = bisect_right(starts, match.start()) + 1
                raise InputTrouble("a closing bracket without an opening one", file=name, line=line)
        elif mark[0] == "(":
            if level == 2 and len(mark) > 1:
                lines[mark[1:].lstrip()].append(bisect_right(starts, match.start()) + 1)
            level += 1
            if level > limit:
                line = bisect_right(starts, match.start()) + 1
                over("depth", limit, "brackets nested too deep", file=name, line=line)
        elif mark == '"':
            line = bisect_right(starts, match.start()) + 1
            raise InputTrouble("a quoted text does not end; the file is cut off or damaged", file=name, line=line)
    if level:
        raise InputTrouble(
            f"{level} brackets stay open at the end; the file is cut off", file=name, line=len(starts) + 1
        )
    return lines


def children(tree: Tree, tag: str) -> list[Tree]:
    """The lists directly under `tree` that begin with `tag`."""
    return [item for item in tree if isinstance(item, list) and item and item[0] == tag]


def child(tree: Tree, tag: str) -> Tree:
    """The first list under `tree` that begins with `tag`; an empty list where there is none."""
    return next((item for item in tree if isinstance(item, list) and item and item[0] == tag), [])


def text_of(tree: Tree, tag: str) -> str:
    """The text in `(tag text)` under `tree`; empty where there is none."""
    return own_text(child(tree, tag))


def own_text(tree: Tree) -> str:
    """The first atom after the tag; several bare atoms (a value that should have been quoted) are joined."""
    atoms = [_atom(item) for item in tree[1:] if not isinstance(item, list)]
    return " ".join(atoms) if len(atoms) > 1 else atoms[0] if atoms else ""


def _atom(item: str) -> str:
    return item.replace(_APOSTROPHE, "'") if _APOSTROPHE in item else item
