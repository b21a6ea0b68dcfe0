"""What is fuzzed: bytes in a file, read; the answer is a result that holds together, or one `InputTrouble`."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from pathlib import Path

from checker.circuit.build import build_circuit
from checker.intent.read import read_intent
from checker.intent.types import Intent
from checker.netlist.limits import ReadLimits
from checker.netlist.read import read_netlist
from checker.trouble import InputTrouble

ROOT = Path(__file__).resolve().parents[2]
LIMITS = ReadLimits(elements=2_000, parts=2_000)
"""Small enough that each input is quick: what they bound is tested by itself."""

SEEDS: dict[str, tuple[bytes, ...]] = {
    "spice": (
        b"* amp\n.param r=1k q='r*2'\n.subckt amp a b x=1 PARAMS: y=2\nR1 a b {x*r}\nQ1 a b 0 n1 2\n"
        b".model n1 npn(bf=100 is=1f)\n.ends\nXU1 in out amp x={2*r} m=2\nV_V1 in 0 DC 5 AC 1 90 SIN(0 1 1k)\n"
        b'C1 in ? 4,7u\nK1 L1 L2 0.5\nE1 a 0 POLY(1) b 0 0 2\n.include "x.lib"\n.lib y z\n.global vcc\n.temp 30\n'
        b".control\nrun\n.endc\n+ 5\n.end\n",
        b"R\xc2\xa7U1 a 0 68kOhm\nM1 d g s b mos w=1u l=2u\n.model mos vdmos(pchan vto:-2)\nJ1 a b c jj off\n"
        b"D1 a k dd 2\n.lib tt\n.param z={if(1>2,3,4)+limit(1,2,3)**2}\n.endl tt\n.options temp=40\nI1 0 a "
        b"PWL(0 1 1m 2)\nT1 a 0 b 0 Z0=50 TD=1n\nG1 a 0 VALUE={V(b)*2}\nF1 a 0 V1 3\nB1 a 0 V=V(b)\n"
        b"S1 a 0 b 0 sw\n.END\nrest\n",
        b"* formulas\nB1 a 0 V=2*V(b,c)\nE1 a 0 VALUE={V(b)/2}\nG1 a 0 cur='I(V1)*2' m=2\nB2 a 0 I=1m\nV1 a 0 1\n"
        b"R1 a 0 10k 1% 1/4W\nR2 b 0 1k tol=5\nF1 a 0 V1 2\nH1 a 0 V1 2\nO1 a 0 b 0 line\n.model line ltra(l=1u)\n"
        b".subckt only a b\nR1 a b 1k\n.ends\n.model q npn(bf=oops 7)\nQ1 a b 0 q\nL1 a 0 1u Rser=1\n",
        b"* pads\nU1 a b c d OPA\nQ1 a b c BC850\nQ_Q2 a [s] b x Net-(Q1-B) ~{RST} mine\n.macro m 1 2\n.eom\n"
        b".title t\n",
    ),
    "kicad": (
        b'(export (version "E") (design (sheet (number "1") (title_block (title "t")))) (components\n'
        b'(comp (ref "Q1") (value "BC\\"547")\n(fields (field (name "DNP") "1")) (property (name "dnp"))\n'
        b'(libsource (lib a) (part b)) (sheetpath (names "/in/") (tstamps "/1/")))\n(comp (ref "Q1")))\n'
        b"(libparts (libpart (lib a) (part b) (aliases (alias c)) (pins (pin (num 1) (name C) (type x)))))\n"
        b'(nets (net (code 1) (name "") (node (ref Q1) (pin 1) (pinfunction "C_1") (pintype "passive")))\n'
        b"(net (code 1) (name t) (node (ref Q2) (pin 2)))))\n",
        b"(export (version E) (components (comp (ref Q1) (value x) (property (name Sim.Device) (value NPN))\n"
        b'(property (name Sim.Params) (value "bf=1M is=1f")) (property (name Sim.Pins) (value "1=C 2=B 3=E")))\n'
        b"(comp (ref Q2) (value y) (fields (field (name Sim.Library) a.lib) (field (name Sim.Name) QX)))\n"
        b"(comp (ref V1) (value 5) (fields (field (name Sim.Device) V) (field (name Sim.Params) dc=5)))\n"
        b"(comp (ref RV1) (value 10kB) (libsource (lib Device) (part R_Potentiometer))))\n"
        b"(nets (net (code 1) (name A) (node (ref Q1) (pin 1)) (node (ref V1) (pin 1)))))\n",
        b"(export (version D)\n  (components\n    (comp (ref t) (value nil) (tstamp 5E123456))\n"
        b"    (comp (ref R1) (value 4k7;x) (fields (field (name Sim.Device) R)) (property (name p) (value v))))\n"
        b"  (nets (net (code 2) (name /a/b) (node (ref R1) (pin 1)) (node (ref R1) (pin 1)))))\n",
    ),
    "intent": (
        b'[band]\nlow = "3 MHz"\nhigh = "20 MHz"\n[ambient]\nmin = "-10 degC"\nnominal = "25 degC"\nmax = "55 degC"\n'
        b'[rails]\n"+12V" = { volts = "12 V", tolerance = "5 %", may_be_absent = true }\n'
        b'[[port]]\nname = "antenna"\nnet = "ANT"\nrole = "input"\nimpedance = "50 ohm"\nlevel = "-30 dBm"\n'
        b'[[target]]\nstage = "Q1"\nquantity = "voltage_gain_db"\nmin = 18\nmax = 24\n'
        b'[[accepted]]\nrule = "a"\nsubject = "Q1"\nreason = "r"\nby = "RF lead"\nuntil = 2027-06-30\n',
        b'[[state]]\nname = "reset"\npins = { "U1.7" = "open" }\nabsent = ["+5V"]\n'
        b'[limits.input-mismatch]\nreturn_loss_db = 14\n[[part]]\nref = \'Q3\'\ncard = """generic"""\n',
    ),
}
WORDS: dict[str, tuple[bytes, ...]] = {
    "spice": (
        b"\n+", b"\n.subckt a b\n", b"\n.ends\n", b"\nX1 a b\n", b"\n.param a={a}\n", b"\n.endl\n", b"**", b"?", b"{",
        b"}", b"'", b"=", b"(", b")", b",", b"if(", b"pow(9,", b"1e400", b"e999999999", b"POLY(1)", b"DC", b"AC",
        b"PWL(", b"%", b"\n.model a npn(", b"\n.include a\n", b"\n.lib a b\n", b"\n.global a\n", b"\n.control\n",
        b";", b" $ ", b"//", b"\xff\xfe", b"\xc2\xb5", b"\xe2\x80\xae", b"\x00", b"\x85", b"m=", b"[s]", b"_",
        b"\xc2\xa7", b".", b"\nB1 a 0 V=", b"V(a)", b"I(V1)", b"VALUE={", b"1%", b"tol=", b"Rser=", b"LIMIT(",
    ),
    "kicad": (
        b"(", b")", b'"', b"\\", b"'", b";", b"(comp (ref R1))", b"(net (code 1) (name A)",
        b"(node (ref R1) (pin 1))", b"(property (name dnp))", b"(fields ", b"(libparts ", b"(libpart ",
        b"(pin (num 1))", b"~", b"#", b"\\n", b"\x00", b"(export ", b"(components ", b"(nets ", b"\xff", b"\xc2\x85",
        b"9999999999999999999999", b"\xd9\xa3", b"(field (name Sim.Params) bf=", b"(field (name Sim.Device) NPN)",
        b"(field (name Sim.Library) board)", b"1000g", b"4k7", b"10uF/25V", b"2-10p", b"T50-6 18T", b"(part R)",
    ),
    "intent": (
        b'"""', b"'''", b"[[", b"]]", b"[", b"]", b"{", b"}", b"=", b"\n", b".", b"inf", b"nan", b"-0", b"1e400",
        b"0x", b'"', b" dBm", b" mVpp", b"true", b"2027-06-30", b"999999999999999999999999999999", b"[[part]]\n",
        b"[[port]]\n", b"[[state]]\n", b"band.low", b"#", b"\\u0000", b"\\U0001F600", b" ohm", b" %", b" degC",
        b"\xff", b"\r",
    ),
}  # fmt: skip


