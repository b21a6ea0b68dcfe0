"""Exit statuses, which scripts rely on."""

from __future__ import annotations

from typing import Final

CLEAN: Final = 0
"""Nothing at or above the gate."""
FOUND: Final = 1
"""A finding at or above the gate, or too little could be checked."""
UNUSABLE: Final = 2
"""The input or the call cannot be used."""
FAILED: Final = 3
"""Something internal failed; a report that was written is marked incomplete."""
INTERRUPTED: Final = 130
"""Stopped from the keyboard, as shells number it."""
