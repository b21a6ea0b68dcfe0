"""Transistors drawn by seed from every netlist in a folder, with what the program takes them for: to be read by eye.

    python benchmarks/devices_table.py FOLDER [COUNT [SEED]]     COUNT rows (50) drawn with SEED (1), totals last

A row: file, line, reference, value and symbol as written; kind, terminals, where the kind comes from; current at rest,
or the reason why there is none. The totals count all transistors of the folder: certified, with a reason, neither.
"""

from __future__ import annotations

import random
import sys
from collections import Counter
from pathlib import Path

from checker.intent.types import Intent
from checker.netlist.read import read_netlist
from checker.setup import Setup, set_up
from checker.trouble import InputTrouble


def rows_of(path: Path, setup: Setup) -> list[tuple[str, str]]:
    """(state, row) of each transistor of a board, of those left out too."""
    parts = {part.ref: part for part in setup.netlist.parts}
    table = setup.circuit.transistors
    current = setup.point.transistor["i_out_a"][0]
    out = []
    for place, name in enumerate(table.names):
        fact = setup.circuit.parts[name]
        part = parts.get(name) or parts.get(name.rpartition(".")[0])
        stage = next((each for each in setup.recognition.stages if each.device == name), None)
        amps = float(current[place])
        solved = amps == amps  # not nan
        reason = "" if stage is None else stage.reason
        polarity = {("bipolar", 1.0): "NPN", ("bipolar", -1.0): "PNP"}.get(
            (table.families[place], float(table.polarity[place])),
            f"{'N' if table.polarity[place] > 0 else 'P'} {table.families[place]}",
        )
        nets = " ".join(f"{pin}={net}" for pin, net in fact.terminals.items())
        written = f"{part.value!r} {part.symbol}" if part is not None else ""
        told = f"{amps:.3g} A" if solved else reason or "NO REASON"
        line = part.origin.line if part is not None else 0
        row = f"{path.name}:{line} {name} {written} | {polarity} {nets} ({fact.model_source}) | {told}"
        out.append(("certified" if solved else "reason" if reason else "neither", row))
    known = {name.rpartition(".")[0] if "." in name else name for name in table.names} | set(table.names)
    for unknown in setup.circuit.unknowns:
        fact = setup.circuit.parts.get(unknown.ref)
        if fact is not None and fact.kind in ("bipolar", "fet") and unknown.ref not in known:
            part = parts[unknown.ref]
            written = f"{path.name}:{part.origin.line} {unknown.ref} {part.value!r} {part.symbol}"
            out.append(("reason", f"{written} | cannot tell | {unknown.datum}"))
            known.add(unknown.ref)
    return out


def main() -> None:
    """Print the drawn rows and the totals."""
    if len(sys.argv) < 2:
        sys.exit(__doc__)
    folder = Path(sys.argv[1])
    count, seed = int((sys.argv[2:] or ["50"])[0]), int((sys.argv[3:] or ["1"])[0])
    rows: list[tuple[str, str]] = []
    for path in sorted(folder.iterdir()):
        try:
            rows += rows_of(path, set_up(read_netlist(path), Intent()))
        except InputTrouble:
            continue
    for _, row in random.Random(seed).sample(rows, min(count, len(rows))):  # noqa: S311 - no secret
        print(row)
    print(dict(Counter(state for state, _ in rows)), "of", len(rows))


if __name__ == "__main__":
    main()
