"""The order of the steps, from a netlist's path to a finished report."""

from __future__ import annotations

import datetime
from collections.abc import Mapping
from dataclasses import replace
from pathlib import Path

from checker import __version__
from checker.board import QUANTITY_NAMES, Board
from checker.cards.find import find_card
from checker.cards.types import Card
from checker.circuit.build import build_circuit
from checker.circuit.types import PartFact
from checker.constants import ZERO_CELSIUS_K
from checker.examine import examine
from checker.intent.checks import check_quantity
from checker.intent.find import find_intent
from checker.intent.read import read_intent
from checker.intent.types import Intent
from checker.judge.accept import sort_accepted
from checker.judge.discover import Rulebook, load_rules
from checker.judge.gaps import to_unchecked
from checker.judge.limits import limit_values, resolve_limits
from checker.judge.verdict import Examination, Limits
from checker.judge.wanted import check_targets
from checker.netlist.limits import Reading
from checker.netlist.read import read_netlist
from checker.netlist.types import Netlist
from checker.record import (
    Checked,
    Conditions,
    Finding,
    Report,
    SourceFile,
    Stage,
    Tool,
    WorkingLine,
    in_order,
    judged_on,
)
from checker.setup import Setup, set_up
from checker.shape import frozen
from checker.solve.counters import COUNTERS
from checker.summary.gaps import judged_apart, unknowns, unread, unsolved
from checker.summary.ledger import Ledger
from checker.summary.parts import parts
from checker.summary.stages import group_records, stage_records
from checker.summary.surroundings import cautions, gains, islands, nets, ports, rails
from checker.trouble import InputTrouble

MOST_PASSES, MOST_EVALUATIONS = 1_500, 200_000
"""Newton passes and device evaluations after which no further remedy is sought: a bound on time that is the same on
every machine. The sample board with three mistakes takes about 200 and 12,000."""
MOST_REMEDIES = 24
"""Findings for which a remedy is sought, worst first: each costs a few stacked solves."""


@frozen
class Outcome:
    """What a check leaves: the report, the workings behind its figures, and whether something internal failed."""

    report: Report
    workings: tuple[WorkingLine, ...]
    incomplete: bool


def check_board(
    netlist_path: Path,
    intent_path: Path | None,
    *,
    reading: Reading | None = None,
    today: datetime.date | None = None,
) -> Outcome:
    """Read, solve, recognise, judge, mend and report one board.

    `intent_path` None: the file beside the netlist, if any. `today` decides which acceptances still hold (default:
    the clock). `reading`: folders and limits of the readers. Raises InputTrouble for unusable input.
    """
    rulebook = load_rules()
    setup = ready(netlist_path, intent_path, reading)
    limits = resolve_limits(rulebook.rules, setup.intent)
    check_quantity(setup.intent, QUANTITY_NAMES)
    check_targets(setup.intent.targets, setup.recognition, [port.name for port in setup.ports])
    board = setup.board(setup.scenarios)
    examination = examine(board, rulebook.rules, limits)
    findings = _mended(setup, board, rulebook, limits, examination)
    day = today or datetime.datetime.now(tz=datetime.UTC).date()
    accepted = sort_accepted(findings, setup.intent, rulebook.rules, day)
    ledger = Ledger(board)
    stages = stage_records(setup, ledger)
    faults = tuple(str(failure) for failure in examination.failures)
    report = Report(
        tool=Tool(version=__version__),
        netlist=SourceFile(path=setup.netlist.path, format=setup.netlist.format, sha256=setup.netlist.sha256),
        conditions=_conditions(setup, limits),
        checked=Checked(stages=sum(_counts(stage) for stage in stages), of=len(stages)),
        incomplete=bool(faults),
        faults=faults,
        assumptions=(*setup.circuit.assumptions, *setup.recognition.assumptions, *_remarks(setup)),
        cautions=(*cautions(setup), *rulebook.cautions, *accepted.cautions),
        rails=rails(setup),
        nets=nets(setup, ledger),
        ground=setup.circuit.nets[0],
        parts=parts(setup.circuit),
        islands=islands(setup, ledger),
        stages=stages,
        groups=group_records(setup, ledger),
        ports=ports(setup, ledger),
        gains=gains(setup, ledger),
        findings=accepted.open,
        accepted=accepted.accepted,
        unchecked=(
            *unread(setup),
            *unknowns(setup),
            *unsolved(stages),
            *judged_apart(stages, to_unchecked(examination)),
        ),
        judged=_judged(examination, {stage.id for stage in stages}),
        unavailable=ledger.unavailable,
    )
    return Outcome(report=in_order(report), workings=ledger.workings, incomplete=bool(faults))


def warm_up() -> None:
    """Load what every board needs, once, before the process is forked; forks then share it."""
    import gc

    load_rules()
    find_card("2N3904")
    gc.freeze()  # or each fork's first collection would copy every page


