"""What the process is told about itself: how many threads linear algebra may start, how often memory is searched.

Both are decided before numpy is imported, and only for the command line: whoever imports the package keeps their own.
"""

from __future__ import annotations

import gc
import os
import sys
from typing import NoReturn

_BETWEEN_SEARCHES = 200_000
"""New containers between two searches for unreachable cycles; a small check makes fewer. The house's records hold
no cycles, so there is little to find, and searches are a tenth of a small check (measured)."""


def one_thread() -> None:
    """Set the variables that the usual libraries read at their import.

    A board's matrices are small; starting threads costs more than they give (measured: a fifth of the processor time
    of a small check), and boards run side by side in processes. Whoever sets these variables keeps what was set.
    """
    for name in ("OPENBLAS_NUM_THREADS", "OMP_NUM_THREADS", "MKL_NUM_THREADS"):
        os.environ.setdefault(name, "1")


def few_searches() -> None:
    """Search for unreachable cycles rarely."""
    gc.set_threshold(_BETWEEN_SEARCHES)


def leave(status: int) -> NoReturn:
    """Leave with this status; the interpreter is spared a last search of all that was imported."""
    gc.freeze()
    sys.exit(status)
