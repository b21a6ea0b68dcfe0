"""Which of the sixty circuits needed which helper: `python -m tests.solve.helpers` prints the table."""

from __future__ import annotations

from collections import Counter

import numpy as np

from checker.solve.counters import COUNTERS
from checker.solve.newton import HELPERS
from checker.solve.operating import OperatingPoint, operating_point
from tests.solve.sixty import SIXTY

TEMPERATURES_C = (27.0, -40.0, 125.0)
KINDS: dict[str, tuple[str, ...]] = {
    "Darlington chains": (
        *(f"darlington_of_{count}" for count in (2, 3, 4, 6)),
        "darlington_switch",
        "triple_darlington_output",
    ),
    "mirrors": ("simple_mirror", "mirror_of_ten", "mirror_of_nanoamperes", "widlar", "wilson", "cascoded_mirror"),
    "bootstraps": ("bootstrapped_follower", "bootstrapped_output_stage", "bootstrapped_darlington_input"),
    "complementary outputs with a VBE multiplier": (
        "class_b_with_vbe_multiplier",
        "triple_darlington_output",
        "power_amplifier_of_ten",
    ),
    "feedback amplifiers of ten to forty": (
        "power_amplifier_of_ten",
        "operational_amplifier_of_seventeen",
        "amplifier_of_forty",
    ),
    "flip-flops": ("flip_flop", "flip_flop_held_set", "latch_of_two_inverters"),
    "Schmitt pairs": ("schmitt_pair_between_its_thresholds", "schmitt_pair_below", "schmitt_pair_above"),
    "Zener references": ("zener_reference", "zener_starved", "two_zeners_in_series", "zener_follower_regulator"),
    "JFET current sources": (
        "jfet_current_source",
        "jfet_cascode_current_source",
        "jfet_source_follower_on_a_current_source",
    ),
    "load switches": (
        "mosfet_load_switch_on",
        "mosfet_load_switch_off",
        "high_side_pmos_switch_with_npn_driver",
        "high_side_pnp_switch",
        "high_side_pnp_switch_off",
    ),
}


def helper_of(point: OperatingPoint) -> str:
    """The last rung of the ladder that any island needed."""
    return HELPERS[int(point.solved.helper.max(initial=0))]


def print_table() -> None:
    """A line a circuit, largest voltage, Newton passes and helper; then the sums at each temperature."""
    print("| circuit | largest voltage | Newton passes | helper at 27 degC | at -40 | at 125 |")
    print("|---|---|---|---|---|---|")
    sums = {t_c: Counter[str]() for t_c in TEMPERATURES_C}
    for entry in SIXTY:
        helpers = []
        for t_c in TEMPERATURES_C:
            COUNTERS.reset()
            point = operating_point(entry.bench(t_c).circuit())
            if not helpers:
                passes, volts = COUNTERS.newton_passes, float(np.nanmax(np.abs(point.v_v[0])))
            helpers.append(helper_of(point))
            sums[t_c][helpers[-1]] += 1
        print(f"| {entry.name} | {volts:.3g} V | {passes} | {' | '.join(helpers)} |")
    for t_c, count in sums.items():
        print(f"{t_c:g} degC: " + ", ".join(f"{helper} {count[helper]}" for helper in HELPERS))


if __name__ == "__main__":
    print_table()
