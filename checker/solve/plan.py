"""The numbering of a DC solve: known nodes, unknowns, islands, and where every stamp goes.

A node is *known* when ideal sources tie it to ground. The rest falls into islands: nodes joined by parts that
carry direct current. Unknowns (node voltages and the branch currents of floating sources and inductors) are ordered
island by island, islands of one size side by side, so that equal sizes form one stack (S, k, n, n).
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from typing import TYPE_CHECKING

import numpy as np

from checker.arrays import BoolArray, IntArray
from checker.circuit.types import NO_DEVICES, Circuit, Devices
from checker.devices.family import FAMILIES, Family
from checker.shape import frozen

if TYPE_CHECKING:
    from checker.solve.four_poles import Branch


@frozen
class Placed:
    """A device table with inner nodes: `nodes` int64 (n, k) into the extended node list (nets, then inner nodes)."""

    table: Devices
    nodes: IntArray
    model: Family


@frozen
class Tree:
    """How a known node's voltage follows: v[node] = v[parent] + sign * voltages.value[:, source]; in order."""

    node: int
    parent: int
    source: int
    sign: float


@frozen
class IslandPlan:
    """One island: extended node indices, branch rows, and why it cannot be solved (empty if it can). `own`: branch
    currents of controlled sources and lines (`four_poles.branches`); `active`: whether one of these stands in it."""

    nodes: tuple[int, ...]
    voltages: tuple[int, ...]
    inductors: tuple[int, ...]
    own: tuple[int, ...] = ()
    active: bool = False
    trouble: str = ""

    @property
    def size(self) -> int:
        """Number of unknowns."""
        return len(self.nodes) + len(self.voltages) + len(self.inductors) + len(self.own)


@frozen
class Plan:
    """All of it. `n_nodes` counts nets and inner nodes; `unknown` int64 (n_nodes,) gives each node's place in the
    unknown vector, -1 where known or not solved; `groups` = (first unknown, number of islands, size). `placed`: the
    device families that the board has, in the order of `FAMILIES`."""

    n_nodes: int
    placed: Mapping[str, Placed]
    known: tuple[Tree, ...]
    is_known: BoolArray
    islands: tuple[IslandPlan, ...]
    unknown: IntArray
    v_row: IntArray
    l_row: IntArray
    own_row: IntArray
    groups: tuple[tuple[int, int, int], ...]
    n_unknown: int
    isolated: tuple[int, ...]


class Sets:
    """Disjoint sets over node indices."""

    def __init__(self, n: int) -> None:
        self.parent = list(range(n))

    def find(self, a: int) -> int:
        while self.parent[a] != a:
            self.parent[a] = self.parent[self.parent[a]]
            a = self.parent[a]
        return a

    def join(self, a: int, b: int) -> bool:
        """Join two sets; False where they already were one."""
        a, b = self.find(a), self.find(b)
        self.parent[b] = a
        return a != b


def _place(table: Devices, model: Family, first: int) -> tuple[Placed, int]:
    """Give inner nodes to the devices whose lead resistance is not zero."""
    nodes = np.zeros((len(table.names), model.TERMINALS), dtype=np.int64)
    nodes[:, : model.OUTER] = table.nodes
    for name, outer, inside in model.INNER:
        has = np.any(table.params[name] > 0.0, axis=0)
        nodes[:, inside] = np.where(has, first + np.cumsum(has) - 1, nodes[:, outer])
        first += int(has.sum())
    return Placed(table=table, nodes=nodes, model=model), first


def _grow_known(circuit: Circuit, n: int) -> tuple[tuple[Tree, ...], BoolArray, list[int]]:
    """Follow ideal sources from ground. Returns the tree, the known mask, and the sources left over."""
    is_known = np.zeros(n, dtype=bool)
    is_known[0] = True
    kept = sorted({int(j) for j in circuit.four_poles.sense if j >= 0})
    pending = [j for j in range(len(circuit.voltages.names)) if j not in kept]
    tree: list[Tree] = []
    grown = True
    while grown:
        grown = False
        for source in list(pending):
            a, b = (int(x) for x in circuit.voltages.nodes[source])
            if is_known[a] == is_known[b]:
                continue
            node, parent, sign = (a, b, 1.0) if is_known[b] else (b, a, -1.0)
            tree.append(Tree(node=node, parent=parent, source=source, sign=sign))
            is_known[node] = True
            pending.remove(source)
            grown = True
    return tuple(tree), is_known, sorted([*pending, *kept])