def sample_seeds(what: str) -> Iterator[bytes]:
    """The sample boards' files of that kind."""
    suffix = {"spice": ".cir", "kicad": ".net", "intent": ".intent.toml"}[what]
    for path in sorted((ROOT / "sample_schematics").glob(f"*/*{suffix}")):
        yield path.read_bytes()


def _netlist(path: Path) -> None:
    netlist = read_netlist(path, limits=LIMITS)
    refs = [part.ref.lower() if netlist.format == "spice" else part.ref for part in netlist.parts]
    assert len(set(refs)) == len(refs), "two parts of one reference"
    assert all(pin.net in netlist.nets for part in netlist.parts for pin in part.pins), "a pin on no net"
    assert all(net.key == key for key, net in netlist.nets.items()), "a net under another key"
    assert all(not remark.origin.file or remark.origin.line >= 0 for remark in netlist.remarks)
    build_circuit(netlist, Intent())


def _intent(path: Path) -> None:
    read_intent(path)


TARGETS: dict[str, Callable[[Path], None]] = {"spice": _netlist, "kicad": _netlist, "intent": _intent}


def try_bytes(what: str, data: bytes, path: Path) -> bool:
    """Write `data` to `path` and read it; False where it was refused. Whatever else is raised is a find."""
    path.write_bytes(data)
    try:
        TARGETS[what](path)
    except InputTrouble as trouble:
        assert str(trouble).startswith(f"{path.as_posix()}:"), f"a message without its file: {trouble}"
        return False
    return True
