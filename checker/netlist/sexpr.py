"""S-expressions in which every atom is text, parsed in one pass with the line of every list of the third level.

A reader made for programs turns `5E123456` into infinity, `t` into True and `nil` into a list, takes backslashes,
commas, apostrophes and semicolons inside bare atoms for syntax, and recurses as deep as the file wishes. Here only
`(`, `)`, ASCII blanks and `"` are syntax, and the stack is a list of bounded length.
"""

from __future__ import annotations

import re

from checker.netlist.limits import ReadLimits, over
from checker.pattern import lazy
from checker.shape import frozen
from checker.trouble import InputTrouble

Tree = list["Tree | str"]
"""A list whose first item is usually its tag."""

_TOKEN = lazy(r'(\()|(\))|"([^"\\]*+(?:\\.[^"\\]*+)*+)"|([^\s()"]++)|(")', re.DOTALL | re.ASCII)
_OPEN, _CLOSE, _QUOTED, _BARE = 1, 2, 3, 4
_MOST_LISTS = 5
"""Lists that an element may take on an average: a pin takes four or five, and what has more is no export."""
_LISTED = 2
"""Lists at this depth are the components and the nets: their lines are kept."""
_ESCAPE = lazy(r"\\(.)", re.DOTALL)
_ESCAPED = {"\\": "\\", '"': '"', "n": "\n", "r": "\r", "t": "\t"}


@frozen
class Parsed:
    """`root`: the outermost list. `lines`: by identity of a list of the third level, the line it begins at."""

    root: Tree
    lines: dict[int, int]

    def line(self, tree: Tree) -> int:
        """Line of a list of the third level, 0 for another."""
        return self.lines.get(id(tree), 0)


def parse(text: str, *, name: str, limits: ReadLimits) -> Parsed:
    """Parse one S-expression. Raises `InputTrouble` with the line for unbalanced or unended text and for more than the
    limits `depth` and `elements` allow."""
    most = _MOST_LISTS * limits.elements
    forest: Tree = []
    current, above = forest, []
    lines: dict[int, int] = {}
    line, counted = 1, 0
    for match in _TOKEN.finditer(text):
        kind = match.lastindex
        if kind == _OPEN:
            inner: Tree = []
            current.append(inner)
            above.append(current)
            current = inner
            if len(above) == _LISTED + 1:
                at = match.start()
                line, counted = line + text.count("\n", counted, at), at
                lines[id(inner)] = line
            if len(above) > limits.depth:
                over("depth", limits.depth, "brackets nested too deep", file=name, line=_line(text, match))
            most -= 1
            if most < 0:
                over("elements", limits.elements, "too many lists", file=name, line=_line(text, match))
        elif kind == _CLOSE:
            if not above:
                raise _trouble("a closing bracket without an opening one", name, text, match)
            current = above.pop()
        elif kind == _BARE:
            current.append(match[_BARE])
        elif kind == _QUOTED:
            quoted = match[_QUOTED]
            current.append(_ESCAPE.sub(_unescaped, quoted) if "\\" in quoted else quoted)
        else:
            raise _trouble("a quoted text does not end; the file is cut off or damaged", name, text, match)
    if above:
        message = f"{len(above)} brackets stay open at the end; the file is cut off"
        raise InputTrouble(message, file=name, line=text.count("\n") + 1)
    root = next((tree for tree in forest if isinstance(tree, list)), None)
    if root is None:
        raise InputTrouble("holds no S-expression", file=name)
    return Parsed(root=root, lines=lines)


def _unescaped(found: re.Match[str]) -> str:
    """A letter behind a backslash; a backslash that escapes nothing (a path of another system) stays."""
    return _ESCAPED.get(found[1], found[0])


def _line(text: str, match: re.Match[str]) -> int:
    return text.count("\n", 0, match.start()) + 1


def _trouble(message: str, name: str, text: str, match: re.Match[str]) -> InputTrouble:
    return InputTrouble(message, file=name, line=_line(text, match))


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
    atoms = [item for item in tree[1:] if not isinstance(item, list)]
    return " ".join(atoms) if len(atoms) > 1 else atoms[0] if atoms else ""
