"""Operation counters of `check` on the sample boards against the committed table: a rise fails.

    python benchmarks/counters.py            compare, print a table, exit 1 on a rise
    python benchmarks/counters.py --write    take today's numbers into counters.toml

Counts do not depend on the machine: solves, factorisations and device evaluations come from the solver's own
counters; `own_modules` are modules of checker and rules that a run imports, `foreign_packages` the installed
packages beside them (the standard library left out).
"""

from __future__ import annotations

import argparse
import contextlib
import io
import json
import subprocess
import sys
import tomllib
from pathlib import Path

HERE = Path(__file__).resolve().parent
SAMPLES = HERE.parent / "sample_schematics"
TABLE = HERE / "counters.toml"
OWN = {"checker", "rules"}
FINISHED = {0, 1}
HEAD = "# Operation counts of `stageproof check` on the sample boards. Written by counters.py --write.\n"

Counts = dict[str, int]


EXACT = ("own_modules", "foreign_packages")
SLACK = 1.1
"""Another processor's linear algebra may round a Newton pass into or out of a solve; a real rise is larger."""


def count_one(netlist: str) -> Counts:
    """Run `check` on one netlist in this process [fresh] and read every counter.

    Raises RuntimeError where the check did not finish.
    """
    before = set(sys.modules)
    from checker.cli.main import main
    from checker.solve.counters import COUNTERS

    status: object = 0
    sys.argv = ["stageproof", "check", netlist]
    with contextlib.redirect_stdout(io.TextIOWrapper(io.BytesIO(), encoding="utf-8")):
        try:
            main()
        except SystemExit as stop:
            status = stop.code or 0
    if status not in FINISHED:
        raise RuntimeError(f"{netlist}: check ended with status {status}")
    return {**COUNTERS.snapshot(), **count_modules(set(sys.modules) - before)}


def count_modules(names: set[str]) -> Counts:
    """How many of the imported modules are our own, and how many installed packages the others belong to."""
    own = [name for name in names if name.split(".")[0] in OWN]
    roots = {name.split(".")[0] for name in names} - OWN - set(sys.stdlib_module_names)
    files = {root: getattr(sys.modules.get(root), "__file__", None) for root in roots}
    foreign = [root for root, file in files.items() if file and "site-packages" in Path(file).parts]
    return {"own_modules": len(own), "foreign_packages": len(foreign)}


def count_all() -> dict[str, Counts]:
    """The counts of every sample board in both formats, each in a process of its own. Key: file name."""
    counts = {}
    for path in sorted([*SAMPLES.glob("*/*.cir"), *SAMPLES.glob("*/*.net")]):
        command = [sys.executable, str(Path(__file__).resolve()), "--one", str(path)]
        done = subprocess.run(command, capture_output=True, text=True, check=False, timeout=120)
        if done.returncode != 0:
            raise SystemExit(f"{path.name}: could not be counted\n{done.stderr}")
        counts[path.name] = json.loads(done.stdout)
    return counts


def compare(counts: dict[str, Counts], table: dict[str, Counts]) -> list[str]:
    """Print every count beside the committed one; return a sentence for each rise, gap or leftover."""
    faults = [f"{name}: in the table, but no sample" for name in sorted(table.keys() - counts.keys())]
    print(f"{'board':<28}{'counter':<22}{'committed':>10}{'now':>10}")
    for name, found in counts.items():
        for counter in sorted(found.keys() | table.get(name, {}).keys()):
            now, committed = found.get(counter), table.get(name, {}).get(counter)
            print(f"{name:<28}{counter:<22}{committed!s:>10}{now!s:>10}")
            if committed is None or now is None:
                faults.append(f"{name}: {counter}: committed {committed}, now {now}; run with --write")
            elif now > committed * (1.0 if counter in EXACT else SLACK):
                faults.append(f"{name}: {counter} rose from {committed} to {now}")
    return faults


def as_toml(counts: dict[str, Counts]) -> str:
    """The table's text, sorted."""
    blocks = [
        "\n".join([f'["{name}"]', *(f"{counter} = {number}" for counter, number in sorted(found.items()))])
        for name, found in sorted(counts.items())
    ]
    return HEAD + "\n" + "\n\n".join(blocks) + "\n"


def main() -> int:
    """Read the arguments and do one of the three jobs; the exit status."""
    parser = argparse.ArgumentParser(description="Operation counters of the samples.")
    parser.add_argument("--write", action="store_true", help="write counters.toml instead of comparing")
    parser.add_argument("--one", metavar="NETLIST", help="count one netlist and print JSON")
    arguments = parser.parse_args()
    if arguments.one:
        print(json.dumps(count_one(arguments.one)))
        return 0
    counts = count_all()
    if arguments.write:
        TABLE.write_text(as_toml(counts), "utf-8")
        return 0
    faults = compare(counts, tomllib.loads(TABLE.read_text("utf-8")))
    for fault in faults:
        print(fault, file=sys.stderr)
    return 1 if faults else 0


if __name__ == "__main__":
    sys.exit(main())
