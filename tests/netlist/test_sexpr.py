"""S-expressions: written and read back, and read a second way by a library."""

from __future__ import annotations

import pytest
import sexpdata  # type: ignore[import-untyped]
from hypothesis import given
from hypothesis import strategies as st

from checker.netlist.limits import ReadLimits
from checker.netlist.sexpr import Tree, parse
from checker.trouble import InputTrouble

BARE = st.text("abct0159.+-_/'\\;,#:[]{}|µ\x85", min_size=1, max_size=8)
QUOTED = st.text(st.characters(exclude_categories=["Cs"]), max_size=8)
Item = tuple[str, bool] | list["Item"]
"""An atom and whether it is quoted, or a list."""
TREES: st.SearchStrategy[Item] = st.recursive(
    st.tuples(BARE, st.just(False)) | st.tuples(QUOTED, st.just(True)), lambda inner: st.lists(inner, max_size=5)
)


def written(item: Item, gap: str) -> str:
    if isinstance(item, list):
        return "(" + gap.join(written(each, gap) for each in item) + ")"
    text, quoted = item
    escaped = text.replace("\\", "\\\\").replace('"', '\\"')
    return f'"{escaped}"' if quoted else text


def plain(item: Item) -> Tree | str:
    return [plain(each) for each in item] if isinstance(item, list) else item[0]


@given(items=st.lists(TREES, max_size=6), gap=st.sampled_from([" ", "\n", "\t\r\n "]))
def test_what_is_written_is_read(items: list[Item], gap: str) -> None:
    assert parse(written(items, gap), name="x", limits=ReadLimits()).root == plain(items)


@given(items=st.lists(st.recursive(st.text("abcxyz", min_size=2, max_size=5), st.lists, max_leaves=20), max_size=6))
def test_a_library_reads_the_same_trees(items: list[Tree | str]) -> None:
    def symbols(tree: object) -> object:
        return [symbols(each) for each in tree] if isinstance(tree, list) else sexpdata.Symbol(tree)

    text = sexpdata.dumps(symbols(items))

    def atoms(tree: object) -> object:
        return [atoms(each) for each in tree] if isinstance(tree, list) else tree.value()  # type: ignore[attr-defined]

    # The library turns () and nil alike into an empty list.
    assert parse(text, name="x", limits=ReadLimits()).root == atoms(sexpdata.loads(text))


@pytest.mark.parametrize(
    ("quoted", "text"),
    [
        (r'"a\"b"', 'a"b'),
        (r'"a\\b"', r"a\b"),
        (r'"a\nb\tc\rd"', "a\nb\tc\rd"),
        (r'"C:\boards\x"', r"C:\boards\x"),
        (r'"\\n"', r"\n"),
        ('"two\nlines"', "two\nlines"),
        ('""', ""),
    ],
)
def test_escapes(quoted: str, text: str) -> None:
    assert parse(f"({quoted})", name="x", limits=ReadLimits(depth=2)).root == [text]


def test_a_quote_ends_a_bare_atom() -> None:
    assert parse('(a"b c"d)', name="x", limits=ReadLimits(depth=2)).root == ["a", "b c", "d"]


def test_lines_of_lists_of_the_third_level() -> None:
    parsed = parse("(a\n\n(b (c\n(d))\n(c))\n (e (f)))", name="x", limits=ReadLimits())
    b, e = parsed.root[1], parsed.root[2]
    assert [parsed.line(tree) for tree in (b[1], b[2], e[1])] == [3, 5, 6]  # type: ignore[arg-type]
    assert parsed.line(b) == 0  # type: ignore[arg-type]


@pytest.mark.parametrize(
    ("text", "line"), [("(a\n(b)", 2), ("(a)\n)", 2), ('(a\n"b)\n', 2), ("a b", 0), ("(a\n((((", 2)]
)
def test_what_is_damaged_is_named_with_its_line(text: str, line: int) -> None:
    with pytest.raises(InputTrouble) as caught:
        parse(text, name="x", limits=ReadLimits(depth=4))
    assert (caught.value.file, caught.value.line) == ("x", line)
