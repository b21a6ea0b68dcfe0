"""What carries no meaning in a netlist changes nothing that is read but the lines where things stand."""

from __future__ import annotations

import random
import re
from dataclasses import replace
from pathlib import Path
from typing import Any

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from checker.netlist.read import read_netlist
from checker.netlist.types import Netlist, Part

ANY = settings(max_examples=60, deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture])
NETS = ("in", "out", "n1", "n2", "/sub/x", "+12V", "-5V", "0")
VALUES = {
    "R": ("1k", "4.7Meg", "68kOhm", "{ra*2}", "10k tol=5", "10k 1%"),
    "C": ("4.7u", "100nF", "10uF 16v", "{2*3}n"),
    "L": ("10u", "1mH Rser=0.2"),
    "D": ("dd", "dd 2"),
    "Q": ("qq", "qq area=2 m=3", "BC547"),
    "J": ("jj",),
    "V": ("DC 5", "5 AC 1 90 SIN(0 1 1k)", "PULSE(0 5 0 1n 1n 1u 2u)", "{ra}"),
    "I": ("1m", "DC 2mA"),
    "E": ("in 0 2",),
    "X": ("amp", "amp rl=3k m=2", "NOWHERE"),
    "B": ("V=2*V(in)", "I={V(in,out)*1m}"),
}
VALUES["C"] = VALUES["C"][:3]
PINS = {"Q": 3, "J": 3}
TAIL = """.param ra=3k
.model qq npn(bf=200 is=1f)
.model dd d is=1n
.model jj njf(vto=-2)
.subckt amp a b rl=1k
R1 a x {rl}
Q1 x a b qq
.ends
.temp 30
"""


@st.composite
def decks(draw: st.DrawFn) -> list[str]:
    """Element and dot cards of a random deck, without title."""
    count = draw(st.integers(2, 9))
    lines = []
    for index in range(1, count + 1):
        letter = draw(st.sampled_from(sorted(VALUES)))
        nets = [draw(st.sampled_from(NETS)) for _ in range(PINS.get(letter, 2))]
        lines.append(" ".join([f"{letter}{index}", *nets, draw(st.sampled_from(VALUES[letter]))]))
    return ["Rz in 0 1k", "Ry out 0 1k", "Rw n1 n2 1k", *lines]


def read(folder: Path, text: str, name: str) -> Netlist:
    path = folder / name
    path.write_bytes(text.encode())
    return read_netlist(path)


def bare(netlist: Netlist, *, fold: bool = False, names: dict[str, str] | None = None) -> dict[str, Any]:
    """All that was read, by name and without lines; `fold`: without regard to case; `names`: nets as they are called
    there."""

    def word(text: str) -> str:
        return text.lower() if fold else text

    def net(key: str) -> str:
        told = (names or {}).get(key, key)
        return word(told)

    def part(each: Part) -> Part:
        pins = tuple(replace(pin, net=net(pin.net)) for pin in each.pins)
        return replace(
            each,
            ref=word(each.ref),
            value=word(each.value),
            model=word(each.model),
            letter=each.letter,
            controls=tuple(map(word, each.controls)),
            pins=pins,
            origin=replace(each.origin, line=0, note="", file=""),
            unknown=word(re.sub(r"'[^']*'", "", each.unknown)),
        )

    return {
        "parts": {word(each.ref): part(each) for each in netlist.parts},
        "nets": sorted(net(key) for key in netlist.nets),
        "models": {key: (word(each.name), each.kind, dict(each.params)) for key, each in netlist.models.items()},
        "temperature": netlist.temperature_c,
        "ground": netlist.ground,
        "remarks": sorted(word(each.text) for each in netlist.remarks),
    }


def deck(lines: list[str]) -> str:
    return "\n".join(["* title", *lines, TAIL, ".end", ""])


@ANY
@given(lines=decks(), seed=st.integers(0, 2**32))
def test_the_order_of_lines(tmp_path: Path, lines: list[str], seed: int) -> None:
    """Elements among each other and among the cards that they use."""
    whole, *inner = re.split(r"(?=\.subckt)|(?<=\.ends\n)", TAIL)
    pieces = [*lines, *whole.splitlines(), inner[0].strip(), *inner[1].splitlines()]
    random.Random(seed).shuffle(pieces)  # noqa: S311 - no secret
    shuffled = read(tmp_path, "\n".join(["* title", *pieces, ".end\n"]), "b.cir")
    assert bare(shuffled) == bare(read(tmp_path, deck(lines), "a.cir"))


@ANY
@given(lines=decks(), seed=st.integers(0, 2**32))
def test_comments_blanks_and_continued_lines(tmp_path: Path, lines: list[str], seed: int) -> None:
    chance = random.Random(seed)  # noqa: S311 - no secret
    written = ["* title"]
    for line in [*lines, *TAIL.splitlines()]:
        text = line
        if line[0] != "." and not re.search(r"[({'=]", line):
            text = re.sub(r" ", lambda _: chance.choice([" ", "\t", "  ", "\n+ ", "\n* note\n\n+", " \n + "]), line)
        written.append(
            text + chance.choice(["", "  ", " ; note", " $ note", " // note", "\t;", "\n*\n", "\n\n; x", "\n# y"])
        )
    text = "\n".join([*written, ".end\n"]).replace("\n", chance.choice(["\n", "\r\n", "\r"]))
    assert bare(read(tmp_path, text, "b.cir")) == bare(read(tmp_path, deck(lines), "a.cir"))


