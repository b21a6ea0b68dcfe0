"""Which stages a part belongs to: a passive part to the devices it is nearest to, with the supply, ground and the links
between stages as borders.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping

from checker.record import Report, Stage, natural

FILTERED = 0.1
"""A net behind a resistor or coil, with a capacitor, within this share of its rail is a filtered supply."""
DEVICES = frozenset({"bipolar", "fet"})


def owners(report: Report) -> dict[str, tuple[str, ...]]:
    """Part to the ids of its stages, none for a part without any (a supply part has all that it feeds)."""
    supplies = _supplies(report)
    borders = supplies | {rail.net for rail in report.rails} | {report.ground}
    links = {link.part for stage in report.stages for link in stage.links if link.part}
    on_net = _stages_on_nets(report, borders)
    touching = _touching(report, borders, links)
    found: dict[str, tuple[str, ...]] = {}
    for ref in report.parts:
        found[ref] = (
            _of_device(report, ref) or _of_link(report, ref) or _nearest(report, ref, borders, on_net, touching)
        )
    for ref, part in report.parts.items():
        fed = supplies & set(part.pins.values())
        if not found[ref] and fed and part.kind not in DEVICES:
            found[ref] = _fed(report, fed, found)
    return found


def _of_device(report: Report, ref: str) -> tuple[str, ...]:
    return tuple(stage.id for stage in report.stages if stage.id == ref or stage.id.rpartition(".")[0] == ref)


def _of_link(report: Report, ref: str) -> tuple[str, ...]:
    """A link belongs to the stage it feeds, the last one to the stage that drives the port."""
    for side in ("input", "output"):
        found = tuple(
            stage.id for stage in report.stages for link in stage.links if link.part == ref and link.side == side
        )
        if found:
            return found
    return ()


def _nearest(
    report: Report,
    ref: str,
    borders: set[str],
    on_net: Mapping[str, tuple[str, ...]],
    touching: Mapping[str, list[str]],
) -> tuple[str, ...]:
    """The stages on the nearest nets that have any, walking through passive parts."""
    seen: set[str] = set()
    edge = set(report.parts[ref].pins.values()) - borders
    while edge:
        here = {stage for net in edge for stage in on_net.get(net, ())}
        if here:
            return tuple(sorted(here, key=natural))
        seen |= edge
        beyond = {net for at in edge for other in touching.get(at, ()) for net in report.parts[other].pins.values()}
        edge = beyond - seen - borders
    return ()


def _stages_on_nets(report: Report, borders: set[str]) -> dict[str, tuple[str, ...]]:
    """Net to the stages that own what else is on it: where one drives another directly, the one that drives."""
    on: dict[str, list[Stage]] = {}
    for stage in report.stages:
        for net in _device_nets(report, stage) - borders:
            on.setdefault(net, []).append(stage)
    for port in report.ports:
        linked = [each for each in report.stages if any(link.other == port.name for link in each.links)]
        if linked and port.net not in on and port.net not in borders:
            on[port.net] = linked
    return {net: tuple(stage.id for stage in _drivers(net, stages) or stages) for net, stages in on.items()}


def _drivers(net: str, stages: Iterable[Stage]) -> list[Stage]:
    return [stage for stage in stages if stage.exit is not None and stage.exit.net == net]


def _device_nets(report: Report, stage: Stage) -> set[str]:
    part = report.parts.get(stage.device) or report.parts.get(stage.device.rpartition(".")[0])
    return set(part.pins.values()) if part is not None else set()


def _touching(report: Report, borders: set[str], links: set[str]) -> dict[str, list[str]]:
    """Net to the passive parts on it that a walk may cross."""
    touching: dict[str, list[str]] = {}
    for ref, part in report.parts.items():
        if part.kind in DEVICES or ref in links or len(part.pins) > 3:
            continue
        for net in set(part.pins.values()) - borders:
            touching.setdefault(net, []).append(ref)
    return touching


def _supplies(report: Report) -> set[str]:
    """Nets that carry a rail's voltage behind a filter: a resistor or coil from it, and a capacitor to where nothing
    moves. What a stage drives is none, however little it drops.
    """
    rails = {rail.net: rail.volts for rail in report.rails}
    driven = {stage.exit.net for stage in report.stages if stage.exit is not None}
    series = _ends(report, "resistor", "inductor")
    shunts = _ends(report, "capacitor")
    found: set[str] = set()
    for _ in range(3):  # a filter behind a filter
        still = {report.ground, *rails}
        held = {net for ends in shunts if ends & still for net in ends}
        for ends in series:
            for net in (ends & held) - still - driven:
                volts = report.nets[net].dc_v if net in report.nets else None
                fed = [rails[end] for end in sorted(ends & rails.keys())]
                if fed and volts is not None and abs(volts - fed[0]) <= FILTERED * abs(fed[0]):
                    found.add(net)
                    rails[net] = fed[0]
    return found


def _ends(report: Report, *kinds: str) -> list[set[str]]:
    return [set(part.pins.values()) for part in report.parts.values() if part.kind in kinds]


def _fed(report: Report, nets: set[str], found: Mapping[str, tuple[str, ...]]) -> tuple[str, ...]:
    stages = {stage for ref, part in report.parts.items() if nets & set(part.pins.values()) for stage in found[ref]}
    return tuple(sorted(stages, key=natural))
