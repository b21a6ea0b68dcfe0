"""The facade that rules and reports read: memoised questions over the measures of one bench."""

from __future__ import annotations

import numpy as np

# Importing a measure registers its quantities.
import checker.measure.agreement
import checker.measure.bias
import checker.measure.capacitors
import checker.measure.corners
import checker.measure.gains
import checker.measure.ports
import checker.measure.slips
import checker.measure.small_signal
import checker.measure.steadiness
import checker.measure.terminals  # noqa: F401
from checker.circuit.types import Circuit, Port, Scenario
from checker.intent.types import Intent, TargetIntent
from checker.measure.bench import Bench
from checker.measure.bias import region_words
from checker.measure.capacitors import CapacitorUse, capacitor_uses
from checker.measure.ports import gain_subject
from checker.measure.registry import REGISTRY, Subject
from checker.measure.slips import LOST_DB, larger_would_pass, slips
from checker.measure.terminals import rule_of_thumb
from checker.quantity.figure import Figure
from checker.quantity.show import show, show_value
from checker.stages.region import REGIONS
from checker.stages.terminals import NUMBER, TERMS, Terms
from checker.stages.types import Recognition, Stage
from checker.trouble import Trouble
from checker.words import Region, Terminal

QUANTITY_NAMES = tuple(sorted({name for name, subject in REGISTRY if subject in ("stage", "group", "gain")}))
"""What a target may name."""


def target_quantities() -> tuple[tuple[str, str, str, str], ...]:
    """(name, unit, subject, meaning) of all that a target may name, sorted."""
    wanted = ("stage", "group", "gain")
    found = (q for (_, subject), q in REGISTRY.items() if subject in wanted)
    return tuple(sorted((q.name, q.unit, q.subject, q.meaning) for q in found))


class Board:
    """One board with all its scenarios. `ask` answers by quantity and subject, each question once."""

    def __init__(self, bench: Bench, intent: Intent, bias_parts: dict[str, tuple[str, ...]]) -> None:
        self.bench = bench
        self.intent = intent
        self._bias_parts = bias_parts
        self._asked: dict[tuple[str, str], Figure | Trouble] = {}
        self._uses: tuple[CapacitorUse, ...] | None = None

    @property
    def circuit(self) -> Circuit:
        """The circuit with its scenario axis."""
        return self.bench.circuit

    @property
    def scenarios(self) -> tuple[Scenario, ...]:
        """Axis 0 of every figure."""
        return self.bench.scenarios

    @property
    def recognition(self) -> Recognition:
        """Stages and groups."""
        return self.bench.recognition

    @property
    def ports(self) -> tuple[Port, ...]:
        """Ports with their roles."""
        return self.bench.ports

    def kind_of(self, subject: str) -> Subject:
        """What a subject is: a stage, group, port, pair of ports or part. A port may share a part's name."""
        if any(stage.id == subject for stage in self.recognition.stages):
            return "stage"
        if any(group.id == subject for group in self.recognition.groups):
            return "group"
        if any(port.name == subject for port in self.ports):
            return "port"
        return "gain" if "->" in subject and subject not in self.bench.facts else "part"

    def ask(self, quantity: str, subject: str) -> Figure:
        """A figure. Raises CannotTell for a missing datum, KeyError for a quantity the subject does not have."""
        key = (quantity, subject)
        if key not in self._asked:
            measure = REGISTRY[quantity, self.kind_of(subject)].measure
            try:
                with np.errstate(invalid="ignore", divide="ignore"):
                    self._asked[key] = measure(self.bench, subject)
            except Trouble as trouble:
                self._asked[key] = trouble
        answer = self._asked[key]
        if isinstance(answer, Trouble):
            raise answer
        return answer

    def targets(self) -> tuple[TargetIntent, ...]:
        """What the intent wants."""
        return self.intent.targets

    def target_subject(self, target: TargetIntent) -> str:
        """The subject that a target speaks of."""
        return target.stage or target.group or gain_subject(target.source, target.to)

    def capacitors(self) -> tuple[CapacitorUse, ...]:
        """Capacitors that the signal paths need."""
        if self._uses is None:
            self._uses = capacitor_uses(self.bench)
        return self._uses

    def bias_parts(self, stage: str) -> tuple[str, ...]:
        """Resistors that set a stage's current, the most influential first."""
        return self._bias_parts.get(stage, ())

    def resistors_at(self, stage: str, terminal: Terminal) -> tuple[str, ...]:
        """Resistors of the board on a terminal's net, sorted; none on ground or a supply, which all share.

        Collector, base and emitter also stand for drain, gate and source.
        """
        node = int(self.circuit.transistors.nodes[self.bench.stage(stage).index, NUMBER[terminal]])
        if self.bench.point.plan.is_known[node]:
            return ()
        r = self.circuit.resistors
        names = (r.names[j] for j in np.flatnonzero((r.nodes == node).any(axis=1)).tolist())
        return tuple(sorted(name for name in names if name in self.circuit.parts))

    def slip(self, stage: str) -> tuple[str, str]:
        """The part whose value is off by a unit, as the stage's rest tells, and what would set it right, in a sentence;
        both empty where there is none."""
        slip = slips(self.bench).get(stage)
        fact = self.bench.facts.get(slip.part) if slip is not None else None
        if slip is None or fact is None or fact.value is None:
            return "", ""
        written, meant = (show_value(fact.value.si * factor, fact.value.unit) for factor in (1.0, 10.0**slip.decades))
        across, _, current = self.terms(stage).symbols
        rest = f"{current} {show(slip.current_a, 'A')} and {across} {show(slip.drop_v, 'V')}"
        words = f"{slip.part} is {written}, and {stage} rests wrong; with {meant} it would rest at {rest}"
        return slip.part, f"{words}: a slip of the unit?"

    def capacitor_slip(self, part: str) -> str:
        """What a capacitor that loses nearly all may have been meant to be, in a sentence; empty for no slip."""
        loss = self.ask("own_loss_db", part).values[0]
        fact = self.bench.facts.get(part)
        if not np.any(loss > LOST_DB) or fact is None or fact.value is None or not larger_would_pass(self.bench, part):
            return ""
        written, meant = show_value(fact.value.si, "F"), show_value(1e3 * fact.value.si, "F")
        return f"nothing of the band's edge passes; {meant} for {written} would pass it: a slip of the unit?"

    def terms(self, stage: str) -> Terms:
        """How the terminals and rest figures of a stage's device are called."""
        return TERMS[self.bench.family(stage)]

    def region_code(self, region: Region) -> float:
        """The value of `region_code` that stands for a region."""
        return float(REGIONS.index(region))

    def port(self, name: str) -> Port:
        """The port of that name. Raises KeyError."""
        return self.bench.port(name)

    def stage_at_port(self, name: str) -> Stage | None:
        """The stage whose link leads to the port."""
        for stage in self.recognition.stages:
            for link in (stage.input_link, stage.output_link):
                if link is not None and link.other == name:
                    return stage
        return None

    def region_words(self, stage: str, scenario: int = 0) -> str:
        """Region of a stage in a scenario; empty without bias."""
        return region_words(self.bench, stage, scenario)

    def rule_of_thumb(self, stage: str) -> dict[str, Figure]:
        """Hand figures by quantity."""
        with np.errstate(invalid="ignore", divide="ignore"):
            return rule_of_thumb(self.bench, stage)
