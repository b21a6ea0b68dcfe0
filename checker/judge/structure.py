"""What a board looks like once references, net names and values are taken away.

Labels by refinement: a part knows its kind and its nets, a net the parts and pins on it, as many steps out as asked
for. Equal surroundings give equal labels, whatever the parts are called.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping

from checker.digest import sha256_hex
from checker.shape import frozen

SYMMETRIC = frozenset({"resistor", "capacitor", "inductor", "coil"})
"""Kinds whose two pins may be swapped."""
_DIGITS = 16


@frozen
class Drawing:
    """`kinds`: part to kind; `pins`: part to pin to net; `known`: nets that stand for themselves (ground, rails by
    their volts) to what they are; `ports`: net to the names of the ports on it.
    """

    kinds: Mapping[str, str]
    pins: Mapping[str, Mapping[str, str]]
    known: Mapping[str, str]
    ports: Mapping[str, tuple[str, ...]]


def labels(
    drawing: Drawing, steps: int, *, most_pins: int | None = None, marks: Mapping[str, str] | None = None
) -> dict[str, str]:
    """Structure label of each part, `steps` out.

    Parts with more than `most_pins` pins count by kind alone: all that hangs on a large connector or circuit is not
    its neighbours' business. `marks` sets parts apart from others of their kind.
    """
    marked = marks or {}
    found = {ref: kind + marked.get(ref, "") for ref, kind in drawing.kinds.items()}
    small = [ref for ref, pins in drawing.pins.items() if most_pins is None or len(pins) <= most_pins]
    free = {net for pins in drawing.pins.values() for net in pins.values()} - drawing.known.keys()
    bare = {net: "port ".join(["", *sorted(drawing.ports.get(net, ()))]) for net in free}
    for _ in range(steps):
        touching: dict[str, list[str]] = {net: [] for net in free}
        for ref, pins in drawing.pins.items():
            for pin, net in pins.items():
                if net in touching:
                    touching[net].append(f"{_pin(drawing, ref, pin)}:{found[ref]}")
        nets = dict(drawing.known) | {net: digest([bare[net], *sorted(around)]) for net, around in touching.items()}
        found |= {ref: digest([found[ref], *_around(drawing, ref, nets)]) for ref in small}
    return found


def digest(words: Iterable[str]) -> str:
    """A short hash of texts in their order."""
    return sha256_hex("\0".join(words).encode("utf-8", "surrogatepass"))[:_DIGITS]


def _around(drawing: Drawing, ref: str, nets: Mapping[str, str]) -> list[str]:
    return sorted(f"{_pin(drawing, ref, pin)}:{nets[net]}" for pin, net in drawing.pins[ref].items())


def _pin(drawing: Drawing, ref: str, pin: str) -> str:
    return "" if drawing.kinds[ref] in SYMMETRIC else pin
