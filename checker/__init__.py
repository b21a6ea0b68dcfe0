"""Stageproof: bias and small-signal checks of discrete transistor stages, from the schematic's netlist."""

__version__ = "0.1.0"
