"""The rules that take part: the built-in catalogue and those of installed plug-ins, checked and sorted by
id.
"""

from __future__ import annotations

import importlib
import importlib.util
from collections.abc import Iterable
from pathlib import Path
from typing import NamedTuple

from checker.judge.plugins import BUILTIN, plugins
from checker.judge.verdict import AnyRule
from checker.pattern import lazy
from checker.rulekit import Rule
from checker.trouble import InputTrouble
from checker.words import SEVERITIES

_ID = lazy(r"[a-z][a-z0-9]*(-[a-z0-9]+)*")
_TOLD = ("id", "summary", "theme", "weight", "bench", "source", "applies")


class Rulebook(NamedTuple):
    """The rules sorted by id, and a caution for each plug-in that could not be used."""

    rules: tuple[AnyRule, ...]
    cautions: tuple[str, ...]


def load_rules() -> Rulebook:
    """All rules of this installation.

    Raises `InputTrouble` where there is none, where the package `rules` is not the one installed beside
    `checker` (it is then somebody else's, and is not imported), or where two rules share an id.
    """
    _stands_beside()
    found = list(_catalogue(BUILTIN))
    cautions = []
    for name, target in plugins():
        try:
            found += _catalogue(target)
        except Exception as trouble:  # whatever a plug-in raises is its own fault, and named
            what = f"{type(trouble).__name__}: {trouble}"
            cautions.append(f"the rules of plug-in {name} ({target}) are not used: {what}")
    if not found:
        raise InputTrouble("no rules found; install Stageproof into an environment of its own")
    return Rulebook(_distinct(found), tuple(cautions))


def _stands_beside() -> None:
    spec = importlib.util.find_spec(BUILTIN.split(":")[0])
    home = Path(__file__).resolve().parents[2]
    if spec is None or spec.origin is None or Path(spec.origin).resolve().parents[1] != home:
        where = "none" if spec is None else spec.origin or "a folder without code"
        raise InputTrouble(
            f"the package 'rules' in use ({where}) is not the one installed with Stageproof; "
            "install Stageproof into an environment of its own"
        )


def _catalogue(target: str) -> list[AnyRule]:
    """The rules of one catalogue: "module:attribute", itself a tuple of "module:Class"."""
    names = _attribute(target)
    if not isinstance(names, tuple):
        raise TypeError(f"{target} is not a tuple of module:Class texts")
    return [_rule(str(name)) for name in names]


def _attribute(target: str) -> object:
    module, _, name = target.partition(":")
    found: object = getattr(importlib.import_module(module), name)
    return found


def _rule(target: str) -> AnyRule:
    """One rule made, after checking that it says all that a rule has to say."""
    kind = _attribute(target)
    if not (isinstance(kind, type) and issubclass(kind, Rule)):
        raise TypeError(f"{target} is not a rule")
    missing = [name for name in _TOLD if not getattr(kind, name, None)]
    if missing or not kind.__doc__ or kind.__doc__ is Rule.__doc__:
        raise TypeError(f"{target} lacks {', '.join(missing) or 'a docstring'}")
    if kind.weight not in SEVERITIES or not _ID.fullmatch(kind.id):
        raise TypeError(f"{target} has weight {kind.weight!r} and id {kind.id!r}; expected words as in the other rules")
    return kind()


def _distinct(rules: Iterable[AnyRule]) -> tuple[AnyRule, ...]:
    owners: dict[str, AnyRule] = {}
    for rule in rules:
        for name in (rule.id, *rule.aliases):
            if name in owners:
                both = " and ".join(sorted(type(each).__module__ for each in (owners[name], rule)))
                raise InputTrouble(f"two rules have the id {name!r}, of {both}; remove one of the packages")
            owners[name] = rule
    return tuple(sorted(set(owners.values()), key=lambda rule: rule.id))
