"""KiCad S-expression export, versions D and E, into a `Netlist`.

Nets are keyed by code, since names repeat or are empty. Pin names and types stand on the nodes in version E
and in the library parts in version D.
"""

from __future__ import annotations

from collections import Counter, defaultdict
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import replace
from pathlib import Path

from checker.netlist.fitting import is_left_out
from checker.netlist.limits import MOST_TEXT, ReadLimits, over
from checker.netlist.sexpr import Parsed, Tree, child, children, own_text, parse, text_of
from checker.netlist.types import Model, Net, Netlist, Part, Pin, Remark
from checker.pattern import lazy
from checker.quantity.value import Origin
from checker.shape import frozen
from checker.trouble import InputTrouble

_VERSIONS = ("D", "E")
_LETTERS = lazy(r"[^\W\d_]+")
_DIGITS = lazy(r"(\d+)")
MODEL_FIELDS = ("Sim.Params", "Sim.Library", "Spice_Lib_File")
"""A part with none of them has no model of its own."""
_OF_THE_TOOL = ("Sheetname", "Sheetfile", "ki_keywords", "ki_fp_filters", "ki_description")

_PinTable = Mapping[tuple[str, str], Mapping[str, tuple[str, str]]]
"""(library, part) to pin number to (name, type)."""


@frozen
class _Nodes:
    nets: dict[str, Net]
    pins: dict[str, dict[Pin, None]]
    lines: dict[str, int]


def read_kicad(
    text: str,
    *,
    name: str,
    sha256: str,
    path: Path,
    include_dirs: tuple[Path, ...],
    limits: ReadLimits,
    size: int,
) -> Netlist:
    """Read the export in `text`; `name` is the file's name in messages and origins, `size` its bytes.

    Raises `InputTrouble` for damaged text, no component list, or a limit exceeded.
    """
    parsed = parse(text, name=name, limits=limits)
    root = parsed.root
    if not child(root, "components"):
        raise InputTrouble("the export has no (components ...) list; export the netlist again", file=name, line=1)
    remarks = list(_version_remark(root, name))
    nodes = _nodes(parsed, name, limits)
    parts = _parts(parsed, nodes, name, limits)
    parts = _told_apart([_clipped(part, remarks) for part in parts], remarks)
    remarks += _lost_nodes(parts, nodes, name)
    remarks += _doubled_pins(parts)
    models: dict[str, Model] = {}
    if any(part.fields.get(key) for part in parts for key in MODEL_FIELDS):
        from checker.netlist.kicad_models import with_models  # few exports carry models

        found = with_models(parts, path=path, include_dirs=include_dirs, limits=limits, size=size)
        parts, models = found.parts, found.models
        remarks += found.remarks
    return Netlist(
        path=name,
        format="kicad",
        sha256=sha256,
        title=_title(root),
        parts=tuple(parts),
        nets=nodes.nets,
        models=models,
        remarks=tuple(remarks),
    )


def _version_remark(root: Tree, name: str) -> tuple[Remark, ...]:
    version = text_of(root, "version")
    if version in _VERSIONS:
        return ()
    text = f"export version {version or 'not given'}: only D and E are known; read in the same way"
    return (Remark(text=text, origin=Origin(kind="netlist", file=name, line=1)),)


def _title(root: Tree) -> str:
    sheets = children(child(root, "design"), "sheet")
    return text_of(child(sheets[0], "title_block"), "title") if sheets else ""


def _nodes(parsed: Parsed, name: str, limits: ReadLimits) -> _Nodes:
    """Nets with unique keys, and the pins of each reference in the order of the file."""
    trees = children(child(parsed.root, "nets"), "net")
    if sum(len(tree) for tree in trees) > limits.elements:
        over("elements", limits.elements, "too many nets and pins", file=name)
    codes = [text_of(tree, "code") or str(index) for index, tree in enumerate(trees, start=1)]
    names = [text_of(tree, "name") for tree in trees]
    nets: dict[str, Net] = {}
    pins: dict[str, dict[Pin, None]] = defaultdict(dict)
    """Ordered sets: a node may stand twice in a file."""
    lines: dict[str, int] = {}
    keys = _net_keys(names, codes)
    for index, tree in enumerate(trees):
        key = keys[index]
        nets[key] = Net(key=key, name=names[index])
        for node in children(tree, "node"):
            pin = Pin(
                number=text_of(node, "pin"),
                net=key,
                function=text_of(node, "pinfunction"),
                kind=text_of(node, "pintype"),
            )
            ref = text_of(node, "ref")
            pins[ref][pin] = None
            lines.setdefault(ref, parsed.line(tree))
    return _Nodes(nets=nets, pins=pins, lines=lines)


