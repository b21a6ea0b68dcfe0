"""Names in an intent that only later layers know: quantities of targets, rules and their limits."""

from __future__ import annotations

from collections.abc import Collection, Mapping

from checker.intent.hints import unknown
from checker.intent.types import Intent
from checker.trouble import InputTrouble


def check_quantity(intent: Intent, known: Collection[str]) -> None:
    """Every target's quantity must be in `known`. Raises InputTrouble with the target's line."""
    for target in intent.targets:
        if target.quantity not in known:
            message = unknown(target.quantity, known, "quantity of a target")
            raise InputTrouble(message, file=target.origin.file, line=target.origin.line)


def check_limits(intent: Intent, known: Mapping[str, Collection[str]]) -> None:
    """Every rule under [limits] must be a key of `known`, every limit one of its names.

    Raises InputTrouble with the rule's line.
    """
    for rule, limits in intent.limits.items():
        line = intent.limit_lines.get(rule, 0)
        if rule not in known:
            raise InputTrouble(unknown(rule, known, "rule in [limits]"), file=intent.path, line=line)
        for name in limits:
            if name not in known[rule]:
                message = unknown(name, known[rule], f"limit of rule {rule!r}")
                raise InputTrouble(message, file=intent.path, line=line)
