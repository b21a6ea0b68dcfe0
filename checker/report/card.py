"""One device card: what `stageproof parts NAME` prints."""

from __future__ import annotations

from dataclasses import fields

from checker.cards.types import Card
from checker.report.clean import clean, name
from checker.report.layout import Page, finished, hanging
from checker.report.quantities import given, unit_of, words

_RATINGS = {
    "v_max_v": "largest voltage",
    "v_control_max_v": "largest control voltage",
    "i_max_a": "largest current",
    "p_max_w": "dissipation",
    "tj_max_c": "largest junction temperature",
}


def render_card(card: Card, *, width: int, colour: bool) -> str:
    """Ratings, gain, pin order, model parameters and where they come from."""
    page = Page(width=width, colour=colour)
    lines = [f"{page.paint(name(card.name), 'bold')}  {card.kind}" + ("  (assumed)" if card.assumed else "")]
    for label, text in _told(card).items():
        lines += hanging(f"  {label}".ljust(12), text, page, style="dim") if text else []
    return finished(lines)


def _told(card: Card) -> dict[str, str]:
    gain = f"{card.gain_min:g} to {card.gain_max:g}" if card.gain_min and card.gain_max else ""
    return {
        "also": ", ".join(map(name, card.aliases)),
        "ratings": ", ".join(_ratings(card)),
        "gain": gain,
        "pins": "; ".join(
            f"{name(package)}: " + ", ".join(f"{pin} {terminal}" for pin, terminal in sorted(pads.items()))
            for package, pads in sorted(card.packages.items())
        ),
        "model": ", ".join(f"{clean(key)}={value:.4g}" for key, value in sorted(card.model.items())),
        "source": clean(card.source),
        "note": clean(card.note),
    }


def _ratings(card: Card) -> list[str]:
    told = []
    for each in fields(card.ratings):
        value = getattr(card.ratings, each.name)
        if value is None:
            continue
        label = _RATINGS.get(each.name)
        if each.name == "rth_ja_kpw":
            told.append(f"junction to ambient {value:.4g} K/W")
        else:
            told.append(f"{label or words(each.name)} {given(value, unit_of(each.name))}")
    return told
