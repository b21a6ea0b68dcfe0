"""One device card: what `stageproof parts NAME` prints."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Protocol

from checker.report.clean import clean, name
from checker.report.layout import Page, finished, hanging
from checker.report.quantities import given

RATINGS = {
    "v_max_v": ("largest voltage", "V"),
    "v_control_max_v": ("largest control voltage", "V"),
    "i_max_a": ("largest current", "A"),
    "p_max_w": ("dissipation", "W"),
    "tj_max_c": ("largest junction temperature", "degC"),
    "rth_ja_kpw": ("junction to ambient", "K/W"),
}
"""Rating to its words and unit."""


class CardShown(Protocol):
    """What is printed of a card; its `ratings` have the attributes of `RATINGS`, None where unknown."""

    @property
    def name(self) -> str: ...
    @property
    def kind(self) -> str: ...
    @property
    def assumed(self) -> bool: ...
    @property
    def aliases(self) -> Sequence[str]: ...
    @property
    def ratings(self) -> object: ...
    @property
    def gain_min(self) -> float | None: ...
    @property
    def gain_max(self) -> float | None: ...
    @property
    def packages(self) -> Mapping[str, Mapping[str, str]]: ...
    @property
    def model(self) -> Mapping[str, float]: ...
    @property
    def source(self) -> str: ...
    @property
    def note(self) -> str: ...


def render_card(card: CardShown, *, width: int, colour: bool) -> str:
    """Ratings, gain, pin order, model parameters and where they come from."""
    page = Page(width=width, colour=colour)
    lines = [f"{page.paint(name(card.name), 'bold')}  {card.kind}" + ("  (assumed)" if card.assumed else "")]
    for label, text in _told(card).items():
        lines += hanging(f"  {label}".ljust(12), text, page, style="dim") if text else []
    return finished(lines)


def _told(card: CardShown) -> dict[str, str]:
    gain = f"{card.gain_min:g} to {card.gain_max:g}" if card.gain_min and card.gain_max else ""
    return {
        "also": ", ".join(map(name, card.aliases)),
        "ratings": ", ".join(_ratings(card.ratings)),
        "gain": gain,
        "pins": "; ".join(
            f"{name(package)}: " + ", ".join(f"{pin} {terminal}" for pin, terminal in sorted(pads.items()))
            for package, pads in sorted(card.packages.items())
        ),
        "model": ", ".join(f"{clean(key)}={value:.4g}" for key, value in sorted(card.model.items())),
        "source": clean(card.source),
        "note": clean(card.note),
    }


def _ratings(ratings: object) -> list[str]:
    values = ((label, getattr(ratings, key), unit) for key, (label, unit) in RATINGS.items())
    return [f"{label} {given(value, unit)}" for label, value, unit in values if value is not None]
