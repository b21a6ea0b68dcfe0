"""Which files an include may reach: those inside the netlist's own folder and the folders allowed by the
caller."""

from __future__ import annotations

from pathlib import Path

from checker.netlist.text import display_name
from checker.shape import frozen


@frozen
class Found:
    """`real`: the resolved file. `shown`: its name for origins, relative as the netlist's own name is."""

    real: Path
    shown: str


class Folders:
    """The folders that includes may read from, symbolic links resolved."""

    def __init__(self, netlist: Path, include_dirs: tuple[Path, ...]) -> None:
        self._roots = [(folder.resolve(), folder) for folder in (netlist.parent, *include_dirs)]
        self.home = self._roots[0][0]

    def find(self, written: str, *, beside: Path) -> Found | None:
        """The file that an include names, tried from the folder `beside` and then from each root. None where
        it is not there or lies outside all roots; which of the two is not told apart, so that nothing can be
        probed."""
        name = written.strip().strip("\"'").replace("\\", "/")
        if not name:
            return None
        for folder in (beside, *(root for root, _ in self._roots)):
            try:
                real = (folder / name).resolve()
                for root, given in self._roots:
                    if real.is_relative_to(root) and real.is_file():
                        return Found(real=real, shown=display_name(given / real.relative_to(root)))
            except (OSError, ValueError, RuntimeError):
                # A name that no file can have, or links that run in a ring.
                continue
        return None
