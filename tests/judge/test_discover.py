"""Finding rules: the built-in set, plug-ins, and what is refused."""

from __future__ import annotations

import importlib.util
import sys
from pathlib import Path

import pytest

from checker.judge import discover
from checker.judge.discover import load_rules
from checker.judge.plugins import GROUP, plugins
from checker.trouble import InputTrouble

PLUGIN = '''
from checker.rulekit import Applies, Rule

CATALOGUE = ("{module}:Own",)


class Own(Rule):
    """What fails in hardware, what it cannot see."""

    id = "{ident}"
    summary = theme = bench = source = "a sample"
    weight = "note"
    applies = Applies(kind="stage")

    def judge(self, board, subject, limits):
        return ()
'''


def install(folder: Path, module: str, ident: str, text: str = PLUGIN) -> None:
    """A package as an installer leaves it: a module and its entry points."""
    (folder / f"{module}.py").write_text(text.format(module=module, ident=ident), "utf-8")
    info = folder / f"{module}-1.0.dist-info"
    info.mkdir()
    lines = ["[console_scripts]", "x = y:z", "", f"[{GROUP}]", "# ours", f"own = {module}:CATALOGUE", ""]
    (info / "entry_points.txt").write_text("\n".join(lines), "utf-8")


@pytest.fixture
def site(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    """A folder that packages are installed in."""
    monkeypatch.syspath_prepend(str(tmp_path))
    return tmp_path


def test_the_built_in_rules_come_sorted() -> None:
    ids = [rule.id for rule in load_rules().rules]
    assert ids == sorted(ids)
    assert "coupling-loss" in ids


def test_a_plug_in_takes_part(site: Path) -> None:
    install(site, "plug_one", "house-rule")
    book = load_rules()
    assert "house-rule" in [rule.id for rule in book.rules]
    assert book.cautions == ()


@pytest.mark.parametrize(
    ("text", "said"),
    [
        ("raise RuntimeError('no licence')", "RuntimeError: no licence"),
        ("CATALOGUE = 'one'", "not a tuple"),
        ("CATALOGUE = ('{module}:Own',)\nclass Own: ...", "not a rule"),
        (PLUGIN.replace('weight = "note"', 'weight = "fatal"'), "fatal"),
        (PLUGIN.replace('"""What fails in hardware, what it cannot see."""', ""), "a docstring"),
        (PLUGIN.replace("summary = theme", "theme"), "lacks summary"),
    ],
)
def test_a_broken_plug_in_is_named_and_left_out(site: Path, text: str, said: str) -> None:
    install(site, "plug_bad", "house-rule", text)
    book = load_rules()
    sys.modules.pop("plug_bad", None)
    assert "house-rule" not in [rule.id for rule in book.rules]
    (caution,) = book.cautions
    assert "plug-bad" in caution
    assert said in caution


def test_an_id_taken_twice_stops_the_run(site: Path) -> None:
    install(site, "plug_two", "coupling-loss")
    with pytest.raises(InputTrouble, match=r"two rules have the id 'coupling-loss', of plug_two and rules\.coupling"):
        load_rules()


def test_a_package_called_rules_elsewhere_is_not_imported(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    (tmp_path / "rules").mkdir()
    (tmp_path / "rules" / "__init__.py").write_text("raise SystemExit('imported')", "utf-8")
    spec = importlib.util.spec_from_file_location("rules", tmp_path / "rules" / "__init__.py")
    monkeypatch.setattr(importlib.util, "find_spec", lambda _: spec)
    with pytest.raises(InputTrouble, match="not the one installed with Stageproof"):
        load_rules()


def test_no_package_called_rules_at_all(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(importlib.util, "find_spec", lambda _: None)
    with pytest.raises(InputTrouble, match="environment of its own"):
        load_rules()


def test_no_rule_at_all(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(discover, "_catalogue", lambda _: [])
    with pytest.raises(InputTrouble, match="no rules found"):
        load_rules()


def test_what_merely_lies_in_the_working_folder_is_not_installed(site: Path) -> None:
    install(site, "plug_three", "house-rule")
    assert plugins([""]) == ()
    assert plugins([str(site), str(site / "none")]) == (("plug-three", "plug_three:CATALOGUE"),)


def test_of_two_installations_the_first_counts(tmp_path: Path) -> None:
    one, two = tmp_path / "one", tmp_path / "two"
    for folder in (one, two):
        folder.mkdir()
        install(folder, "plug_four", "house-rule")
    (two / "plug_four-1.0.dist-info" / "entry_points.txt").write_text(f"[{GROUP}]\nown = other:SET\n", "utf-8")
    assert plugins([str(one), str(two)]) == (("plug-four", "plug_four:CATALOGUE"),)
