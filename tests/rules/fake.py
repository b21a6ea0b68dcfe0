"""A board with given figures, for rules without a solver."""

from __future__ import annotations

from dataclasses import dataclass, field, replace

import numpy as np

from checker.circuit.types import Circuit, PartFact, Port, Scenario
from checker.quantity.figure import Figure, Working
from checker.quantity.value import Origin
from checker.rulekit import CannotTell, CapacitorUse, TargetIntent
from checker.stages.region import REGIONS
from checker.stages.terminals import TERMS, Terms
from checker.stages.types import Recognition, Stage
from checker.words import Configuration, Region, Terminal
from tests.bench import Bench

NOMINAL = Scenario(name="nominal")
CORNERS = (NOMINAL, Scenario(name="hot", kind="corner"), Scenario(name="cold", kind="corner"))
NOWHERE = Origin(kind="netlist")


def figure(values: object, unit: str = "V", quantity: str = "q", **more: object) -> Figure:
    """Values (S,) or (S, F)."""
    table = np.asarray(values, dtype=complex if np.iscomplexobj(values) else float)
    return Figure(
        quantity=quantity,
        subject=str(more.pop("subject", "Q1")),
        values=table[:, None] if table.ndim == 1 else table,
        unit=unit,
        working=Working(formula="given", source="a test"),
        **more,  # type: ignore[arg-type]
    )


def stage(ident: str = "Q1", configuration: Configuration = "common-emitter", **more: object) -> Stage:
    """A signal stage."""
    return Stage(
        id=ident,
        device=ident,
        index=0,
        configuration=configuration,
        role="signal",
        confidence=1.0,
        **more,  # type: ignore[arg-type]
    )


@dataclass(frozen=True, slots=True, kw_only=True)
class Use:
    """A capacitor's job."""

    part: str
    use: str
    stage: str


def small_circuit() -> Circuit:
    """One stage: supply, divider, collector and emitter resistor, one capacitor; with facts of each part."""
    bench = Bench()
    bench.v("VCC", "vcc", "0", 12.0)
    bench.r("R1", "vcc", "b", 27e3)
    bench.r("R2", "b", "0", 5.6e3)
    bench.r("R3", "vcc", "c", 4.7e3)
    bench.r("R4", "e", "0", 1e3)
    bench.c("C1", "b", "in", 1e-6)
    bench.q("Q1", "c", "b", "e")
    return bench.circuit()


@dataclass
class FakeBoard:
    """Answers `ask` from `figures` by (quantity, subject); a quantity not given cannot be told."""

    figures: dict[tuple[str, str], Figure] = field(default_factory=dict)
    stages: tuple[Stage, ...] = (stage(),)
    scenarios: tuple[Scenario, ...] = CORNERS
    uses: tuple[CapacitorUse, ...] = ()
    ports: tuple[Port, ...] = ()
    wanted: tuple[TargetIntent, ...] = ()
    circuit: Circuit = field(default_factory=small_circuit)
    at_port: dict[str, Stage] = field(default_factory=dict)

    @property
    def recognition(self) -> Recognition:
        """The stages given."""
        return Recognition(stages=self.stages, groups=(), paths=())

    def ask(self, quantity: str, subject: str) -> Figure:
        """The figure given."""
        try:
            return replace(self.figures[quantity, subject], quantity=quantity, subject=subject)
        except KeyError:
            raise CannotTell(f"{quantity} of {subject}", "a figure in the test") from None

    def targets(self) -> tuple[TargetIntent, ...]:
        """The targets given."""
        return self.wanted

    def capacitors(self) -> tuple[CapacitorUse, ...]:
        """The uses given."""
        return self.uses

    def slip(self, _stage: str) -> tuple[str, str]:
        """No slip."""
        return "", ""

    def capacitor_slip(self, _part: str) -> str:
        """No slip."""
        return ""

    def bias_parts(self, stage: str) -> tuple[str, ...]:  # noqa: ARG002
        """The divider."""
        return ("R2", "R1")

    def resistors_at(self, stage: str, terminal: Terminal) -> tuple[str, ...]:  # noqa: ARG002
        """As in `small_circuit`."""
        return {"collector": ("R3",), "base": ("R1", "R2"), "emitter": ("R4",)}[terminal]

    def terms(self, stage: str) -> Terms:  # noqa: ARG002
        """Every stage given is a bipolar."""
        return TERMS["bipolar"]

    def region_code(self, region: Region) -> float:
        """As the board has it."""
        return float(REGIONS.index(region))

    def port(self, name: str) -> Port:
        """The port given."""
        return next(port for port in self.ports if port.name == name)

    def stage_at_port(self, name: str) -> Stage | None:
        """The stage given for the port."""
        return self.at_port.get(name)


def fact(ref: str, kind: str, line: int = 1, **nets: str) -> PartFact:
    """What is known of a part."""
    where = Origin(kind="netlist", file="a.cir", line=line)
    return PartFact(ref=ref, kind=kind, terminals=nets, origin=where)  # type: ignore[arg-type]
