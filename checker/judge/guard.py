"""A rule that breaks down is reported, loudly, and the others go on."""

from __future__ import annotations

import os
from collections.abc import Callable
from pathlib import Path

from checker.judge.verdict import Failure, Open
from checker.rulekit import CannotTell, Evidence
from checker.trouble import Unsolved

RAISE = "STAGEPROOF_RAISE"
"""Environment variable: set, a failing rule raises instead of being reported. Our tests set it."""


def guarded(
    rule: str, subject: str, judge: Callable[[], tuple[Evidence, ...]]
) -> tuple[Evidence, ...] | Open | Failure:
    """What `judge` returns; `Open` where a datum is missing or its island is unsolved; `Failure` for
    anything else.
    """
    try:
        return judge()
    except CannotTell as missing:
        return Open(subject=subject, rule=rule, datum=missing.datum, supply=missing.supply)
    except Unsolved as unsolved:
        return Open(
            subject=subject, rule=rule, datum=str(unsolved), supply="a circuit with a certified operating point"
        )
    except Exception as fault:
        if os.environ.get(RAISE):
            raise
        from traceback import extract_tb  # a clean run does not pay for it

        where = extract_tb(fault.__traceback__)[-1]
        what = f"{type(fault).__name__}: {fault} ({Path(where.filename).name}:{where.lineno})"
        return Failure(rule=rule, subject=subject, what=what)
