"""Which nets ideal voltage sources tie together, and at what difference: a union-find that carries volts."""

from __future__ import annotations

from dataclasses import field

from checker.shape import filled


@filled
class Ties:
    """Nets joined by ideal sources. Each net knows its root and its voltage above that root [V]."""

    _above: dict[str, tuple[str, float]] = field(default_factory=dict)

    def root(self, net: str) -> tuple[str, float]:
        """Root of a net and v(net) - v(root) [V]."""
        path: list[tuple[str, float]] = []
        while net in self._above:
            parent, volts = self._above[net]
            path.append((net, volts))
            net = parent
        total = 0.0
        for name, volts in reversed(path):
            total += volts
            self._above[name] = (net, total)
        return net, total

    def difference(self, first: str, second: str) -> float | None:
        """v(first) - v(second) [V] where sources fix it, else None."""
        root_1, volts_1 = self.root(first)
        root_2, volts_2 = self.root(second)
        return volts_1 - volts_2 if root_1 == root_2 else None

    def join(self, first: str, second: str, volts: float) -> None:
        """Fix v(first) - v(second) = volts; the two must not be tied yet."""
        root_1, volts_1 = self.root(first)
        root_2, volts_2 = self.root(second)
        self._above[root_1] = (root_2, volts + volts_2 - volts_1)
