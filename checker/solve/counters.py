"""Operation counters: what a run cost in solves and evaluations, the same on every machine."""

from __future__ import annotations

from dataclasses import asdict

from checker.shape import filled


@filled
class Counters:
    """Counts since the last `reset`: linear solves (matrices), factorisations or inversions (matrices), device
    evaluations (devices times scenarios), Newton iterations (batched passes)."""

    solves: int = 0
    factorisations: int = 0
    device_evaluations: int = 0
    newton_passes: int = 0

    def reset(self) -> None:
        """Set every count to zero."""
        self.solves = self.factorisations = self.device_evaluations = self.newton_passes = 0

    def snapshot(self) -> dict[str, int]:
        """The counts by name."""
        return asdict(self)


COUNTERS = Counters()