def _net_keys(names: Sequence[str], codes: Sequence[str]) -> list[str]:
    """The name where it is unique and not empty, else name and code; a count behind what is still not
    unique."""
    uses = Counter(names)
    wanted = [name if name and uses[name] == 1 else f"{name}#{code}" for name, code in zip(names, codes, strict=True)]
    taken = {key for key in wanted if uses[key] == 1}
    copies: Counter[str] = Counter()
    keys = []
    for name, key in zip(names, wanted, strict=True):
        unique = key
        while unique in taken and unique != name:
            copies[key] += 1
            unique = f"{key}#{copies[key]}"
        taken.add(unique)
        keys.append(unique)
    return keys


def _parts(parsed: Parsed, nodes: _Nodes, name: str, limits: ReadLimits) -> list[Part]:
    trees = children(child(parsed.root, "components"), "comp")
    if len(trees) > limits.parts:
        over("parts", limits.parts, f"{len(trees)} parts", file=name)
    table = _pin_table(parsed.root)
    return [_part(tree, nodes, table, name, parsed.line(tree)) for tree in trees]


def _pin_table(root: Tree) -> _PinTable:
    table: dict[tuple[str, str], dict[str, tuple[str, str]]] = {}
    for libpart in children(child(root, "libparts"), "libpart"):
        library = text_of(libpart, "lib")
        pins = {
            text_of(pin, "num"): (text_of(pin, "name"), text_of(pin, "type"))
            for pin in children(child(libpart, "pins"), "pin")
        }
        aliases = [own_text(alias) for alias in children(child(libpart, "aliases"), "alias")]
        for part in (text_of(libpart, "part"), *aliases):
            table.setdefault((library, part), pins)
    return table


def _part(tree: Tree, nodes: _Nodes, table: _PinTable, name: str, line: int) -> Part:
    ref = text_of(tree, "ref")
    source = child(tree, "libsource")
    library, symbol = text_of(source, "lib"), text_of(source, "part")
    known = table.get((library, symbol), {})
    fields = _fields(tree)
    value = text_of(tree, "value")
    letters = _LETTERS.match(ref)
    pins = _named(nodes.pins.get(ref, {}), known)
    return Part(
        ref=ref,
        letter=letters.group().upper() if letters else "",
        value=value,
        pins=tuple(sorted(pins, key=_pin_order)),
        origin=Origin(kind="netlist", file=name, line=line, sheet=text_of(child(tree, "sheetpath"), "names")),
        fields=fields,
        footprint=text_of(tree, "footprint"),
        symbol=f"{library}:{symbol}" if library or symbol else "",
        description=text_of(tree, "description") or text_of(source, "description"),
        do_not_fit=bool(child(tree, "dnp")) or is_left_out(value, fields),
    )


def _clipped(part: Part, remarks: list[Remark]) -> Part:
    """The part with texts of bearable length, and a remark where one was cut; parameters of a model are never cut."""
    texts = (part.value, part.symbol, part.footprint, part.description, *(pin.function for pin in part.pins))
    fields = {key: text for key, text in part.fields.items() if key != "Sim.Params"}
    longest = max(map(len, (*texts, *fields.values())))
    if longest <= MOST_TEXT:
        return part
    text = f"{part.ref[:40]} has a text of {longest} characters; what follows the first {MOST_TEXT} is not read"
    remarks.append(Remark(text=text, origin=part.origin, parts=(part.ref,)))
    return replace(
        part,
        value=part.value[:MOST_TEXT],
        symbol=part.symbol[:MOST_TEXT],
        footprint=part.footprint[:MOST_TEXT],
        description=part.description[:MOST_TEXT],
        fields={**part.fields, **{key: text[:MOST_TEXT] for key, text in fields.items()}},
        pins=tuple(replace(pin, function=pin.function[:MOST_TEXT]) for pin in part.pins),
    )


