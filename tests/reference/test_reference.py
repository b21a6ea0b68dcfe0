"""The program against an independent reference that shares no code with its device models or its solver.

Agreement asked for at rest: 1e-9 relative, or 1 nV, or 1 fA, whichever is larger, on every net and every device's
terminal currents; of small signals 1e-6 relative or 1 nV of a volt's drive.
"""

from __future__ import annotations

from collections.abc import Callable
from functools import cache
from types import SimpleNamespace
from typing import Any

import mpmath as mp
import numpy as np
import pytest
from scipy import optimize

from checker.solve.operating import OperatingPoint, operating_point
from checker.solve.response import Drive, small_signal
from tests.reference.boards import ALL, WITH_SIGNAL, Board
from tests.reference.fets import Jfet, Mosfet
from tests.reference.mixed_boards import MIXED
from tests.reference.physics import Diode, Transistor

REL = 1e-9
REL_SIGNAL = 1e-6
ABS_V = 1e-9
ABS_A = 1e-15
EVERY = (*ALL, *MIXED)
each = pytest.mark.parametrize("make", EVERY, ids=[make.__name__ for make in EVERY])


def _named(board: Board, values: list[Any]) -> SimpleNamespace:
    return SimpleNamespace(**dict(zip(board.guess, values, strict=True)))


@cache
def solved(make: Callable[[], Board]) -> tuple[Board, SimpleNamespace, OperatingPoint]:
    """Reference root (scipy, then polished by mpmath at 30 digits) and the program's answer."""
    board = make()

    def rough(x: np.ndarray) -> list[float]:
        return [float(r) for r in board.dc(_named(board, [float(v) for v in x]))]

    tried = (optimize.root(rough, list(board.guess.values()), method=method, tol=1e-12) for method in ("hybr", "lm"))
    found = next((one for one in tried if np.max(np.abs(one.fun)) < 1e-3), None)
    assert found is not None, "no rough root from the guess"
    root = mp.findroot(
        lambda *x: board.dc(_named(board, list(x))), [mp.mpf(v) for v in found.x], tol=mp.mpf("1e-46"), maxsteps=30
    )
    assert max(abs(r) for r in board.dc(_named(board, list(root)))) < mp.mpf("1e-22")
    point = operating_point(board.bench.circuit())
    assert all(island.ok.all() for island in point.islands)
    return board, _named(board, list(root)), point


def _net(name: str) -> str:
    return name.rstrip("_")


def _device_keys(board: Board, x: SimpleNamespace) -> dict[str, tuple[Any, Any]]:
    return {
        key: (getattr(x, f"be{key}"), getattr(x, f"bc{key}"))
        for key, device in board.devices.items()
        if isinstance(device, Transistor)
    }


@each
def test_node_voltages_agree(make: Callable[[], Board]) -> None:
    board, x, point = solved(make)
    nets = [name for name in board.guess if name in board.bench._nets]
    assert len(nets) >= 2
    ours = np.array([point.v_v[0, point.circuit.node(net)] for net in nets])
    theirs = np.array([float(getattr(x, net)) for net in nets])
    np.testing.assert_allclose(ours, theirs, rtol=REL, atol=ABS_V)


def _currents(board: Board, x: SimpleNamespace, key: str) -> tuple[str, str, dict[str, Any]]:
    """A device's family and name in the program, and its terminal currents as in an NPN or N channel."""
    device = board.devices[key]
    if isinstance(device, Transistor):
        q = device.at(getattr(x, f"be{key}"), getattr(x, f"bc{key}"))
        return "bipolar", f"Q{key}", {"ic_a": q.ic, "ib_a": q.ib, "ie_a": -q.ie}
    if isinstance(device, Diode):
        return "diode", key.upper(), {"i_a": device.current(getattr(x, key))}
    if isinstance(device, Jfet):
        f = device.at(getattr(x, f"gs{key}"), getattr(x, f"gd{key}"))
        return "jfet", key.upper(), {"id_a": f.id, "ig_a": f.ig, "is_a": -f.out}
    f = device.at(*(getattr(x, f"{name}{key}") for name in ("gs", "ds", "bs")))
    return "mosfet", key.upper(), {"id_a": f.id, "ig_a": f.ig}


@each
def test_device_currents_agree(make: Callable[[], Board]) -> None:
    board, x, point = solved(make)
    for key in board.devices:
        family, name, wanted = _currents(board, x, key)
        sign = -1.0 if key in board.pnp else 1.0
        j = point.circuit.devices[family].names.index(name)
        for quantity, value in wanted.items():
            got = point.devices[family][quantity][0, j]
            np.testing.assert_allclose(got, sign * float(value), rtol=REL, atol=ABS_A, err_msg=f"{name} {quantity}")


def test_twenty_boards_and_every_kind_of_device() -> None:
    kinds = [{type(device) for device in make().devices.values()} for make in EVERY]
    assert len(EVERY) >= 20
    for kind in (Transistor, Diode, Jfet, Mosfet):
        assert sum(kind in found for found in kinds) >= 3
    assert sum(len(found) > 1 for found in kinds) >= 5, "mixed boards"


def _linear(board: Board, x: SimpleNamespace) -> dict[str, Any]:
    out: dict[str, Any] = {
        key: device.linear(getattr(x, key)) for key, device in board.devices.items() if isinstance(device, Diode)
    }
    for key, (vbe, vbc) in _device_keys(board, x).items():
        j = board.bench.circuit().bipolars.names.index(f"Q{key}")
        net = board.bench._nets[board.bench.circuit().bipolars.nodes[j, 0]]
        v_c = getattr(x, net) if hasattr(x, net) else mp.mpf(1)
        out[key] = board.devices[key].linear(vbe, vbc, v_c)
    return out


@pytest.mark.parametrize("make", WITH_SIGNAL, ids=[make.__name__ for make in WITH_SIGNAL])
def test_small_signal_agrees_at_three_frequencies(make: Callable[[], Board]) -> None:
    board, x, point = solved(make)
    assert board.ac is not None
    small = _linear(board, x)
    names = [*(n for n in board.guess if n not in board.devices), *board.open_at_dc]
    nets = [n for n in names if _net(n) in board.bench._nets]
    ours = small_signal(point, np.array(board.f_hz)).voltages(Drive(source=board.drive))[0]
    for f, got in zip(board.f_hz, ours, strict=True):
        theirs = _phasors(board, names, 2j * mp.pi * f, small)
        want = np.array([complex(theirs[n]) for n in nets])
        have = np.array([got[point.circuit.node(_net(n))] for n in nets])
        worst = np.abs(have - want) / np.maximum(REL_SIGNAL * np.abs(want), ABS_V)
        assert worst.max() <= 1.0, (f, nets[int(worst.argmax())], have, want)


def _phasors(board: Board, names: list[str], s: Any, small: dict[str, Any]) -> dict[str, Any]:
    """Solve the linear equations `ac` by reading off its matrix column by column."""
    assert board.ac is not None
    n = len(names)

    def at(values: list[Any]) -> list[Any]:
        assert board.ac is not None
        return board.ac(SimpleNamespace(**dict(zip(names, values, strict=True))), s, small)

    rest = at([mp.mpc(0)] * n)
    assert len(rest) == n
    matrix = mp.matrix(n, n)
    for column in range(n):
        unit = [mp.mpc(1) if j == column else mp.mpc(0) for j in range(n)]
        for row, value in enumerate(at(unit)):
            matrix[row, column] = value - rest[row]
    answer = mp.lu_solve(matrix, mp.matrix([-r for r in rest]))
    return dict(zip(names, answer, strict=True))
