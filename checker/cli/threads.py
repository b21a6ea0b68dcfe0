"""How many threads linear algebra may start: one, decided before numpy is imported.

A board's matrices are small; starting threads costs more than they give (measured: a fifth of the processor time of a
small check), and boards run side by side in processes. Whoever sets these variables keeps what was set.
"""

from __future__ import annotations

import os


def one_thread() -> None:
    """Set the variables that the usual libraries read at their import."""
    for name in ("OPENBLAS_NUM_THREADS", "OMP_NUM_THREADS", "MKL_NUM_THREADS"):
        os.environ.setdefault(name, "1")