def _named(pins: Iterable[Pin], known: Mapping[str, tuple[str, str]]) -> list[Pin]:
    """Pins with name and type of the library where the node has none. Newer exports write `K_1` for pin 1 named `K`:
    the number comes off where the library says so, or, without a library, where all pins of the part bear it."""
    pins = list(pins)
    numbered = all(pin.function.endswith(f"_{pin.number}") for pin in pins)
    result = []
    for pin in pins:
        name, kind = known.get(pin.number, ("", ""))
        function = pin.function or name
        if function == f"{name}_{pin.number}" or (numbered and not name):
            function = function.removesuffix(f"_{pin.number}")
        result.append(replace(pin, function=function, kind=pin.kind or kind))
    return result


def _fields(tree: Tree) -> dict[str, str]:
    """User fields, then properties that no field repeats (`Sim.*`, `dnp`); an entry without value is empty
    text."""
    fields = {text_of(entry, "name"): own_text(entry) for entry in children(child(tree, "fields"), "field")}
    for entry in children(tree, "property"):
        key = text_of(entry, "name")
        if key not in _OF_THE_TOOL:
            fields.setdefault(key, text_of(entry, "value"))
    if datasheet := text_of(tree, "datasheet"):
        fields.setdefault("Datasheet", datasheet)
    return fields


def _pin_order(pin: Pin) -> tuple[list[tuple[int, str]], str]:
    """Numbers by size, so that neither export order nor `10` before `2` matters."""
    pieces = _DIGITS.split(pin.number)
    return [(int(piece), "") if piece.isdecimal() else (-1, piece) for piece in pieces], pin.net


def _told_apart(parts: list[Part], remarks: list[Remark]) -> list[Part]:
    """Parts with unique references. Nodes name only a reference: of several parts behind one, nobody can say
    whose pins they are, so all of them are marked as not understood."""
    uses = Counter(part.ref for part in parts)
    taken = set(uses)
    result: list[Part] = []
    seen: Counter[str] = Counter()
    for part in parts:
        if uses[part.ref] == 1:
            result.append(part)
            continue
        seen[part.ref] += 1
        ref = part.ref
        while seen[part.ref] > 1 and ref in taken:
            ref = f"{part.ref}#{seen[part.ref]}"
            seen[part.ref] += ref in taken
        taken.add(ref)
        reason = f"{uses[part.ref]} parts bear the reference {part.ref}: their pins cannot be told apart"
        pins = part.pins if ref == part.ref else ()
        result.append(replace(part, ref=ref, pins=pins, unknown=reason))
        remarks.append(Remark(text=f"{reason}; this one is called {ref}", origin=part.origin, parts=(ref,)))
    return result


def _lost_nodes(parts: list[Part], nodes: _Nodes, name: str) -> list[Remark]:
    known = {part.ref for part in parts}
    return [
        Remark(
            text=f"nets name pins of {ref or 'a part without reference'}, which is not in the component list",
            origin=Origin(kind="netlist", file=name, line=nodes.lines.get(ref, 0)),
            parts=(ref,) if ref else (),
            lost=True,
            nets=tuple(sorted({pin.net for pin in nodes.pins[ref]})),
        )
        for ref in sorted(set(nodes.pins) - known)
    ]


def _doubled_pins(parts: list[Part]) -> list[Remark]:
    remarks = []
    for part in parts:
        numbers = Counter(pin.number for pin in part.pins)
        for number in sorted(number for number, count in numbers.items() if count > 1):
            text = f"pin {number} of {part.ref} is on {numbers[number]} nets at once"
            nets = tuple(pin.net for pin in part.pins if pin.number == number)
            remarks.append(Remark(text=text, origin=part.origin, parts=(part.ref,), lost=True, nets=nets))
    return remarks
