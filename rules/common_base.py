"""Theme common base: what only this configuration needs."""

from __future__ import annotations

from collections.abc import Iterable, Mapping

from checker.rulekit import Applies, Board, Bound, Evidence, Lever, Limit, Rule, Stage, require


class BaseNotGrounded(Rule[Stage]):
    """A common-base stage whose base is not at signal ground works into |Zbase| / (beta + 1) more at its
    emitter; with beta(f) = fT / f small at high frequency, a few ohms at the base are already felt.

    Loss = gain with the base tied to signal ground over the gain as drawn, at the band edges and f0. A
    damping resistor of some tens of ohms in the base is kept on purpose and costs less than the limit.
    """

    id = "base-not-grounded"
    summary = "the base of a common-base stage is at signal ground over the band"
    theme = "common base"
    weight = "must-fix"
    bench = "gain an order low and input impedance high; a hand near the base changes both"
    source = (
        "Zin = re' + Zbase/(beta + 1); Bell, 5th ed., examples 6.10 and 6.11 (27.5 ohm, 133 "
        "with the capacitor; 391 ohm, 8.6 without; as transcribed)"
    )
    applies = Applies(kind="stage", configurations=("common-base", "common-gate"))
    limits = (
        Limit(
            name="loss_db",
            default=1.0,
            unit="dB",
            low=0.05,
            high=20.0,
            source="XC / (beta + 1) under re'/10 is 0.8 dB: common practice, no source",
        ),
    )

    def judge(self, board: Board, subject: Stage, limits: Mapping[str, Bound]) -> Iterable[Evidence]:
        """One check of the gain that the base costs; the second half of a pair has its base driven on purpose."""
        paired = {g.id for g in board.recognition.groups if g.configuration == "differential-pair"}
        if paired & set(subject.groups):
            return ()
        bypass = [use.part for use in board.capacitors() if use.stage == subject.id and use.use == "bypass"]
        return [
            Evidence(
                check=require(board.ask("base_ground_loss_db", subject.id), "at most", limits["loss_db"]),
                subject=(*bypass[:2], subject.id),
                message=f"the {board.terms(subject.id).control} of {subject.id} is not at signal ground: {{value}} of "
                "gain is lost at {frequency}, at most {limit} wanted",
                levers=tuple(Lever(part=part, property="c_f", direction="up") for part in bypass),
            )
        ]
