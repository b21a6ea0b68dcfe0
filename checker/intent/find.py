"""Which intent file belongs to a netlist."""

from __future__ import annotations

from pathlib import Path


def find_intent(netlist: Path) -> Path | None:
    """`NAME.intent.toml` beside the netlist, else `intent.toml` in its folder, else None."""
    for name in (netlist.stem + ".intent.toml", "intent.toml"):
        candidate = netlist.with_name(name)
        if candidate.is_file():
            return candidate
    return None
