"""A short run of the fuzzing targets with seeded mutations: the same inputs every time, no engine needed."""

from __future__ import annotations

import random
from pathlib import Path

import pytest

from tests.fuzz.targets import SEEDS, TARGETS, WORDS, sample_seeds, try_bytes

INPUTS = 400


def mutated(data: bytes, words: tuple[bytes, ...], chance: random.Random) -> bytes:
    """`data` with a few pieces cut, doubled, moved or replaced."""
    result = bytearray(data)
    for _ in range(chance.choice((1, 2, 4, 8, 16))):
        at, length = chance.randrange(len(result) + 1), chance.choice((0, 1, 4, 30))
        piece = bytes(result[at : at + length])
        match chance.randrange(5):
            case 0:
                result[at : at + length] = chance.choice(words)
            case 1:
                result[at:at] = chance.choice(words)
            case 2:
                result[at : at + length] = chance.randbytes(length // 4 + 1)
            case 3:
                result[at:at] = piece * chance.choice((1, 2, 50))
            case _:
                del result[at : at + length]
                where = chance.randrange(len(result) + 1)
                result[where:where] = piece
    return bytes(result)


@pytest.mark.parametrize("what", sorted(TARGETS))
def test_mutated_input_gives_a_result_or_one_message(what: str, tmp_path: Path) -> None:
    chance = random.Random(f"stageproof {what}")  # noqa: S311 - no secret
    seeds = [*SEEDS[what], *sample_seeds(what)]
    read = sum(
        try_bytes(what, mutated(chance.choice(seeds), WORDS[what], chance), tmp_path / "board") for _ in range(INPUTS)
    )
    # Neither may every input be refused at the door nor may none: then nothing was tried.
    assert 0 < read < INPUTS


@pytest.mark.parametrize("what", sorted(TARGETS))
def test_every_seed_is_readable(what: str, tmp_path: Path) -> None:
    assert all(try_bytes(what, seed, tmp_path / "board") for seed in (*SEEDS[what], *sample_seeds(what)))
