"""Models and pin orders that an export carries in its simulation fields."""

from __future__ import annotations

from pathlib import Path

import pytest

from checker.netlist.limits import ReadLimits
from checker.netlist.read import read_netlist
from checker.netlist.types import Netlist, Part, Source
from checker.pipeline import ready
from checker.trouble import InputTrouble
from tests.netlist.conftest import Read


def export(*parts: tuple[str, str, dict[str, str]]) -> str:
    """An export of parts (reference, value, fields) with three pins each."""
    comps = "".join(
        f'(comp (ref "{ref}") (value "{value}")'
        + "".join(f'\n(property (name "{key}") (value "{text}"))' for key, text in fields.items())
        + ")\n"
        for ref, value, fields in parts
    )
    nodes = "".join(
        f'(net (code "{ref}{pin}") (name "{ref}-{pin}") (node (ref "{ref}") (pin "{pin}")))'
        for ref, _, _ in parts
        for pin in (1, 2, 3)
    )
    return f'(export (version "E")\n(components\n{comps})\n(nets {nodes}))'


def part(netlist: Netlist, ref: str) -> Part:
    return next(part for part in netlist.parts if part.ref == ref)


BJT = {"Sim.Device": "NPN", "Sim.Type": "GUMMELPOON", "Sim.Pins": "1=C 2=B 3=E"}


def test_parameters_in_the_field(read: Read) -> None:
    netlist = read(
        export(
            ("Q1", "own", {**BJT, "Sim.Params": "is=14.34f bf=200 vaf=74 nosuch=word"}),
            ("Q2", "own", {**BJT, "Sim.Params": "bf=50"}),
            ("M1", "own", {"Sim.Device": "PMOS", "Sim.Type": "VDMOS", "Sim.Params": "vto=-2 kp=3"}),
            ("J1", "own", {"Sim.Device": "NJFET", "Sim.Params": "vto=-3"}),
        )
    )
    found = {each.ref: netlist.models[each.model.lower()] for each in netlist.parts}
    assert {ref: (model.kind, dict(model.params)) for ref, model in found.items()} == {
        "Q1": ("npn", {"is": pytest.approx(14.34e-15), "bf": 200.0, "vaf": 74.0}),
        "Q2": ("npn", {"bf": 50.0}),
        "M1": ("vdmos", {"vto": -2.0, "kp": 3.0, "pchan": 1.0}),
        "J1": ("njf", {"vto": -3.0}),
    }
    assert [(remark.origin.line, remark.parts, remark.lost) for remark in netlist.remarks] == [(3, ("Q1",), True)]
    assert netlist.remarks[0].nets == ("Q1-1", "Q1-2", "Q1-3")


@pytest.mark.parametrize(
    ("fields", "source"),
    [
        ({"Sim.Device": "V", "Sim.Type": "DC", "Sim.Params": "dc=12"}, Source(dc=12.0, rest=12.0)),
        ({"Sim.Device": "I", "Sim.Params": "dc=1m ac=1"}, Source(dc=1e-3, ac=1.0, rest=1e-3)),
        (
            {"Sim.Device": "V", "Sim.Type": "SIN", "Sim.Params": "dc=1 ampl=2 f=1k"},
            Source(dc=1.0, waveform="sin", rest=1.0),
        ),
        ({"Sim.Device": "V", "Sim.Params": "nothing"}, None),
        ({"Sim.Device": "R", "Sim.Params": "r=5"}, None),
    ],
)
def test_sources_in_the_field(read: Read, fields: dict[str, str], source: Source | None) -> None:
    assert read(export(("V1", "1", fields))).parts[0].source == source


@pytest.mark.parametrize("text", ["bf=1M", "bf=2.5M", "is=1e400", "bf=two", "bf={x}"])
def test_a_parameter_that_is_no_plain_number_is_named(read: Read, text: str) -> None:
    """`M` means mega on a schematic and milli in SPICE text; nobody can tell which this field follows."""
    netlist = read(export(("Q1", "own", {**BJT, "Sim.Params": f"{text} vaf=50"})))
    assert netlist.models["q1:sim.params"].params == {"vaf": 50.0}
    assert [remark.lost for remark in netlist.remarks] == [True]


def test_a_sort_of_model_that_is_not_known_is_named(read: Read) -> None:
    netlist = read(export(("Q1", "BC547", {**BJT, "Sim.Type": "HICUM2", "Sim.Params": "c10=2"})))
    assert (netlist.models, part(netlist, "Q1").model) == ({}, "")
    assert "HICUM2 is not understood" in netlist.remarks[0].text


