"""The stages: how each is biased, what it does, and the hand figures beside the exact ones."""

from __future__ import annotations

from collections.abc import Iterator

from checker.record import Bias, FetBias, Report, Stage, Thumb, reason_for
from checker.report.clean import cell, clean, name
from checker.report.layout import Page, hanging, table
from checker.report.quantities import figure, number, unit_of, words
from checker.report.sections.dashes import dashes
from checker.words import Configuration, Role

USUAL: dict[Configuration, Role] = {
    "switch": "switch",
    "current-source": "bias",
    "diode-connected": "bias",
    "vbe-multiplier": "bias",
    "regulator": "bias",
    "clamp": "bias",
}
"""The role that a configuration has anyway and that needs no word; the others carry signal."""

SIGNAL = {
    "voltage_gain_db": "gain",
    "input_impedance_ohm": "Zin",
    "output_impedance_ohm": "Zout",
    "low_corner_hz": "f low",
    "high_corner_hz": "f high",
    "swing_vpp": "swing",
}
"""Figures of the signal table and what stands above them."""


def stages(report: Report, page: Page) -> list[str]:
    """Three tables and what belongs below each."""
    if not report.stages:
        return []
    return [*at_rest(report, page), *with_signal(report, page), *by_hand(report, page)]


def at_rest(report: Report, page: Page) -> list[str]:
    """One row a stage: what it is and where it rests."""
    kinds = {type(stage.bias) for stage in report.stages}
    current, voltage = ("IC/ID", "VCE/VDS") if FetBias in kinds else ("IC", "VCE")
    header = ("stage", "configuration", "region", current, voltage, "power", "Tj", "group")
    lines = table(header, map(_rest_row, report.stages), "lllrrrrl", page)
    return [*page.heading("Stages at rest"), *lines, *_remarks(report, page)]


def _rest_row(stage: Stage) -> tuple[str, ...]:
    what = stage.configuration + ("" if stage.role == USUAL.get(stage.configuration, "signal") else f" ({stage.role})")
    groups = ", ".join(map(cell, stage.groups))
    bias = stage.bias
    if bias is None:
        return (cell(stage.id), what, *["—"] * 5, groups)
    current, voltage = (bias.ic_a, bias.vce_v) if isinstance(bias, Bias) else (bias.id_a, bias.vds_v)
    return (
        cell(stage.id),
        what,
        clean(bias.region or "—"),
        number(current, "A"),
        number(voltage, "V"),
        number(bias.power_w, "W"),
        number(bias.tj_c, "degC", 2),
        groups,
    )


def _remarks(report: Report, page: Page) -> list[str]:
    """One line a remark, naming the stages that it is about."""
    stages_of: dict[str, list[str]] = {}
    for stage in report.stages:
        for remark in _remarks_on(stage, reason_for(report, "stages", stage.id, "bias")):
            stages_of.setdefault(remark, []).append(name(stage.id))
    return [line for remark, ids in stages_of.items() for line in hanging("  ", f"{', '.join(ids)}: {remark}", page)]


def _remarks_on(stage: Stage, no_bias: str) -> Iterator[str]:
    if stage.bias is None:
        yield clean(no_bias) or "no operating point"
    if stage.reason and stage.reason not in no_bias:
        yield clean(stage.reason)
    if isinstance(stage.bias, FetBias) and stage.bias.reversed:
        yield "drain and source are swapped at rest"
    if stage.card and stage.card.assumed:
        yield f"assumed figures: card {name(stage.card.name)}, {clean(stage.card.source)}"


def with_signal(report: Report, page: Page) -> list[str]:
    """One row a stage that has any signal figure, loaded as it really is."""
    shown = [stage for stage in report.stages if any(getattr(stage.specs, key) is not None for key in SIGNAL)]
    if not shown:
        return []
    rows = [(cell(stage.id), *(figure(getattr(stage.specs, key), key) for key in SIGNAL)) for stage in shown]
    nulls = [
        (f"{name(stage.id)} {label}", ("stages", stage.id, "specs", key))
        for stage in shown
        for key, label in SIGNAL.items()
        if getattr(stage.specs, key) is None
    ]
    return [
        *page.heading("Stages with signal, loaded as they are"),
        *table(("stage", *SIGNAL.values()), rows, "lrrrrrr", page),
        *dashes(report, nulls, page),
    ]


def by_hand(report: Report, page: Page) -> list[str]:
    """The rule of thumb beside the exact figure at the terminals, and whether they agree."""
    rows = [
        _hand_row(stage, key, thumb) for stage in report.stages for key, thumb in sorted(stage.rule_of_thumb.items())
    ]
    if not rows:
        return []
    header = ("stage", "at the terminals", "by hand", "exact", "off", "agree", "formula; why they differ")
    return [*page.heading("By hand beside exact"), *table(header, rows, "llrrrll", page)]


def _hand_row(stage: Stage, key: str, thumb: Thumb) -> tuple[str, ...]:
    unit = unit_of(key)
    note = f"; {clean(thumb.note)}" if thumb.note else ""
    return (
        cell(stage.id),
        words(clean(key)),
        number(thumb.value, unit),
        number(thumb.exact, unit),
        "—" if thumb.deviation is None else _off(thumb.deviation),
        {True: "yes", False: "no", None: "—"}[thumb.agrees],
        f"{clean(thumb.formula)}{note}",
    )


def _off(deviation: float) -> str:
    """A deviation in percent; from ten times on as the multiple of the exact figure."""
    return f"{deviation * 100:+.0f} %" if abs(deviation) < 10.0 else f"{1.0 + deviation:.2g} ×"