def _conductors(circuit: Circuit, placed: Mapping[str, Placed]) -> Iterator[tuple[int, int]]:
    """Every pair of nodes joined for direct current."""
    for table in (circuit.resistors, circuit.inductors, circuit.voltages):
        for a, b in table.nodes.tolist():
            yield a, b
    for each in placed.values():
        for row in each.nodes.tolist():
            for a, b in each.model.PATHS:
                yield row[a], row[b]
    if circuit.four_poles.names:
        from checker.solve.four_poles import conductors

        yield from conductors(circuit)


def _controls(circuit: Circuit, placed: Mapping[str, Placed]) -> Iterator[tuple[int, int]]:
    """Every pair of nodes of which the first steers the second and draws nothing."""
    for each in placed.values():
        for row in each.nodes.tolist():
            for a, b in each.model.CONTROLS:
                yield row[a], row[b]
    if circuit.four_poles.names:
        from checker.solve.four_poles import steering

        yield from steering(circuit)


def _conflict(circuit: Circuit, tree: tuple[Tree, ...], is_known: BoolArray, left: list[int]) -> str:
    """A source that says otherwise than the sources already followed: names it, or is empty."""
    volts = {0: 0.0}
    for step in tree:
        volts[step.node] = volts[step.parent] + step.sign * float(circuit.voltages.value[0, step.source])
    for source in left:
        a, b = (int(x) for x in circuit.voltages.nodes[source])
        if is_known[a] and is_known[b]:
            wanted = float(circuit.voltages.value[0, source])
            if abs(volts[a] - volts[b] - wanted) > 1e-9 * max(1.0, abs(wanted)):
                return f"{circuit.voltages.names[source]} contradicts the other ideal voltage sources"
    table = circuit.four_poles
    for k, kind in enumerate(table.kinds):
        if kind in ("E", "H") and is_known[table.nodes[k, :2]].all():
            return f"{table.names[k]} closes a loop of ideal voltage sources"
    return ""


def make_plan(circuit: Circuit) -> Plan:
    """The DC numbering of a circuit; the same for all its scenarios."""
    n = len(circuit.nets)
    placed: dict[str, Placed] = {}
    for kind, model in FAMILIES.items():
        if circuit.devices.get(kind, NO_DEVICES).names:
            placed[kind], n = _place(circuit.devices[kind], model(), n)
    tree, is_known, left = _grow_known(circuit, n)
    islands, isolated = _islands(circuit, placed, tree, is_known, left, n)
    return _number(circuit, placed, tree, is_known, islands, isolated, n)


def _islands(
    circuit: Circuit,
    placed: Mapping[str, Placed],
    tree: tuple[Tree, ...],
    is_known: BoolArray,
    left: list[int],
    n: int,
) -> tuple[list[IslandPlan], tuple[int, ...]]:
    sets = Sets(n)
    anchored: set[int] = set()
    touched: set[int] = set()
    pairs = list(_conductors(circuit, placed))
    for a, b in pairs:
        touched.update((a, b))
        if not is_known[a] and not is_known[b]:
            sets.join(a, b)
    for a, b in pairs:
        if a != b and is_known[a] != is_known[b]:
            anchored.add(sets.find(b if is_known[a] else a))
    free = [node for node in range(n) if not is_known[node]]
    adrift = [node for node in free if node in touched and sets.find(node) not in anchored]
    steering = [(a, b) for a, b in _controls(circuit, placed) if not is_known[a]]
    for a, b in steering:
        # What a gate steers must stand in one matrix with it, though no current ties the two.
        if not is_known[b] and a in touched:
            sets.join(a, b)
    members: dict[int, list[int]] = {}
    for node in free:
        if node in touched:
            members.setdefault(sets.find(node), []).append(node)
    isolated = tuple(node for node in free if node not in touched)
    blocked = _blocked(circuit, sets, is_known)
    loose = _loose(circuit, sets, adrift, [(a, b) for a, b in steering if a not in touched])
    loop = _conflict(circuit, tree, is_known, left)
    branches = _own_branches(circuit)
    linked = set(circuit.four_poles.nodes.ravel().tolist())
    out = []
    for root, nodes in members.items():
        inside = set(nodes)
        own = tuple(k for k, each in enumerate(branches) if inside & set(circuit.four_poles.nodes[each.owner].tolist()))
        v_rows, l_rows, trouble = _branches(circuit, left, inside, is_known, [branches[k] for k in own])
        trouble = blocked.get(root, "") or trouble or loose.get(root, "") or loop
        active = bool(inside & linked)
        out.append(
            IslandPlan(nodes=tuple(nodes), voltages=v_rows, inductors=l_rows, own=own, active=active, trouble=trouble)
        )
    return out, isolated


