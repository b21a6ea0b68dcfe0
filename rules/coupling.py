"""Theme coupling: capacitors judged by the loss that is their own at the band edges, never by a corner
alone.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping

from checker.rulekit import Applies, Board, Bound, CapacitorUse, Evidence, Lever, Limit, Rule, require

_LOSS = Limit(
    name="loss_db",
    default=1.0,
    unit="dB",
    low=0.01,
    high=20.0,
    source="1 dB for one capacitor leaves three of them within 3 dB: common practice, no source",
)


def _loss(board: Board, use: CapacitorUse, limits: Mapping[str, Bound], message: str) -> list[Evidence]:
    """The capacitor's own loss against the limit, at whichever band edge it is larger."""
    return [
        Evidence(
            check=require(board.ask("own_loss_db", use.part), "at most", limits["loss_db"]),
            subject=(use.part, use.stage),
            message=message,
            effect=board.capacitor_slip(use.part),
            levers=(Lever(part=use.part, property="c_f", direction="up"),),
        )
    ]


class CouplingLoss(Rule[CapacitorUse]):
    """A coupling capacitor too small for the resistance around it loses the low end of the band, and turns
    its phase.

    Own loss = 20 log10 |T with it shorted / T| at the band edges; alone, with R in all around it, 10
    log10(1 + 1/(2 pi f R C)^2). A high-pass made on purpose looks the same; the declared band tells them
    apart.
    """

    id = "coupling-loss"
    summary = "a coupling capacitor passes the whole band"
    theme = "coupling"
    weight = "must-fix"
    bench = "the low end of the band is weak and early in phase; pulses and video fields tilt"
    source = "exact solution with the capacitor shorted; rule of thumb XC = R/10 (Bell, 5th ed., ch. 12, from memory)"
    applies = Applies(kind="capacitor")
    limits = (_LOSS,)

    def judge(self, board: Board, subject: CapacitorUse, limits: Mapping[str, Bound]) -> Iterable[Evidence]:
        """One check a coupling capacitor."""
        if subject.use != "coupling":
            return ()
        message = (
            f"coupling capacitor {subject.part} loses {{value}} at {{frequency}}, at most {{limit}} is allowed to it"
        )
        return _loss(board, subject, limits, message)


class BypassLoss(Rule[CapacitorUse]):
    """An emitter bypass sized against the emitter resistor, not against re' (some tens of ohms), takes the
    gain away at the low end: a tenth of RE is the well-known shortcut, and too small by RE / re'.

    Own loss = 20 log10 |T with it shorted / T| at the band edges; f = 1/(2 pi CE (RE || (re' +
    Rs/(beta+1)))). The base capacitor of a common-base stage is the matter of base-not-grounded.
    """

    id = "bypass-loss"
    summary = "a bypass capacitor holds its node at signal ground over the whole band"
    theme = "coupling"
    weight = "must-fix"
    bench = "gain falls towards the low end of the band, long before the coupling capacitors would explain it"
    source = "exact solution with the capacitor shorted; Bell, 5th ed., example 12.1 (as transcribed)"
    applies = Applies(
        kind="capacitor",
        configurations=(
            "common-emitter",
            "common-collector",
            "common-source",
            "common-drain",
            "phase-splitter",
            "current-source",
            "unclassified",
        ),
    )
    limits = (_LOSS,)

    def judge(self, board: Board, subject: CapacitorUse, limits: Mapping[str, Bound]) -> Iterable[Evidence]:
        """One check a bypass capacitor."""
        if subject.use != "bypass":
            return ()
        message = (
            f"bypass capacitor {subject.part} costs {{value}} of gain at {{frequency}}, at most {{limit}} is allowed"
        )
        return _loss(board, subject, limits, message)
