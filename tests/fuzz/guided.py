"""Coverage-guided fuzzing of the readers. Needs the package `atheris`, which is no dependency of this project:

    pip install atheris
    python -m tests.fuzz.guided spice -runs=100000 -timeout=10
    python -m tests.fuzz.guided kicad -runs=100000 -timeout=10
    python -m tests.fuzz.guided intent -runs=100000 -timeout=10

What follows the reader's name goes to the fuzzing engine. It stops at the first find and leaves the input as a file
`crash-*` or `timeout-*`: mend the reader, and pin the input as a test beside it.
"""

from __future__ import annotations

import sys
import tempfile
from pathlib import Path

import atheris

with atheris.instrument_imports(include=["checker", "tomllib"]):
    import tomllib  # noqa: F401 - so that it is instrumented before the intent reader loads it

    from tests.fuzz.targets import SEEDS, TARGETS, WORDS, sample_seeds, try_bytes


def _dictionary(words: tuple[bytes, ...]) -> str:
    return "".join('"' + "".join(f"\\x{byte:02x}" for byte in word) + '"\n' for word in words)


def main() -> None:
    """Run the engine on the reader that the first argument names."""
    if len(sys.argv) < 2 or sys.argv[1] not in TARGETS:
        sys.exit(f"name a reader: {', '.join(TARGETS)}")
    what = sys.argv[1]
    with tempfile.TemporaryDirectory() as name:
        folder = Path(name)
        corpus = folder / "corpus"
        corpus.mkdir()
        for index, seed in enumerate([*SEEDS[what], *sample_seeds(what)]):
            (corpus / f"seed{index}").write_bytes(seed)
        words = folder / "words"
        words.write_text(_dictionary(WORDS[what]))
        board = folder / "board"

        def one(data: bytes) -> None:
            try_bytes(what, data, board)

        # An exception that leaves `one` is the engine's find; it ends the process itself.
        atheris.Setup([sys.argv[0], f"-dict={words}", "-max_len=4096", *sys.argv[2:], str(corpus)], one)
        atheris.Fuzz()


if __name__ == "__main__":
    main()