def _loose(circuit: Circuit, sets: Sets, adrift: list[int], open_gates: list[tuple[int, int]]) -> dict[int, str]:
    """Islands without an answer because a net floats: its own, or that of a gate which steers it."""
    out: dict[int, str] = {}
    for node in adrift:
        name = circuit.nets[node] if node < len(circuit.nets) else "a net"
        out.setdefault(sets.find(node), f"no DC path ties {name} to ground or a supply")
    for gate, steered in open_gates:
        out.setdefault(sets.find(steered), f"no DC path sets the gate net {circuit.nets[gate]}")
    return out


def _own_branches(circuit: Circuit) -> tuple[Branch, ...]:
    if not circuit.four_poles.names:
        return ()
    from checker.solve.four_poles import branches

    return branches(circuit)


def _blocked(circuit: Circuit, sets: Sets, is_known: BoolArray) -> dict[int, str]:
    """Islands that touch a part which cannot be solved with."""
    index = {net: i for i, net in enumerate(circuit.nets)}
    out: dict[int, str] = {}
    for unknown in circuit.unknowns:
        if not unknown.blocks_dc:
            continue
        for net in unknown.nets:
            node = index.get(net)
            if node is not None and not is_known[node]:
                pin = f" pin {unknown.pin}" if unknown.pin else ""
                where = f"{unknown.ref}{pin} on {net}: " if unknown.ref else ""
                out.setdefault(sets.find(node), f"{where}{unknown.datum} is not known")
    return out


def _branches(
    circuit: Circuit, left: list[int], inside: set[int], is_known: BoolArray, own: list[Branch]
) -> tuple[tuple[int, ...], tuple[int, ...], str]:
    """Branch-current unknowns of an island. An inductor that closes a loop of zero-resistance parts gets none: how
    direct current divides there is not determined, the voltages are."""
    merged, strict = Sets(len(is_known)), Sets(len(is_known))
    trouble = ""
    v_rows: list[int] = []
    l_rows: list[int] = []
    for each in own:
        ends = tuple(0 if is_known[x] else int(x) for x in circuit.four_poles.nodes[each.owner, :2])
        if each.ideal and not merged.join(ends[0], ends[1]):
            trouble = f"{circuit.four_poles.names[each.owner]} closes a loop of ideal voltage sources"
    for table, chosen, rows in (
        (circuit.voltages, left, v_rows),
        (circuit.inductors, range(len(circuit.inductors.names)), l_rows),
    ):
        for j in chosen:
            a, b = (int(x) for x in table.nodes[j])
            if a == b or (a not in inside and b not in inside):
                continue
            ends = tuple(0 if is_known[x] else x for x in (a, b))
            if merged.join(*ends):
                strict.join(a, b)
                rows.append(j)
            elif table is circuit.voltages:
                trouble = f"{table.names[j]} closes a loop of ideal voltage sources"
            elif strict.join(a, b):
                trouble = f"{table.names[j]} shorts two known voltages together for direct current"
    return tuple(v_rows), tuple(l_rows), trouble


def _number(
    circuit: Circuit,
    placed: Mapping[str, Placed],
    tree: tuple[Tree, ...],
    is_known: BoolArray,
    islands: list[IslandPlan],
    isolated: tuple[int, ...],
    n: int,
) -> Plan:
    solvable = sorted((i for i in islands if not i.trouble), key=lambda i: (i.size, i.nodes))
    unknown = np.full(n, -1, dtype=np.int64)
    v_row = np.full(len(circuit.voltages.names), -1, dtype=np.int64)
    l_row = np.full(len(circuit.inductors.names), -1, dtype=np.int64)
    own_row = np.full(len(_own_branches(circuit)), -1, dtype=np.int64)
    groups: list[tuple[int, int, int]] = []
    at = 0
    for island in solvable:
        if groups and groups[-1][2] == island.size:
            first, count, size = groups[-1]
            groups[-1] = (first, count + 1, size)
        else:
            groups.append((at, 1, island.size))
        rows = ((unknown, island.nodes), (v_row, island.voltages), (l_row, island.inductors), (own_row, island.own))
        for target, members in rows:
            for member in members:
                target[member] = at
                at += 1
    ordered = tuple(solvable) + tuple(i for i in islands if i.trouble)
    return Plan(
        n_nodes=n,
        placed=placed,
        known=tree,
        is_known=is_known,
        islands=ordered,
        unknown=unknown,
        v_row=v_row,
        l_row=l_row,
        own_row=own_row,
        groups=tuple(groups),
        n_unknown=at,
        isolated=isolated,
    )
