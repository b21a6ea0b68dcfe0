"""Models that an export carries in its fields: parameters written there (`Sim.Params`), or the name of a model in a
file (`Sim.Library` with `Sim.Name`, formerly `Spice_Lib_File` with `Spice_Model`).

Files are read as includes of SPICE text are: inside the netlist's folder and the folders allowed, within the limits.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import field, replace
from pathlib import Path

from checker.netlist.limits import ReadLimits
from checker.netlist.spice_cards import CardReader
from checker.netlist.spice_deck import Deck, Definition
from checker.netlist.spice_expand import Expansion
from checker.netlist.spice_includes import Folders
from checker.netlist.spice_lines import Card
from checker.netlist.spice_words import split_words
from checker.netlist.types import Model, Part, Remark, Source
from checker.pattern import lazy
from checker.quantity.spice_number import parse_spice_number
from checker.shape import frozen
from checker.trouble import NotAQuantity

_KINDS = {"NPN": "npn", "PNP": "pnp", "NJFET": "njf", "PJFET": "pjf", "NMOS": "nmos", "PMOS": "pmos", "D": "d"}
_TYPES = frozenset({"", "GUMMELPOON", "SHICHMANHODGES", "MOS1", "VDMOS"})
"""Sorts of model whose parameters mean what those of a `.model` card mean; an empty one is the plain sort."""
_MEGA = lazy(r"\d\s*M(?![Ee][Gg])")
_LONGEST = 200
"""Characters of a number at most."""
_PROJECT = "${KIPRJMOD}/"


@frozen
class Found:
    """`parts` with the names of their models and what their sources say; the models by lower-case name."""

    parts: list[Part]
    models: dict[str, Model] = field(default_factory=dict)
    remarks: list[Remark] = field(default_factory=list)


def with_models(
    parts: Sequence[Part], *, path: Path, include_dirs: tuple[Path, ...], limits: ReadLimits, size: int
) -> Found:
    """`parts` with what their simulation fields say. `size`: bytes of the netlist itself. Raises `InputTrouble` for a
    limit exceeded by a file of models."""
    found = Found(parts=list(parts))
    for index, part in enumerate(found.parts):
        if part.fields.get("Sim.Params"):
            found.parts[index] = _written(part, found)
    _from_files(found, Folders(path, include_dirs), path, limits, size)
    return found


def _written(part: Part, found: Found) -> Part:
    """The part with the parameters in its field, as a source or as a model of its own."""
    device, sort = (part.fields.get(key, "").strip().upper() for key in ("Sim.Device", "Sim.Type"))
    if device not in _KINDS and device not in ("V", "I"):
        return part
    params = _numbers(part, found)
    if device in ("V", "I"):
        waveform = "" if sort in ("", "DC") else sort.lower()
        source = Source(dc=params.get("dc"), ac=params.get("ac"), waveform=waveform, rest=params.get("dc"))
        return replace(part, source=source) if {"dc", "ac"} & params.keys() else part
    if sort not in _TYPES:
        found.remarks.append(_lost(part, f"a model of the sort {sort[:30]} is not understood"))
        return part
    kind = "vdmos" if sort == "VDMOS" else _KINDS[device]
    if kind == "vdmos" and device == "PMOS":
        params["pchan"] = 1.0
    name = f"{part.ref}:Sim.Params"
    found.models[name.lower()] = Model(name=name, kind=kind, params=params, origin=part.origin)
    return replace(part, model=name)


def _numbers(part: Part, found: Found) -> dict[str, float]:
    params: dict[str, float] = {}
    for key, text in split_words(f"params {part.fields['Sim.Params']}").named.items():
        try:
            if _MEGA.search(text[:_LONGEST]):
                raise NotAQuantity(f"{text[:40]!r} may mean milli or mega")
            params[key] = parse_spice_number(text.strip("\"'"))
        except NotAQuantity as error:
            found.remarks.append(_lost(part, f"{key[:20]} is passed over: {error}"))
    return params


def _lost(part: Part, text: str) -> Remark:
    nets = tuple(pin.net for pin in part.pins)
    return Remark(text=f"the model of {part.ref}: {text}", origin=part.origin, parts=(part.ref,), lost=True, nets=nets)


def _from_files(found: Found, folders: Folders, path: Path, limits: ReadLimits, size: int) -> None:
    """Read every file once and give the parts the models that they name in it."""
    files: dict[str, list[int]] = {}
    for index, part in enumerate(found.parts):
        written = part.fields.get("Sim.Library") or part.fields.get("Spice_Lib_File") or ""
        if written.strip() and not part.model:
            files.setdefault(written.strip().removeprefix(_PROJECT), []).append(index)
    for written, users in files.items():
        first = found.parts[users[0]]
        refs = tuple(found.parts[index].ref for index in users)
        if folders.find(written, beside=folders.home) is None:
            text = f"the file {written[:120]!r} is not in the netlist's folder: its models are missing here"
            found.remarks.append(Remark(text=text, origin=first.origin, parts=refs))
            continue
        deck = Deck(root=Definition(name=""))
        reader = CardReader(deck, folders, path, limits, size)
        card = Card(text=f".include {written}", file=first.origin.file, line=first.origin.line)
        reader.follow(card, written, section=None)
        size = limits.bytes - reader.bytes_left
        expansion = Expansion(deck, limits)
        expansion.run()
        _use(found, users, expansion, deck.root.subcircuits)


def _use(found: Found, users: Sequence[int], expansion: Expansion, subcircuits: Mapping[str, Definition]) -> None:
    """Give the parts at `users` their models from one file, and say what of those models was not understood."""
    nets: dict[str, dict[str, None]] = {}
    for index in users:
        part = found.parts[index]
        name = (part.fields.get("Sim.Name") or part.fields.get("Spice_Model") or part.value).strip()
        model = expansion.models.get(name.lower())
        if model is None:
            what = "is a subcircuit there and not used" if name.lower() in subcircuits else "is not in its file"
            text = f"the model {name[:40]} of {part.ref} {what}"
            found.remarks.append(Remark(text=text, origin=part.origin, parts=(part.ref,)))
            continue
        # Of one name in two files each part gets its own.
        own = model
        while found.models.setdefault(own.name.lower(), own) != own:
            own = replace(own, name=f"{own.name}'")
        found.parts[index] = replace(part, model=own.name)
        nets.setdefault(name.lower(), {}).update(dict.fromkeys(pin.net for pin in part.pins))
    said = (remark for remark in expansion.remarks() if remark.model in nets)
    found.remarks.extend(replace(remark, nets=tuple(nets[remark.model])) for remark in said)
