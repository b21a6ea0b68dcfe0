"""The rest of the board: parts without a model of their own whose pins still have a known way to act.

Imported only where a board has such parts; start-up is a feature.
"""

from __future__ import annotations

from checker.circuit.draft import Draft
from checker.circuit.loads import add_loads
from checker.circuit.logic import add_logic
from checker.circuit.opamps import add_opamps, check_supplies
from checker.circuit.switches import add_contacts

__all__ = ["add_boundaries", "add_logic", "check_supplies"]


def add_boundaries(draft: Draft) -> None:
    """Amplifiers, contacts and stated loads, in place of their loose pins; before the rails are sought."""
    add_opamps(draft)
    add_contacts(draft)
    add_loads(draft)
