"""Which part of the new board is which of the old one.

Where references were kept they decide; parts that they leave open, and all of a renumbered board, are matched by
structure: by labels that know kinds, pins, rails and ports far around a part, from deep to shallow, each pair that is
found setting its neighbours apart (individualisation and refinement, the usual way to compare graphs).
"""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterable, Mapping

from checker.judge.structure import SYMMETRIC, Drawing, labels
from checker.record import Part, Report, natural

NEAR, WIDE, DEEP = 2, 4, 12
"""Steps out: the fingerprints' own, a stage's surroundings, and across a whole chain of stages."""
KEPT = 0.5
"""References count as kept where this share of the parts has equal surroundings and values under them."""
MOST_ROUNDS = 200
"""Refinements at one depth; past that equal parts are paired in the order of their references, which costs no time."""


def match_parts(old: Report, new: Report) -> dict[str, str]:
    """Old reference to new one, for every part that is in both boards."""
    return _Matching(old, new).matched()


def drawing(report: Report) -> Drawing:
    """The board without references, net names and values."""
    on: dict[str, list[str]] = {}
    for port in report.ports:
        on.setdefault(port.net, []).append(_public(port.name, report.parts))
    return Drawing(
        kinds={ref: part.kind for ref, part in report.parts.items()},
        pins={ref: part.pins for ref, part in report.parts.items()},
        known={rail.net: f"rail {rail.volts:g}" for rail in report.rails} | {report.ground: "ground"},
        ports={net: tuple(names) for net, names in on.items()},
    )


def _public(port: str, parts: Mapping[str, Part]) -> str:
    """A port's name, unless it was taken from a part and would be renumbered with it."""
    return "" if port in parts or port.partition(".")[0] in parts else port


def net_map(
    old: Mapping[str, Part], new: Mapping[str, Part], pairs: Mapping[str, str], anchors: Mapping[str, str]
) -> dict[str, str]:
    """Old net to the new one that most of its pins went to, its own name at a tie; `anchors` are known beforehand."""
    votes: dict[str, Counter[str]] = {}
    for before, after in pairs.items():
        symmetric = old[before].kind in SYMMETRIC
        there = new[after].pins
        for pin, net in old[before].pins.items():
            for candidate in set(there.values()) if symmetric else {there.get(pin, "")} - {""}:
                votes.setdefault(net, Counter())[candidate] += 1
    settled = {
        net: max(sorted(count, key=natural), key=lambda name: (count[name], name == net))
        for net, count in votes.items()
    }
    return settled | dict(anchors)


def _apart(pairs: Iterable[tuple[str, str]]) -> list[tuple[str, str]]:
    """The pairs, without those that have a part in common with an earlier one."""
    kept: dict[str, str] = {}
    for before, after in pairs:
        if before not in kept and after not in kept.values():
            kept[before] = after
    return list(kept.items())


def _in_order(pair: tuple[str, str]) -> tuple[object, ...]:
    return natural(pair[0]), natural(pair[1])


