"""A hundred boards in one call against a hundred calls of one board.

    python benchmarks/many.py             print both times and their ratio (wanted: at most 0.25)
    python benchmarks/many.py 20          as many boards as said

The boards are the sample boards in turn, each with a value of its own, so that nothing is computed twice. The single
calls run one after another, as a script in continuous integration would run them. Beside the wall times stands the
ratio by processor time, shared among the workers: what it would be with every processor free, which the wall does not
show on a busy machine. It prints and never fails on a time.
"""

from __future__ import annotations

import os
import re
import shutil
import subprocess
import sys
import tempfile
import time
from pathlib import Path

ROOT = Path(__file__).resolve().parents[1]
SAMPLES = ROOT / "sample_schematics"
COMMAND = [str(Path(sys.executable).parent / "stageproof"), "check", "--gate", "never"]


def lay_out(folder: Path, count: int) -> list[Path]:
    """`count` boards with their intent files; their paths."""
    names = sorted(path.name for path in SAMPLES.iterdir() if path.is_dir())
    paths = []
    for number in range(count):
        name = names[number % len(names)]
        text = (SAMPLES / name / f"{name}.cir").read_text("utf-8")
        path = folder / f"board{number}.cir"
        path.write_text(_own_value(text, number), "utf-8")
        shutil.copy(SAMPLES / name / f"{name}.intent.toml", folder / f"board{number}.intent.toml")
        paths.append(path)
    return paths


def _own_value(text: str, number: int) -> str:
    """The board with an R1 of its own, larger by some parts in a hundred thousand."""

    def larger(found: re.Match[str]) -> str:
        return f"{found[1]}{float(found[2]) * (1.0 + 1e-5 * number):.9g}{found[3]}"

    return re.sub(r"(?m)^(R1 \S+ \S+ )([\d.]+)(k?)$", larger, text)


def seconds(command: list[str]) -> tuple[float, float]:
    """Wall and processor time of one run [s]. Raises CalledProcessError where it fails."""
    start, before = time.perf_counter(), _used()
    subprocess.run(command, check=True, capture_output=True, timeout=3600)
    return time.perf_counter() - start, _used() - before


def _used() -> float:
    """Processor time of all finished child processes and theirs [s]."""
    times = os.times()
    return times.children_user + times.children_system


def main() -> None:
    """Measure and print the ratio."""
    count = int(sys.argv[1]) if len(sys.argv) > 1 else 100
    with tempfile.TemporaryDirectory() as folder:
        paths = lay_out(Path(folder), count)
        seconds([*COMMAND, str(paths[0])])  # fills the byte code cache
        wall, used = seconds([*COMMAND, "--as", "json", folder])
        single = [seconds([*COMMAND, "--as", "json", str(path)]) for path in paths]
    wall_apart, used_apart = (sum(column) for column in zip(*single, strict=True))
    shared = used / min(os.cpu_count() or 1, count) / used_apart
    print(f"{count} boards: one call {wall:.1f} s, single calls {wall_apart:.1f} s, ratio {wall / wall_apart:.3f}")
    print(f"by processor time, every processor free: {shared:.3f}")


if __name__ == "__main__":
    main()
