"""Theme pins: does the symbol fit the part, and the part its package?"""

from __future__ import annotations

from collections.abc import Iterable, Mapping

from checker.rulekit import Applies, Board, Bound, Evidence, Rule, Stage, require


def _agrees(board: Board, stage: Stage, quantity: str, source: str) -> list[Evidence]:
    """That a yes-or-no figure about a part is no; its working is the sentence to print."""
    figure = board.ask(quantity, stage.id)
    check = require(figure, "equals", Bound.at(0.0, "", source))
    return [Evidence(check=check, subject=(stage.id,), message=figure.working.formula)]


class PinOrder(Rule[Stage]):
    """The pads of the symbol against those of the part in its package.

    A transistor soldered with two leads exchanged conducts through the wrong junctions. Cannot see footprints whose
    pads are numbered otherwise than their library says, nor parts without a card that lists the package.
    """

    id = "pin-order"
    summary = "symbol and part in this package agree about the pads"
    theme = "pins"
    weight = "must-fix"
    bench = "the stage is dead or clamps hard, and the board needs a cut and a wire, or the part a twist"
    source = "pin drawings of the data sheets, by package, as the card of the part lists them"
    applies = Applies(kind="stage")

    def judge(self, board: Board, subject: Stage, limits: Mapping[str, Bound]) -> Iterable[Evidence]:
        """One comparison."""
        return _agrees(board, subject, "pin_order_conflict", "pin drawing of the part")


class PartPolarity(Rule[Stage]):
    """The polarity of the part number against that of the symbol.

    The stage is solved with the part number's polarity, for that is what is bought. Cannot see parts without a card.
    """

    id = "part-polarity"
    summary = "symbol and part number are of one polarity"
    theme = "pins"
    weight = "must-fix"
    bench = "the transistor never turns on, or its junctions clamp the supply"
    source = "the part number decides what is soldered; the symbol decides how it is wired"
    applies = Applies(kind="stage")

    def judge(self, board: Board, subject: Stage, limits: Mapping[str, Bound]) -> Iterable[Evidence]:
        """One comparison."""
        return _agrees(board, subject, "polarity_conflict", "part number")


class PackageMismatch(Rule[Stage]):
    """Part numbers that are not made in the package of their footprint.

    Among small leaded outlines one number is often sold in several, so these are not compared with each other. Cannot
    see parts without a card.
    """

    id = "package-mismatch"
    summary = "the part is made in the package of its footprint"
    theme = "pins"
    weight = "review"
    bench = "the part that is bought does not fit the board; its twin in the other package has another number"
    source = "packages that data sheets list, from memory, as the card of the part lists them"
    applies = Applies(kind="stage")

    def judge(self, board: Board, subject: Stage, limits: Mapping[str, Bound]) -> Iterable[Evidence]:
        """One comparison."""
        return _agrees(board, subject, "package_conflict", "packages of the part")
