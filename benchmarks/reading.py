"""Reading a board of 20,000 parts against the bare parse of its S-expression by a library.

    python benchmarks/reading.py             print times and ratios (wanted: the export at most 1.5)

The same board as an export of version E and as SPICE-style text, made here from a fixed seed; then texts made to be
slow. Runs alternate, and the smallest time of each counts. It prints and never fails on a time.
"""

from __future__ import annotations

import random
import sys
import tempfile
import time
from collections.abc import Callable
from pathlib import Path
from typing import TypeVar

import sexpdata

from checker.netlist.read import read_netlist

PARTS = 20_000
ROUNDS = 3
KINDS = {
    "R": ("4k7", "4.7k", "Device:R"),
    "C": ("100n", "100n", "Device:C"),
    "Q": ("BC547", "BC547", "Device:Q_NPN_CBE"),
}
"""Letter to value as drawn, value in SPICE text, symbol."""

Argument = TypeVar("Argument")
Board = list[tuple[str, str, list[int]]]
"""Letter, reference, nets by number."""


def board(count: int) -> Board:
    """Parts on random nets, half as many nets as parts."""
    chance = random.Random(20_000)  # noqa: S311 - no secret
    made = []
    for number in range(1, count + 1):
        letter = chance.choice("RRRCCQ")
        nets = [chance.randrange(count // 2) for _ in range(3 if letter == "Q" else 2)]
        made.append((letter, f"{letter}{number}", nets))
    return made


def export(parts: Board) -> str:
    """The board as a schematic editor exports it, version E."""
    nodes: dict[int, list[str]] = {}
    for _, ref, nets in parts:
        for pin, net in enumerate(nets, start=1):
            nodes.setdefault(net, []).append(f'\n      (node (ref "{ref}") (pin "{pin}") (pintype "passive"))')
    comps = "\n".join(_component(letter, ref) for letter, ref, _ in parts)
    nets = "\n".join(
        f'    (net (code "{n + 1}") (name "N{n}") (class "Default"){"".join(nodes[n])})' for n in sorted(nodes)
    )
    return f'(export (version "E")\n  (design)\n  (components\n{comps})\n  (nets\n{nets}))\n'


def _component(letter: str, ref: str) -> str:
    value, _, symbol = KINDS[letter]
    library, name = symbol.split(":")
    return f"""    (comp (ref "{ref}")
      (value "{value}")
      (footprint "Resistor_SMD:R_0805_2012Metric")
      (datasheet "~")
      (fields
        (field (name "Footprint") "Resistor_SMD:R_0805_2012Metric")
        (field (name "Datasheet") "~"))
      (libsource (lib "{library}") (part "{name}") (description ""))
      (property (name "Sheetname") (value "Root"))
      (property (name "Sheetfile") (value "board.kicad_sch"))
      (sheetpath (names "/") (tstamps "/"))
      (tstamps "{ref}"))"""


def deck(parts: Board) -> str:
    """The board as SPICE-style text."""
    lines = (f"{ref} {' '.join(f'N{net}' for net in nets)} {KINDS[letter][1]}" for letter, ref, nets in parts)
    return "\n".join(["* board", *lines, ".end\n"])


SLOW = {
    "a waveform of 400,000 numbers": "* t\nR1 a 0 1\nV1 a 0 PWL("
    + "\n+ ".join(f"{n}n 0.{n}" for n in range(200_000))
    + ")\n",
    "150,000 uses of a parameter that fails": "* t\n.param x={y*2}\n"
    + "".join(f"R{n} n{n} 0 {{x*2}}\n" for n in range(150_000)),
    "1,000,000 elements from 1,000 instances": "* t\n.subckt s a\n"
    + "".join(f"R{n} a n{n} 1k\n" for n in range(998))
    + ".ends\n"
    + "".join(f"X{n} a s\n" for n in range(1_000)),
}


def seconds(work: Callable[[Argument], object], argument: Argument) -> float:
    """Processor time of one call [s]."""
    start = time.process_time()
    work(argument)
    return time.process_time() - start


def main() -> None:
    """Measure and print."""
    parts = board(PARTS)
    with tempfile.TemporaryDirectory() as name:
        folder = Path(name)

        def written(text: str) -> Path:
            path = folder / "board"
            path.write_text(text)
            return path

        text = export(parts)
        path = written(text)
        pairs = [(seconds(read_netlist, path), seconds(sexpdata.loads, text)) for _ in range(ROUNDS)]
        read, bare = (min(column) for column in zip(*pairs, strict=True))
        size = len(text) / 1e6
        print(
            f"export, {PARTS} parts, {size:.1f} MB: read {read:.2f} s, bare parse {bare:.2f} s, ratio {read / bare:.2f}"
        )
        path = written(deck(parts))
        spice = min(seconds(read_netlist, path) for _ in range(ROUNDS))
        print(f"SPICE text, the same parts: read {spice:.2f} s, ratio to that bare parse {spice / bare:.2f}")
        for what, content in SLOW.items():
            path = written(content)
            print(f"{what}: {seconds(read_netlist, path):.1f} s")
            sys.stdout.flush()


if __name__ == "__main__":
    main()
