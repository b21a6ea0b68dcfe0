"""Start-up: `stageproof check` on the clean sample against the bare import of the packages that it needs.

    python benchmarks/startup.py             print both times and their ratio (wanted: at most 2)

Runs alternate, and the smallest of each counts, so that a busy machine disturbs both alike. It prints and
never fails on a time.
"""

from __future__ import annotations

import subprocess
import sys
import time
from pathlib import Path

ROOT = Path(__file__).resolve().parents[1]
BOARD = ROOT / "sample_schematics" / "receiver_input" / "receiver_input.net"
ROUNDS = 7
CHECK = [str(Path(sys.executable).parent / "stageproof"), "check", str(BOARD)]
IMPORT = [sys.executable, "-c", "import numpy, click, sexpdata"]


def seconds(command: list[str]) -> float:
    """Wall time of one run [s]. Raises CalledProcessError where it fails."""
    start = time.perf_counter()
    subprocess.run(command, check=True, capture_output=True, timeout=120)
    return time.perf_counter() - start


def main() -> None:
    """Measure in turns and print the ratio of the smallest times."""
    for command in (CHECK, IMPORT):
        seconds(command)  # fills the byte code cache
    pairs = [(seconds(CHECK), seconds(IMPORT)) for _ in range(ROUNDS)]
    check, bare = (min(column) for column in zip(*pairs, strict=True))
    print(f"check {check:.3f} s, import of numpy, click and sexpdata {bare:.3f} s, ratio {check / bare:.2f}")


if __name__ == "__main__":
    main()
