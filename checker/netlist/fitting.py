"""Whether a part is drawn but not fitted, by its value or its fields. The spellings are common practice, no
source."""

from __future__ import annotations

import re
from collections.abc import Mapping

from checker.pattern import lazy

_WORDS = lazy(
    r"(?<![A-Za-z0-9])(dnp|dnf|dni|dns|do\s*not\s*(?:fit|populate|place|install|stuff)|not\s*(?:fitted|populated)"
    r"|no\s*(?:pop|stuff|fit|mount)|unpopulated)(?![A-Za-z0-9])",
    re.IGNORECASE,
)
_FIELDS = ("dnp", "dnf", "dni", "donotpopulate", "donotfit", "donotplace", "nopop")
_FITTED_FIELDS = ("populate", "fitted", "fit", "mount")
_NO = ("", "0", "n", "no", "false", "-", "~")
_BARE_NO = ("0", "n", "no", "false")


def is_left_out(value: str, fields: Mapping[str, str]) -> bool:
    """True where the value says so ("DNP", "10k DNF"), a field of that name is set (a property without value
    counts as set), a field such as `Populate` says no, or any field (a note) holds nothing but such a
    word."""
    if _says_so(value):
        return True
    for key, text in fields.items():
        name = re.sub(r"[\s_-]", "", key).lower()
        word = text.strip().lower()
        if _hints(word) and _WORDS.fullmatch(word):
            return True
        if name in _FIELDS and (word not in _NO or (word == "" and key == "dnp")):
            return True
        if name in _FITTED_FIELDS and (word in _BARE_NO or _says_so(text)):
            return True
        if name in ("config", "variant", "assembly", "bom") and _says_so(text):
            return True
    return False


def _says_so(text: str) -> bool:
    return _hints(text) and _WORDS.search(text) is not None


def _hints(text: str) -> bool:
    """Whether a text holds a beginning of one of the words: most do not, and the pattern is long."""
    low = text.lower()
    return any(sign in low for sign in ("dn", "no", "unpop"))