@ANY
@given(lines=decks(), seed=st.integers(0, 2**32))
def test_upper_and_lower_case(tmp_path: Path, lines: list[str], seed: int) -> None:
    """Every letter at random: of references, nets, suffixes, words, models and parameters."""
    chance = random.Random(seed)  # noqa: S311 - no secret
    mixed = "".join(chance.choice([char.lower(), char.upper()]) for char in deck(lines))
    assert bare(read(tmp_path, mixed, "b.cir"), fold=True) == bare(read(tmp_path, deck(lines), "a.cir"), fold=True)


@ANY
@given(lines=decks(), seed=st.integers(0, 2**32))
def test_names_of_nets(tmp_path: Path, lines: list[str], seed: int) -> None:
    chance = random.Random(seed)  # noqa: S311 - no secret
    names = {net: f"N{number:03}" for number, net in enumerate(chance.sample(NETS[:-1], len(NETS) - 1))}
    pattern = re.compile("|".join(rf"(?<![\w/+-]){re.escape(net)}(?![\w/])" for net in names))
    renamed = [pattern.sub(lambda found: names[found[0]], line) for line in lines]
    back = {name: net for net, name in names.items()}
    # Nets inside a subcircuit keep their names; values of formulas are shown as written.
    found = bare(read(tmp_path, deck(renamed), "b.cir"), names=back)
    wanted = bare(read(tmp_path, deck(lines), "a.cir"))
    for side in (found, wanted):
        side["parts"] = {ref: replace(each, value="") for ref, each in side["parts"].items()}
    assert found == wanted


EXPORT_PARTS = st.lists(
    st.tuples(
        st.sampled_from("RCLDQUJ"),
        st.lists(
            st.sampled_from(["A", "B", "", "GND", "Net-(R1-Pad1)", "/x y/ü", 'q"t', "b\\s"]), min_size=1, max_size=4
        ),
        st.sampled_from(["1k", "4u7 16V", "BC547", 'a"b', "µ", "10k (x)"]),
        st.booleans(),
    ),
    min_size=1,
    max_size=8,
)


def atom(text: str, *, quoted: bool) -> str:
    """A text as an export writes it; without quotes where it may."""
    if not quoted and text and not re.search(r'[\s()"\\]', text):
        return text
    escaped = text.replace("\\", "\\\\").replace('"', '\\"')
    return f'"{escaped}"'


def export(parts: list[tuple[str, list[str], str, bool]], chance: random.Random | None) -> str:
    """The board as an export; with `chance`, in another order, other spacing and other quoting."""

    def mixed(items: list[str]) -> list[str]:
        return chance.sample(items, len(items)) if chance else items

    def q(text: str) -> str:
        return atom(text, quoted=chance is None or chance.random() < 0.5)

    comps, nodes = [], {}
    for index, (letter, nets, value, dnp) in enumerate(parts, start=1):
        ref = f"{letter}{index}"
        fields = mixed([f"(field (name {q('F1')}) {q('one')})", f"(field (name {q('F2')}) {q('two')})"])
        more = mixed([f"(fields {' '.join(fields)})", *(['(property (name "dnp"))'] if dnp else [])])
        comps.append(f"(comp (ref {q(ref)}) {' '.join(mixed([f'(value {q(value)})', *more]))})")
        for pin, net in enumerate(nets, start=1):
            own = net or f"#{ref}.{pin}"  # nets without a name are nets of their own
            nodes.setdefault((net, own), []).append(
                f"(node (ref {q(ref)}) (pin {q(str(pin))}) (pintype {q('passive')}))"
            )
    codes = list(range(1, len(nodes) + 1))
    nets_ = [
        f"(net (code {q(str(code))}) (name {q(name)}) {' '.join(mixed(listed))})"
        for code, ((name, _), listed) in zip(codes, nodes.items(), strict=True)
    ]
    body = mixed([f"(components {' '.join(mixed(comps))})", f"(nets {' '.join(mixed(nets_))})", "(libparts)"])
    text = f"(export (version {q('E')}) {' '.join(body)})"
    if chance is None:
        return text
    outside = re.compile(r'"(?:[^"\\]|\\.)*"|( )')
    gap = chance.choice([" ", "\n  ", "\r\n\t", "\n"])
    return outside.sub(lambda found: gap if found[1] else found[0], text)


@ANY
@given(parts=EXPORT_PARTS, seed=st.integers(0, 2**32))
def test_order_spacing_and_quotes_of_an_export(
    tmp_path: Path, parts: list[tuple[str, list[str], str, bool]], seed: int
) -> None:
    chance = random.Random(seed)  # noqa: S311 - no secret
    one, other = read(tmp_path, export(parts, None), "a.net"), read(tmp_path, export(parts, chance), "b.net")
    assert bare(one) == bare(other)


@pytest.mark.parametrize("parts", [[("R", ["", ""], "1k", False), ("C", ["", "A"], "1u", True)]])
def test_the_exports_compared_are_not_empty(tmp_path: Path, parts: list[tuple[str, list[str], str, bool]]) -> None:
    netlist = read(tmp_path, export(parts, random.Random(1)), "a.net")  # noqa: S311 - no secret
    assert len(netlist.parts) == 2 and len(netlist.nets) == 4
    assert {part.ref: part.do_not_fit for part in netlist.parts} == {"R1": False, "C2": True}
