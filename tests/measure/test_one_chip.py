"""Two transistors on one chip: the rating is of both together."""

from __future__ import annotations

import pytest

from tests.whole import set_up_from

PINS = {"1": ("GND", "S"), "2": ("d", "D"), "3": ("g2", "G2"), "4": ("g1", "G1")}
RESISTORS = {"R1": ("g1", "GND", "100k"), "R2": ("+4V", "g2", "10k"), "R3": ("+9V", "d", "100")}


def export() -> str:
    """A dual-gate MOSFET at zero bias with 100 ohm at its drain."""
    parts = [("Q1", "BF998", "MOSFET_2G", "Package_TO_SOT_SMD:SOT-143")]
    parts += [(ref, value, "R", "") for ref, (*_, value) in RESISTORS.items()]
    nets: dict[str, list[str]] = {}
    for pin, (net, name) in PINS.items():
        nets.setdefault(net, []).append(f'(node (ref "Q1") (pin "{pin}") (pinfunction "{name}"))')
    for ref, (one, other, _) in RESISTORS.items():
        for pin, net in (("1", one), ("2", other)):
            nets.setdefault(net, []).append(f'(node (ref "{ref}") (pin "{pin}"))')
    components = "".join(
        f'(comp (ref "{ref}") (value "{value}") (footprint "{outline}") (libsource (lib "my") (part "{symbol}")))'
        for ref, value, symbol, outline in parts
    )
    listed = "".join(
        f'(net (code "{code}") (name "{net}") {"".join(nodes)})' for code, (net, nodes) in enumerate(nets.items(), 1)
    )
    return f'(export (version "E") (components {components}) (nets {listed}))'


def test_the_limit_of_one_half_is_what_the_other_leaves() -> None:
    setup = set_up_from(export(), title=False)
    board = setup.board(setup.scenarios[:1])
    power = {half: float(board.ask("power_w", half).values[0, 0].real) for half in ("Q1.A", "Q1.B")}
    assert min(power.values()) > 1e-3
    for half, other in (("Q1.A", "Q1.B"), ("Q1.B", "Q1.A")):
        limit = board.ask("power_limit_w", half)
        assert float(limit.values[0, 0].real) == pytest.approx(0.2 * (150 - 27) / 125 - power[other], rel=1e-9)
    hot = [float(board.ask("tj_c", half).values[0, 0].real) for half in power]
    assert hot[0] == hot[1] > 27.0 + 0.9 * 500.0 * sum(power.values())
