"""What carries no meaning changes nothing: comments and blank lines, case in SPICE text, names of inner nets."""

from __future__ import annotations

import random
import re
from pathlib import Path

import pytest

from tests.boards.writer import SAMPLES, kicad_export
from tests.pipeline.formats import as_data, checked, differences
from tests.pipeline.test_same_bytes import rounded
from tests.whole import written

BOARDS = ["audio_follower", "coax_cascade", "receiver_input", "relay_driver"]
SOURCE = {"netlist.path", "netlist.sha256", "conditions.intent"}
PLACES = (".location.line", ".location.file")


def texts(board: str) -> tuple[str, str]:
    """Netlist and intent of a sample board."""
    folder = SAMPLES / board
    return (folder / f"{board}.cir").read_text("utf-8"), (folder / f"{board}.intent.toml").read_text("utf-8")


def apart(board: str, netlist: str, folder: Path, name: str = "") -> set[str]:
    """Paths at which the report of a rewritten board differs from that of the sample."""
    path = written(folder, netlist, texts(board)[1], name or f"{board}.cir")
    sample = SAMPLES / board / f"{board}{path.suffix}"
    found = differences(rounded(as_data(checked(sample))), rounded(as_data(checked(path))))
    limits = "findings.limit.source"  # names the intent file
    return {place for place in found if place not in SOURCE and not place.endswith(PLACES) and place != limits}


@pytest.mark.parametrize("board", BOARDS)
def test_comments_and_blank_lines(board: str, tmp_path: Path) -> None:
    first, *lines = texts(board)[0].splitlines()
    more = [text for line in lines for text in ("", "* a remark", f"{line}   ; behind it" if line[:1] != "*" else line)]
    assert apart(board, "\n".join([first, *more]), tmp_path) == set()


@pytest.mark.parametrize("board", BOARDS)
def test_continued_lines_and_tabs(board: str, tmp_path: Path) -> None:
    first, *lines = texts(board)[0].splitlines()
    broken = [re.sub(r" (?=\S+$)", "\n+\t", line) if line[:1] not in "*." else line for line in lines if line]
    assert apart(board, "\r\n".join("\n".join([first, *broken, ""]).split("\n")), tmp_path) == set()


@pytest.mark.parametrize("board", BOARDS)
def test_case_of_words_and_suffixes(board: str, tmp_path: Path) -> None:
    """Values, models and dot cards in the other case; references and nets keep their spelling, which is shown."""
    netlist, _ = texts(board)
    swapped = re.sub(r"(?m)(?<=[\d.])(meg|[pnumk])(?=\s|$)", lambda found: found[0].upper(), netlist)
    swapped = re.sub(r"(?m)^\.\w+", lambda found: found[0].upper(), swapped)
    assert swapped != netlist
    said = "assumptions"  # quotes model names as written
    assert apart(board, swapped, tmp_path) - {said} <= {"parts.value"}


@pytest.mark.parametrize("form", ["cir", "net"])
@pytest.mark.parametrize(("board", "nets"), [("receiver_input", ("E1", "COL1", "B1", "VF")), ("coax_cascade", None)])
def test_names_of_inner_nets(board: str, nets: tuple[str, ...] | None, form: str, tmp_path: Path) -> None:
    """Rails and ports are declared; every other net gets a name that says nothing, and another order."""
    netlist, intent = texts(board)
    declared = set(re.findall(r'"([^"]+)"', intent)) | {"0", "GND"}
    inner = nets or tuple(sorted(set(inner_nets(netlist)) - declared))
    names = {net: f"N{len(inner) - place:03}" for place, net in enumerate(inner)}
    renamed = "\n".join(with_names(line, names) for line in netlist.splitlines()) + "\n"
    if form == "cir":
        one, other = netlist, renamed
    else:
        one, other = kicad_export(board, netlist), kicad_export(board, renamed)
    reports = []
    for place, text in (("one", one), ("other", other)):
        (tmp_path / place).mkdir()
        data = rounded(as_data(checked(written(tmp_path / place, text, intent, f"{board}.{form}"))))
        assert isinstance(data, dict)
        reports.append(data)
    back = {name: net for net, name in names.items()}
    found = differences(reports[0], named_back(reports[1], back))
    # Islands and nets stand in the order of their names, and so do lists of nets inside them.
    ordered = ("islands", "assumptions")
    assert {p for p in found if p not in SOURCE and not p.startswith(ordered) and not p.endswith(PLACES)} == set()


def inner_nets(netlist: str) -> list[str]:
    """Every node word of resistors, capacitors, inductors and transistors."""
    lines = [line.split() for line in netlist.splitlines()[1:]]
    two = [word for words in lines if words and words[0][0] in "RCLD" for word in words[1:3]]
    return two + [word for words in lines if words and words[0][0] == "Q" for word in words[1:4]]


def with_names(line: str, names: dict[str, str]) -> str:
    """An element line with its nodes renamed."""
    if line[:1] in ("*", ".", ""):
        return line
    ref, *words = line.split()
    return " ".join([ref, *(names.get(word, word) for word in words[:-1]), words[-1]])


