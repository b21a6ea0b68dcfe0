"""What the readers make of every netlist in a folder: a line a file, totals last.

    python benchmarks/reading_table.py FOLDER          the table
    python benchmarks/reading_table.py FOLDER -v       and, below each file, what was not understood

Columns: parts and nets; transistors and diodes by kind (each of a dual counts); parts of these kinds that lack a model
or a pin order; values that are no quantity; lines and parts not understood; remarks. Nothing is solved.
"""

from __future__ import annotations

import sys
from collections import Counter
from pathlib import Path

from checker.circuit.build import build_circuit
from checker.circuit.types import Circuit
from checker.intent.types import Intent
from checker.netlist.read import read_netlist
from checker.netlist.types import Netlist
from checker.trouble import InputTrouble

COLUMNS = ("parts", "nets", "bipolar", "jfet", "mosfet", "diode", "lacking", "values", "lines", "remarks")
_DEVICES = ("bipolar", "fet", "diode")


def counted(netlist: Netlist, circuit: Circuit) -> tuple[Counter[str], list[str]]:
    """Counts by `COLUMNS`, and what was not understood."""
    values = [u for u in circuit.unknowns if u.datum.startswith("value of")]
    lost = [remark for remark in netlist.remarks if remark.lost]
    blind = [part for part in netlist.parts if part.unknown]
    placed = {name.rsplit(".", 1)[0] for table in circuit.devices.values() for name in table.names}
    placed |= {name for table in circuit.devices.values() for name in table.names}
    known = {ref for ref, fact in circuit.parts.items() if fact.kind in _DEVICES}
    lacking = sorted(known - placed - {part.ref for part in blind})
    found = Counter(parts=len(netlist.parts), nets=len(netlist.nets), remarks=len(netlist.remarks) - len(lost))
    found.update({kind: len(table.names) for kind, table in circuit.devices.items()})
    found.update(lacking=len(lacking), values=len(values), lines=len(lost) + len(blind))
    told = [f"{u.ref}: {u.datum}; {u.supply}" for u in values]
    told += [f"{u.ref}: {u.datum}; {u.supply}" for u in circuit.unknowns if u.ref in lacking]
    told += [f"line {remark.origin.line}: {remark.text}" for remark in lost]
    told += [f"line {part.origin.line}: {part.ref}: {part.unknown}" for part in blind]
    return found, told


def main() -> None:
    """Print the table."""
    if len(sys.argv) < 2:
        sys.exit(__doc__)
    folder, verbose = Path(sys.argv[1]), "-v" in sys.argv[2:]
    total: Counter[str] = Counter()
    print(f"{'file':24}" + "".join(f"{name:>8}" for name in COLUMNS))
    for path in sorted(folder.iterdir()):
        try:
            netlist = read_netlist(path)
            found, told = counted(netlist, build_circuit(netlist, Intent()))
        except InputTrouble as trouble:
            print(f"{path.name:24} refused: {trouble}")
            continue
        total += found
        print(f"{path.name:24}" + "".join(f"{found[name]:8}" for name in COLUMNS))
        if verbose:
            print("".join(f"    {line}\n" for line in told), end="")
    print(f"{'all':24}" + "".join(f"{total[name]:8}" for name in COLUMNS))


if __name__ == "__main__":
    main()
