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
.model JN NJF(VTO=-3 BETA=1m LAMBDA=0.01 IS=1e-14 CGS=4p CGD=3p)
.model JP PJF(VTO=-3 BETA=1m LAMBDA=0.01 IS=1e-14 CGS=4p CGD=3p)
.model MN NMOS(VTO=2 KP=50m LAMBDA=0.01 W=1 L=1 CGSO=30p CGDO=5p)
.model MP PMOS(VTO=-2 KP=50m LAMBDA=0.01 W=1 L=1 CGSO=30p CGDO=5p)
"""
"""Invented transistors, those of one kind of equal figures."""


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


OTHER = {"QN": "QP", "QP": "QN", "JN": "JP", "JP": "JN", "MN": "MP", "MP": "MN"}


def mirrored(netlist: str) -> str:
    """The same circuit with every polarity reversed: NPN for PNP, N channel for P, and sources, diodes turned round."""
    out = []
    for line in netlist.strip().splitlines():
        words = line.split()
        if words[0][0] in "VID" and not words[0].startswith("VIN"):
            words[1], words[2] = words[2], words[1]
        words = [OTHER.get(word, word) for word in words]
        out.append(" ".join(words))
    return "\n".join(out) + "\n"