def ready(netlist_path: Path, intent_path: Path | None, reading: Reading | None = None) -> Setup:
    """Read netlist, intent and the project's own cards, and set the board up."""
    netlist = _read(netlist_path, reading)
    where = intent_path or find_intent(netlist_path)
    return set_up(netlist, read_intent(where) if where is not None else Intent(), _own_cards(netlist_path, reading))


def _own_cards(netlist_path: Path, reading: Reading | None) -> Mapping[str, Card] | None:
    """The project's own cards: those named in `reading`, else NAME.cards.toml beside the netlist, else cards.toml; None
    where none is there."""
    names = (netlist_path.stem + ".cards.toml", "cards.toml")
    beside = (path for name in names if (path := netlist_path.with_name(name)).is_file())
    found = reading.cards if reading is not None and reading.cards is not None else next(beside, None)
    if found is None:
        return None
    from checker.cards.own import read_cards

    return read_cards(found)


def part_values(netlist_path: Path, intent_path: Path | None, reading: Reading | None = None) -> tuple[PartFact, ...]:
    """What is known of every resistor, capacitor and inductor, in the order of their names; nothing is solved."""
    netlist = _read(netlist_path, reading)
    where = intent_path or find_intent(netlist_path)
    circuit = build_circuit(netlist, read_intent(where) if where is not None else Intent())
    kinds = ("resistor", "capacitor", "inductor")
    return tuple(fact for fact in circuit.parts.values() if fact.kind in kinds)


def _read(path: Path, reading: Reading | None) -> Netlist:
    how = reading or Reading()
    netlist = read_netlist(path, include_dirs=how.folders, limits=how.limits)
    if netlist.format == "spice" and not netlist.parts:
        raise InputTrouble("holds no part, only models or subcircuits; give the netlist of a board", file=netlist.path)
    return netlist


def starter_intent(netlist_path: Path, reading: Reading | None = None) -> str:
    """A starter intent file from what the netlist shows."""
    from checker.intent.starter import starter_text  # no check needs it

    setup = set_up(_read(netlist_path, reading), Intent())
    lines = [(rail.net, float(rail.volts)) for rail in setup.circuit.rails if rail.source != "element"]
    missing = [(u.nets[0], None) for u in setup.circuit.unknowns if u.datum.startswith("volts") and u.nets]
    found = [(p.name, p.net, p.role or "input", p.reference_ohm) for p in setup.ports]
    return starter_text([*lines, *missing], found, setup.circuit.band_hz)


def _conditions(setup: Setup, limits: Limits) -> Conditions:
    return Conditions(
        temperature_c=round(float(setup.circuit.temperature_k[0]) - ZERO_CELSIUS_K, 6),
        band_hz=setup.circuit.band_hz,
        f0_hz=setup.f0_hz,
        limits=limit_values(limits),
        intent=setup.intent.path or None,
    )


def _mended(
    setup: Setup, board: Board, rulebook: Rulebook, limits: Limits, examination: Examination
) -> tuple[Finding, ...]:
    """Findings with a remedy where one was found and proved; effects of another finding get none of their own."""
    if not examination.verdicts:
        return ()  # a clean board does not pay for what only findings need
    from checker.judge.finding import to_findings

    pairs = to_findings(examination, setup.circuit)
    order = sorted(range(len(pairs)), key=lambda k: (pairs[k][1].severity != "must-fix", k))
    sought = {k for k in order if pairs[k][1].caused_by is None and pairs[k][0].evidence.levers}
    chosen = set(sorted(sought, key=order.index)[:MOST_REMEDIES])
    if not chosen:
        return tuple(finding for _, finding in pairs)
    from checker.remedy.search import propose

    mended: dict[int, Finding] = {}
    passes, evaluations = COUNTERS.newton_passes + MOST_PASSES, COUNTERS.device_evaluations + MOST_EVALUATIONS
    for k in (k for k in order if k in chosen):
        if COUNTERS.newton_passes > passes or COUNTERS.device_evaluations > evaluations:
            break
        verdict, finding = pairs[k]
        remedy = propose(verdict, board, rulebook.rules, limits, setup.board, setup.corners_with)
        if remedy is not None:
            mended[k] = replace(finding, remedy=remedy)
    return tuple(mended.get(k, finding) for k, (_, finding) in enumerate(pairs))


def _counts(stage: Stage) -> bool:
    """A stage counts as checked if it has a certified operating point."""
    return stage.bias is not None


def _judged(examination: Examination, stages: set[str]) -> dict[str, tuple[str, ...]]:
    """Which rules had an answer, on what."""
    found: dict[str, dict[str, None]] = {}
    for each in examination.judged:
        found.setdefault(each.rule.id, {})[judged_on(each.evidence.subject[:3], stages)] = None
    return {rule: tuple(on) for rule, on in found.items()}


def _remarks(setup: Setup) -> tuple[str, ...]:
    """What the reader passed over on purpose; what it did not understand is among the unchecked."""
    return tuple(
        f"{remark.origin.file}:{remark.origin.line}: {remark.text}" if remark.origin.line else remark.text
        for remark in setup.netlist.remarks
        if not remark.lost
    )