LIBRARY = """* models
.model BC547 npn(bf=300 vaf=what)
.model other npn(bf=oops)
.subckt BD139 1 2 3
Q1 1 2 3 q
.model q npn(bf=100)
.ends
.include more.lib
"""


@pytest.mark.parametrize(("file", "name"), [("Sim.Library", "Sim.Name"), ("Spice_Lib_File", "Spice_Model")])
@pytest.mark.parametrize("written", ["lib/bjt.lib", "${KIPRJMOD}/lib/bjt.lib", ".\\\\lib\\\\bjt.lib"])
def test_models_in_a_file(read: Read, file: str, name: str, written: str) -> None:
    Path("lib").mkdir()
    Path("lib/bjt.lib").write_text(LIBRARY)
    Path("lib/more.lib").write_text(".model deep pnp(bf=7)\n")
    netlist = read(
        export(
            ("Q1", "T1", {file: written, name: "bc547"}),
            ("Q2", "T2", {file: written, name: "deep"}),
            ("Q3", "T3", {file: written, name: "BD139"}),
            ("Q4", "T4", {file: written, name: "absent"}),
            ("Q5", "T5", {file: "lib/absent.lib", name: "bc547"}),
        )
    )
    assert {each.ref: each.model for each in netlist.parts} == {
        "Q1": "BC547",
        "Q2": "deep",
        "Q3": "",
        "Q4": "",
        "Q5": "",
    }
    assert netlist.models["bc547"].params == {"bf": 300.0}
    assert netlist.models["bc547"].origin.file == "lib/bjt.lib"
    assert (netlist.models["deep"].kind, netlist.models["deep"].params) == ("pnp", {"bf": 7.0})
    told = {remark.parts: remark.text for remark in netlist.remarks if remark.parts}
    assert "subcircuit" in told["Q3",] and "not in its file" in told["Q4",] and "lib/absent.lib" in told["Q5",]
    (lost,) = [remark for remark in netlist.remarks if remark.lost]
    assert (lost.origin.file, lost.origin.line, lost.nets) == ("lib/bjt.lib", 2, ("Q1-1", "Q1-2", "Q1-3"))


def test_models_of_one_name_in_two_files(read: Read) -> None:
    for name, gain in (("a.lib", 1), ("b.lib", 2)):
        Path(name).write_text(f".model QX npn(bf={gain})\n")
    netlist = read(
        export(*((f"Q{n}", "x", {"Sim.Library": name, "Sim.Name": "QX"}) for n, name in enumerate(("a.lib", "b.lib"))))
    )
    assert [netlist.models[each.model.lower()].params["bf"] for each in netlist.parts] == [1.0, 2.0]


@pytest.mark.parametrize("written", ["../secret.lib", "/etc/hostname", "link.lib", "C:\\\\x.lib", "~/x.lib"])
def test_files_of_models_outside_the_folder(tmp_path: Path, written: str) -> None:
    board = tmp_path / "board"
    board.mkdir()
    (tmp_path / "secret.lib").write_text(".model QX npn(bf=5)\n")
    (board / "link.lib").symlink_to(tmp_path / "secret.lib")
    (board / "b.net").write_text(export(("Q1", "x", {"Sim.Library": written, "Sim.Name": "QX"})))
    assert read_netlist(board / "b.net").models == {}
    allowed = read_netlist(board / "b.net", include_dirs=(tmp_path,)).models
    assert set(allowed) == ({"qx"} if written in ("../secret.lib", "link.lib") else set())


def test_files_of_models_count_towards_the_limits(read: Read) -> None:
    Path("big.lib").write_text("* x\n" * 500)
    with pytest.raises(InputTrouble, match=r"big\.lib: .*limit of 2000;.*--most-bytes"):
        read(export(("Q1", "x", {"Sim.Library": "big.lib", "Sim.Name": "QX"})), limits=ReadLimits(bytes=2_000))
    Path("ring.lib").write_text(".include ring.lib\n")
    with pytest.raises(InputTrouble, match="includes itself"):
        read(export(("Q1", "x", {"Sim.Library": "ring.lib", "Sim.Name": "QX"})))


def test_the_model_is_the_one_that_is_solved_with(tmp_path: Path) -> None:
    """All the way: the transistor's gain is the field's, its pins those of `Sim.Pins`."""
    path = tmp_path / "board.net"
    path.write_text(
        export(
            ("Q1", "2N3904", {**BJT, "Sim.Params": "bf=123"}),
            ("R1", "1k", {}),
        ).replace('(name "R1-1")', '(name "GND")')
    )
    circuit = ready(path, None).circuit
    assert circuit.bipolars.params["bf"][0, 0] == 123.0
    assert dict(circuit.parts["Q1"].terminals) == {"C": "Q1-1", "B": "Q1-2", "E": "Q1-3"}