class _Matching:
    """The pairs found so far between two boards."""

    def __init__(self, old: Report, new: Report) -> None:
        self.old, self.new = old.parts, new.parts
        self.drawings = drawing(old), drawing(new)
        self.pairs: dict[str, str] = {}
        self.taken: set[str] = set()
        near = [labels(each, NEAR) for each in self.drawings]
        common = [ref for ref in self.old if ref in self.new and near[0][ref] == near[1][ref]]
        same = sum(self.old[ref].data == self.new[ref].data for ref in common)
        self.kept = same >= KEPT * max(1, min(len(self.old), len(self.new)))
        if self.kept:
            self._pair((ref, ref) for ref in common)

    def matched(self) -> dict[str, str]:
        for steps in (DEEP, WIDE):
            self._refine(steps)
        if self.kept:
            self._by_reference()
        self._by_neighbours()
        return self.pairs

    def _pair(self, pairs: Iterable[tuple[str, str]]) -> None:
        for before, after in pairs:
            self.pairs[before] = after
            self.taken.add(after)

    def _by_reference(self) -> None:
        """What has the reference and kind of a part that is left, though it was moved."""
        self._pair(
            (ref, ref)
            for ref, part in self.old.items()
            if ref not in self.pairs and ref in self.new and ref not in self.taken and self.new[ref].kind == part.kind
        )

    def _by_neighbours(self) -> None:
        """What an edit beside them keeps from having equal surroundings: parts of one kind that share the most nets,
        as far as the pairs found so far tell which net is which.
        """
        while True:
            nets = net_map(self.old, self.new, self.pairs, self._anchors())
            alike = {
                (before, after): self._shared(before, after, nets)
                for before in self.old.keys() - self.pairs.keys()
                for after in self.new.keys() - self.taken
                if self.old[before].kind == self.new[after].kind
            }
            best = max(alike.values(), default=(0, False, 0, False))
            if not best[0]:
                return
            self._pair(_apart(sorted((pair for pair, score in alike.items() if score == best), key=_in_order)))

    def _anchors(self) -> dict[str, str]:
        """Nets that are one without any part: of one voltage, or with the same port."""
        old, new = (
            {**drawn.known, **{net: "port ".join(names) for net, names in drawn.ports.items() if any(names)}}
            for drawn in self.drawings
        )
        there = {what: net for net, what in new.items()}
        return {net: net if new.get(net) == what else there[what] for net, what in old.items() if what in there}

    def _shared(self, before: str, after: str, nets: Mapping[str, str]) -> tuple[int, bool, int, bool]:
        """Shared nets that are no supply; whether all are; by name; and whether the parts are equal."""
        old, new = self.old[before], self.new[after]
        there = Counter(nets.get(net, "") for net in old.pins.values())
        shared = there & Counter(new.pins.values())
        known = self.drawings[1].known
        free = sum(count for net, count in shared.items() if net not in known)
        names = len(set(old.pins.values()) & set(new.pins.values()) - known.keys())
        return free, shared == there, names, old.data == new.data

    def _refine(self, steps: int) -> None:
        """Pair what is alone in its class; then set one pair of equals apart and look again."""
        for round_ in range(MOST_ROUNDS):
            classes = self._classes(steps)
            single = [(before[0], after[0]) for before, after in classes if len(before) == len(after) == 1]
            self._pair(single)
            if single:
                continue
            equals = [pair for pair in classes if len(pair[0]) == len(pair[1])]
            if not equals:
                return
            chosen = [self._best(*pair) for pair in equals]
            self._pair([max(chosen, key=self._likeness)] if round_ < MOST_ROUNDS - 1 else chosen)

    def _classes(self, steps: int) -> list[tuple[list[str], list[str]]]:
        """The unmatched parts of both boards by label, where both have some; in a fixed order."""
        if len(self.pairs) == len(self.old) or len(self.taken) == len(self.new):
            return []
        numbers = {before: str(index) for index, before in enumerate(self.pairs)}
        marks = numbers, {after: numbers[before] for before, after in self.pairs.items()}
        done = self.pairs.keys(), self.taken
        found: dict[str, tuple[list[str], list[str]]] = {}
        for side in (0, 1):
            named = labels(self.drawings[side], steps, marks=marks[side])
            for ref in sorted(named.keys() - done[side], key=natural):
                found.setdefault(named[ref], ([], []))[side].append(ref)
        return [pair for _, pair in sorted(found.items()) if pair[0] and pair[1]]

    def _best(self, before: list[str], after: list[str]) -> tuple[str, str]:
        return max(((a, b) for a in before for b in after), key=self._likeness)

    def _likeness(self, pair: tuple[str, str]) -> tuple[bool | int, ...]:
        """How much speaks for two parts of equal structure being the same one."""
        old, new = self.old[pair[0]], self.new[pair[1]]
        reference = pair[0] == pair[1]
        data = old.data == new.data and old.model == new.model
        nets = len(set(old.pins.values()) & set(new.pins.values()))
        return (reference, data, nets) if self.kept else (data, nets, reference)
