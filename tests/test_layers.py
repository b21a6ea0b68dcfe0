"""The plan of the house holds: imports go downward only, and public names of `checker` say what they are."""

from __future__ import annotations

import ast
import sys
import tomllib
from collections.abc import Iterator
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[1]

LAYERS: tuple[tuple[str, ...], ...] = (
    ("words", "constants", "trouble", "shape", "pattern", "arrays", "digest"),
    ("record",),
    ("quantity",),
    ("netlist", "cards", "intent"),
    ("circuit",),
    ("devices",),
    ("solve",),
    ("stages",),
    ("measure",),
    ("board",),
    ("spread",),
    ("setup",),
    ("rulekit",),
    ("judge",),
    ("summary",),
    ("examine",),
    ("remedy", "compare"),
    ("summary",),
    ("pipeline",),
    ("report",),
    ("cli",),
)
"""Lowest first. A room may import from rooms on earlier lines and from itself, never from its own line."""

LEVEL = {room: level for level, rooms in enumerate(LAYERS) for room in rooms}
REPORT_MAY_USE = {"record", "shape", "words", "quantity", "trouble", "report"}
RUN_TIME_PACKAGES = {"numpy", "click", "scipy", "_sha2"}
"""scipy only inside a function, for the sparse solution of large islands; `_sha2` is the standard library's from Python
3.12 on."""


def room_of(module: str) -> str:
    """`checker.solve.newton` -> `solve`; `checker` itself -> ``."""
    words = module.split(".")
    return words[1] if len(words) > 1 else ""


def module_name(path: Path) -> str:
    """Dotted name of a source file below the repository."""
    return ".".join(path.relative_to(ROOT).with_suffix("").parts).removesuffix(".__init__")


def imports(source: str, module: str, *, is_package: bool = False) -> Iterator[tuple[int, str]]:
    """(line, absolute module) of every import anywhere in a file, `TYPE_CHECKING` blocks included.

    `from checker import solve` counts as `checker.solve`; relative imports are resolved against `module`.
    """
    package = module.split(".") if is_package else module.split(".")[:-1]
    for node in ast.walk(ast.parse(source)):
        if isinstance(node, ast.Import):
            yield from ((node.lineno, alias.name) for alias in node.names)
        elif isinstance(node, ast.ImportFrom):
            base = package[: len(package) - node.level + 1] if node.level else []
            full = ".".join([*base, *([node.module] if node.module else [])])
            whole = full in ("checker", "rules")
            names = [f"{full}.{alias.name}" for alias in node.names] if whole else [full]
            yield from ((node.lineno, name) for name in names)


def forbidden(module: str, imported: str) -> str:
    """Why `module` may not import `imported`; empty where it may."""
    top, target = module.split(".")[0], imported.split(".")[0]
    if top == "rules":
        allowed = target != "checker" or room_of(imported) == "rulekit"
        return "" if allowed else "rules see checker.rulekit alone"
    if target == "rules":
        return "checker never imports rules"
    if target != "checker":
        return ""
    here, there = room_of(module), room_of(imported)
    if here == there or there in ("", "__version__"):
        return ""  # the bare package imports no room, see the next line
    if not here:
        return "checker/__init__.py imports no room"
    if here == "report" and there not in REPORT_MAY_USE:
        return "a report computes nothing"
    if LEVEL[there] < LEVEL[here]:
        return ""
    return f"{here} stands below or beside {there}"


def sources(*folders: str) -> list[Path]:
    """All Python files below the folders, sorted."""
    return sorted(path for folder in folders for path in (ROOT / folder).rglob("*.py"))


def test_every_room_has_its_line() -> None:
    rooms = {path.stem for path in (ROOT / "checker").glob("*.py")} - {"__init__"}
    rooms |= {path.parent.name for path in (ROOT / "checker").glob("*/__init__.py")}
    assert rooms <= set(LEVEL), f"not in the plan: {sorted(rooms - set(LEVEL))}"


