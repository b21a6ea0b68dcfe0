"""Sample boards read as reports, and ways to write one differently that change nothing electrical."""

from __future__ import annotations

import random
import re
import shutil
from functools import cache
from pathlib import Path

from checker.pipeline import check_board
from checker.record import Report

SAMPLES = Path(__file__).resolve().parents[2] / "sample_schematics"
PLANTED = Path(__file__).resolve().parents[1] / "boards" / "planted"

_ELEMENT = re.compile(r"^(XJ|XK|[RCLQDVIJ])(\d+)\b", re.MULTILINE)


@cache
def sample(name: str) -> Report:
    """The report on a sample board in SPICE-style text."""
    return check_board(SAMPLES / name / f"{name}.cir", None).report


def text_of(name: str) -> str:
    """The netlist of a sample board."""
    return (SAMPLES / name / f"{name}.cir").read_text("utf-8")


def lay(folder: Path, text: str, intent: str | Path, name: str = "board") -> Path:
    """Write a board with its intent file; the netlist's path."""
    folder.mkdir(parents=True, exist_ok=True)
    path = folder / f"{name}.cir"
    path.write_text(text, "utf-8")
    target = folder / f"{name}.intent.toml"
    if isinstance(intent, Path):
        shutil.copy(intent, target)
    else:
        target.write_text(intent, "utf-8")
    return path


def report_of(path: Path) -> Report:
    """The report on a netlist."""
    return check_board(path, None).report


def renumbered(text: str, intent: str, seed: int) -> tuple[str, str, dict[str, str]]:
    """All references of each kind shuffled, in the netlist and the intent file; old reference to new one."""
    dice = random.Random(seed)  # noqa: S311 - a fixed order for a test, no secret
    names: dict[str, list[str]] = {}
    for letter, number in _ELEMENT.findall(text):
        names.setdefault(letter, []).append(number)
    new: dict[str, str] = {}
    for letter, numbers in names.items():
        shuffled = [str(int(number) + 20 * (seed % 2)) for number in numbers]
        dice.shuffle(shuffled)
        new |= {letter + a: letter + b for a, b in zip(numbers, shuffled, strict=True)}
    other = _ELEMENT.sub(lambda found: new[found[0]], text)
    refs = {before.removeprefix("X"): after.removeprefix("X") for before, after in new.items()}
    said = re.sub(r'"([A-Z]+\d+)((?:\.\w+)?)"', lambda found: f'"{refs.get(found[1], found[1])}{found[2]}"', intent)
    return other, said, refs


def shuffled_lines(text: str, seed: int) -> str:
    """The same netlist with its elements in another order, more space and no comments."""
    dice = random.Random(seed)  # noqa: S311 - a fixed order for a test, no secret
    title, *lines = [line for line in text.splitlines() if line.strip()]
    body = [line.replace(" ", "   ") for line in lines if not line.startswith(("*", ".end"))]
    dice.shuffle(body)
    return "\n".join([title, *body, ".end"]) + "\n"