def named_back(value: object, back: dict[str, str]) -> object:
    """The report with the old names of nets."""
    if isinstance(value, dict):
        return {back.get(key, key): named_back(item, back) for key, item in value.items()}
    if isinstance(value, list):
        return [named_back(item, back) for item in value]
    if isinstance(value, str):
        return re.sub(r"\bN\d{3}\b", lambda found: back.get(found[0], found[0]), value)
    return value


@pytest.mark.parametrize("form", ["cir", "net"])
@pytest.mark.parametrize("seed", range(6))
def test_random_boards_in_another_order_under_other_names(form: str, seed: int, tmp_path: Path) -> None:
    """A sample board with resistors drawn anew, against itself with lines, inner nets and comments at random."""
    chance = random.Random(f"equal input {seed}")  # noqa: S311 - no secret
    board = chance.choice(BOARDS)
    netlist, intent = texts(board)
    first, lines = netlist.splitlines()[0], [line for line in netlist.splitlines()[1:] if line[:1] not in ("*", "")]
    drawn = [re.sub(r"^(R\w+ \S+ \S+) \S+", lambda found: f"{found[1]} {chance.choice(E12)}", line) for line in lines]
    declared = set(re.findall(r'"([^"]+)"', intent)) | {"0", "GND"}
    inner = sorted(set(inner_nets("\n".join([first, *drawn]))) - declared)
    names = {net: f"N{number:03}" for number, net in enumerate(chance.sample(inner, len(inner)))}
    other = [with_names(line, names) for line in drawn if line[0] != "."]
    chance.shuffle(other)
    if form == "cir":
        other = [line + chance.choice(["", " ; note", "\n* note\n"]) for line in other]
    one = "\n".join([first, *drawn]) + "\n"
    two = "\n".join([first, *other, *(line for line in drawn if line[0] == ".")]) + "\n"
    reports = []
    for place, text in (("one", one), ("two", two)):
        (tmp_path / place).mkdir()
        written_text = text if form == "cir" else kicad_export(board, text)
        data = rounded(as_data(checked(written(tmp_path / place, written_text, intent, f"{board}.{form}"))))
        assert isinstance(data, dict) and data["stages"]
        reports.append(data)
    other_report = named_back(reports[1], {name: net for net, name in names.items()})
    found = differences(reports[0], other_report)
    apart = {place for place in found if place not in SOURCE and not place.endswith(PLACES)}
    # By names of nets, or naming the intent file.
    ordered = ("islands", "unavailable.islands", "assumptions", "findings.limit.source")
    assert {place for place in apart if not place.startswith(ordered)} == set()
    assert islands_of(reports[0]) == islands_of(other_report)


E12 = ("100", "330", "1k", "2.2k", "4.7k", "10k", "27k", "47k", "100k", "220k")


def islands_of(report: object) -> set[frozenset[str]]:
    """The nets of each island, in no order."""
    assert isinstance(report, dict)
    return {frozenset(island["nets"]) for island in report["islands"]}


ROLES = {"1": "2", "2": "3", "3": "1"}
"""Pads of a transistor in another case or of another symbol."""


@pytest.mark.parametrize("named", ["pinfunction", "library"])
@pytest.mark.parametrize("board", BOARDS)
def test_the_same_circuit_with_another_order_of_pins(board: str, named: str, tmp_path: Path) -> None:
    """Transistors whose symbol numbers its pins otherwise, named on the nodes or in the library parts alone, and inner
    nets that bear the pad in their name: the stages are the same to the last figure."""
    netlist, intent = texts(board)
    one = re.sub(r'\(footprint "[^"]*TO[-_]?(?:92|SOT)[^"]*"\)', "", kicad_export(board, netlist))
    other = re.sub(r'(\(node \(ref "Q\d+"\) \(pin ")([123])"', lambda found: f'{found[1]}{ROLES[found[2]]}"', one)
    other = re.sub(
        r'(\(pin \(num ")([123])("\) \(name "[BCE]")', lambda found: f"{found[1]}{ROLES[found[2]]}{found[3]}", other
    )
    assert other != one
    if named == "library":
        one, other = (re.sub(r' \(pinfunction "[BCE]"\)', "", text) for text in (one, other))
    reports = []
    for place, text in (("one", one), ("other", other)):
        (tmp_path / place).mkdir()
        data = rounded(as_data(checked(written(tmp_path / place, text, intent, f"{board}.net"))))
        assert isinstance(data, dict) and len(data["stages"]) >= 1
        reports.append(data)
    apart = {place for place in differences(*reports) if place not in SOURCE and not place.endswith(PLACES)}
    assert {place for place in apart if not place.startswith(("assumptions", "findings.limit.source"))} == set()


@pytest.mark.parametrize("board", BOARDS)
def test_an_export_with_a_line_for_every_word(board: str, tmp_path: Path) -> None:
    netlist, _ = texts(board)
    export = kicad_export(board, netlist)
    words = re.findall(r'"(?:[^"\\]|\\.)*"|\(|\)|[^\s()"]+', export)
    assert apart(board, " \n".join(words), tmp_path, f"{board}.net") == set()
