"""The digest against the published example and the standard library."""

from __future__ import annotations

import hashlib

import pytest

from checker.digest import sha256_hex


def test_published_example() -> None:
    """FIPS 180-4, example "abc" (NIST, SHA-256 example values)."""
    assert sha256_hex(b"abc") == "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad"


@pytest.mark.parametrize("size", [0, 1, 55, 56, 64, 1000])
def test_as_the_standard_library(size: int) -> None:
    data = bytes(range(256)) * 4
    assert sha256_hex(data[:size]) == hashlib.sha256(data[:size]).hexdigest()
