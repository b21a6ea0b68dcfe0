"""SHA-256 (FIPS 180-4) of some bytes, from the interpreter's own module.

`hashlib` loads a whole library of ciphers, two hundredths of a small check; the standard library's `random` takes its
digest in the same way.
"""

from __future__ import annotations

try:
    from _sha2 import sha256  # type: ignore[import-not-found]  # Python 3.12 and later
except ImportError:
    try:
        from _sha256 import sha256  # type: ignore[import-not-found]
    except ImportError:
        from hashlib import sha256


def sha256_hex(data: bytes) -> str:
    """The digest in hexadecimal, 64 characters."""
    return str(sha256(data).hexdigest())
