"""Regular expressions that are compiled at first use: a run needs a few of the house's many, and start-up counts."""

from __future__ import annotations

import re
from typing import Any, cast


class _Lazy:
    """Stands for a compiled pattern until something is asked of it; what was asked once is answered directly."""

    def __init__(self, text: str, flags: int) -> None:
        self._text = text
        self._flags = flags
        self._made: re.Pattern[str] | None = None

    def __getattr__(self, name: str) -> Any:
        if self._made is None:
            self._made = re.compile(self._text, self._flags)
        answer = getattr(self._made, name)
        setattr(self, name, answer)
        return answer


def lazy(text: str, flags: int | re.RegexFlag = 0) -> re.Pattern[str]:
    """What `re.compile` would return, compiled when first used. Raises re.error then, not here: tests use them all."""
    return cast("re.Pattern[str]", _Lazy(text, int(flags)))