def test_imports_go_downward_only() -> None:
    wrong = []
    for path in sources("checker", "rules"):
        module = module_name(path)
        found = imports(path.read_text("utf-8"), module, is_package=path.name == "__init__.py")
        for line, imported in found:
            reason = forbidden(module, imported)
            if reason:
                wrong.append(f"{path.relative_to(ROOT)}:{line}: {imported}: {reason}")
    assert not wrong, "\n".join(wrong)


def test_only_the_stated_packages_are_imported() -> None:
    known = set(sys.stdlib_module_names) | RUN_TIME_PACKAGES | {"checker", "rules"}
    wrong = [
        f"{path.relative_to(ROOT)}:{line}: {imported}"
        for path in sources("checker", "rules")
        for line, imported in imports(path.read_text("utf-8"), module_name(path), is_package=path.name == "__init__.py")
        if imported.split(".")[0] not in known
    ]
    assert not wrong, "\n".join(wrong)


def test_scipy_is_imported_inside_functions_only() -> None:
    wrong = []
    for path in sources("checker", "rules"):
        for node in ast.parse(path.read_text("utf-8")).body:
            names = [alias.name for alias in node.names] if isinstance(node, ast.Import) else []
            names += [node.module or ""] if isinstance(node, ast.ImportFrom) else []
            wrong += [f"{path.relative_to(ROOT)}:{node.lineno}" for name in names if name.startswith("scipy")]
    assert not wrong, wrong


@pytest.mark.parametrize(
    ("module", "imported", "allowed"),
    [
        ("checker.circuit.build", "checker.netlist.types", True),
        ("checker.netlist.types", "checker.words", True),
        ("checker.solve.newton", "checker.solve.types", True),
        ("checker.netlist.spice", "checker.cards.types", False),
        ("checker.intent.reader", "checker.netlist.types", False),
        ("checker.solve.newton", "checker.measure.gain", False),
        ("checker.remedy.search", "checker.compare.match", False),
        ("checker.report.text", "checker.record.types", True),
        ("checker.report.text", "checker.measure.gain", False),
        ("checker.judge.discover", "rules", False),
        ("checker", "checker.solve", False),
        ("checker.cli.main", "checker.__version__", True),
        ("checker.cli.main", "checker", True),
        ("rules.match", "checker.rulekit", True),
        ("rules.match", "checker.measure.gain", False),
        ("rules.match", "checker.rulekit_extra", False),
    ],
)
def test_the_judgement_itself(module: str, imported: str, allowed: bool) -> None:
    assert (forbidden(module, imported) == "") is allowed


def test_hidden_imports_are_seen() -> None:
    source = (
        "from typing import TYPE_CHECKING\n"
        "if TYPE_CHECKING:\n    from ..measure import gain\n"
        "def late():\n    from checker import board\n"
    )
    assert list(imports(source, "checker.solve.newton")) == [
        (1, "typing"),
        (3, "checker.measure"),
        (5, "checker.board"),
    ]


def test_public_functions_and_classes_of_checker_have_docstrings() -> None:
    bare = []
    for path in sources("checker"):
        for node in ast.parse(path.read_text("utf-8")).body:
            if not isinstance(node, ast.FunctionDef | ast.AsyncFunctionDef | ast.ClassDef):
                continue
            if not node.name.startswith("_") and ast.get_docstring(node) is None:
                bare.append(f"{path.relative_to(ROOT)}:{node.lineno}: {node.name}")
    assert not bare, "no docstring:\n" + "\n".join(bare)


def test_the_wheel_holds_the_two_packages() -> None:
    project = tomllib.loads((ROOT / "pyproject.toml").read_text("utf-8"))
    assert project["tool"]["hatch"]["build"]["targets"]["wheel"]["packages"] == ["checker", "rules"]
    assert all((ROOT / name / "py.typed").is_file() for name in ("checker", "rules"))
    assert not list(ROOT.glob("checker/__main__.py")), "run from a hostile folder it would execute its files"
