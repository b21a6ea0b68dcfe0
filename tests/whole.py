"""A board from two texts, all the way through the readers: for tests of what comes after them."""

from __future__ import annotations

import datetime
import tempfile
from pathlib import Path

from checker.board import Board
from checker.pipeline import Outcome, check_board, ready
from checker.setup import Setup

DAY = datetime.date(2025, 1, 1)
MODELS = """.model QN NPN(IS=1e-14 BF=200 VAF=100 TF=0.4n CJE=8p CJC=4p RB=10)
.model QP PNP(IS=1e-14 BF=200 VAF=100 TF=0.4n CJE=8p CJC=4p RB=10)
"""
"""Two invented transistors of equal figures."""


def intent_text(
    *ports: tuple[str, str, str], band: tuple[str, str] | None = ("300 Hz", "3 kHz"), more: str = ""
) -> str:
    """An intent file. `ports`: (net, role, impedance or ""); port names are the nets in lower case."""
    out = [f'[band]\nlow = "{band[0]}"\nhigh = "{band[1]}"\n'] if band else []
    out.append(more)
    for net, role, impedance in ports:
        out.append(f'[[port]]\nname = "{net.lower()}"\nnet = "{net}"\nrole = "{role}"\n')
        out.append(f'impedance = "{impedance}"\n' if impedance else "")
    return "".join(out)


def written(folder: Path, netlist: str, intent: str, name: str = "board.cir") -> Path:
    """Both files in a folder; the netlist's path."""
    path = folder / name
    path.write_text(netlist, "utf-8")
    path.with_suffix(".intent.toml").write_text(intent, "utf-8")
    return path


def set_up_from(netlist: str, intent: str = "", *, title: bool = True) -> Setup:
    """A set-up board. `netlist` without title line and `.end` unless `title` is False; `MODELS` are added."""
    with tempfile.TemporaryDirectory() as folder:
        text = f"* board\n{netlist.strip()}\n{MODELS}.end\n" if title else netlist
        return ready(written(Path(folder), text, intent), None)


def board_from(netlist: str, intent: str = "") -> Board:
    """The nominal board alone."""
    setup = set_up_from(netlist, intent)
    return setup.board(setup.scenarios[:1])


def outcome_from(netlist: str, intent: str = "", *, title: bool = True) -> Outcome:
    """A finished check."""
    with tempfile.TemporaryDirectory() as folder:
        text = f"* board\n{netlist.strip()}\n{MODELS}.end\n" if title else netlist
        return check_board(written(Path(folder), text, intent), None, today=DAY)


def mirrored(netlist: str) -> str:
    """The same circuit with every polarity reversed: NPN for PNP, and sources, diodes turned round."""
    out = []
    for line in netlist.strip().splitlines():
        words = line.split()
        if words[0][0] in "VID" and not words[0].startswith("VIN"):
            words[1], words[2] = words[2], words[1]
        words = [{"QN": "QP", "QP": "QN"}.get(word, word) for word in words]
        out.append(" ".join(words))
    return "\n".join(out) + "\n"
