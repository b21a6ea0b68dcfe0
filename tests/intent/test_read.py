"""Every key of an intent file: what it becomes, and what a slip in it says."""

from __future__ import annotations

import datetime
import math
import time
from pathlib import Path

import pytest

from checker.intent.checks import check_limits, check_quantity
from checker.intent.find import find_intent
from checker.intent.read import read_intent
from checker.intent.source import MAX_BYTES, MAX_DOTTED, MAX_LINE
from checker.intent.types import Ambient, Band, Intent
from checker.trouble import InputTrouble

WHOLE = """\
[band]
low = "3 MHz"
high = "20 MHz"
[ambient]
min = "-10 degC"
nominal = 25
max = "55 degC"
[rails]
"+12V" = "12 V"
"-5V" = -5
"+5V" = { volts = "5 V", tolerance = "5 %", may_be_absent = true }
[[port]]
name = "antenna"
net = "ANT"
role = "input"
impedance = "50 ohm"
level = "-30 dBm"
[[port]]
name = "IF"
part = "J2"
pin = "1"
role = "output"
attach = false
band = { low = 0, high = "10.7 MHz" }
[[state]]
name = "reset"
pins = { "U1.7" = "open", "U1.8" = "2.4 V" }
absent = ["+5V"]
[[target]]
stage = "Q1"
quantity = "voltage_gain_db"
min = 18
max = "24 dB"
[[target]]
from = "antenna"
to = "IF"
quantity = "low_corner_hz"
max = "3 kHz"
[[target]]
group = "Q1+Q2"
quantity = "current_gain"
min = 0.9
[limits.input-mismatch]
return_loss_db = 14
[[part]]
ref = "Q3"
card = "generic-npn"
tolerance = 0.1
ratings = { p_max_w = "300 mW", tj_max_c = 125 }
i_max_a = "100 mA"
[[part]]
ref = "K1"
resistance = "400 ohm"
inductance = "0.5 H"
capacitance = "20 pF"
[[accepted]]
rule = "input-mismatch"
subject = "Q1"
reason = "active antenna, matched at the far end"
by = "RF lead"
until = 2027-06-30
[[accepted]]
fingerprint = "0123abcd"
reason = "known"
by = "me"
until = "2027-07-01"
"""


def read(folder: Path, text: str) -> Intent:
    path = folder / "board.intent.toml"
    path.write_text(text, encoding="utf-8")
    return read_intent(path)


def trouble(folder: Path, text: str) -> InputTrouble:
    with pytest.raises(InputTrouble) as caught:
        read(folder, text)
    assert caught.value.file.endswith("board.intent.toml")
    return caught.value


def line_of(text: str, fragment: str) -> int:
    return text[: text.index(fragment)].count("\n") + 1


def test_whole_file(tmp_path: Path) -> None:
    intent = read(tmp_path, WHOLE)
    assert intent.band == Band(low_hz=3e6, high_hz=20e6)
    assert intent.ambient == Ambient(min_c=-10.0, nominal_c=25.0, max_c=55.0)
    assert [(r.net, r.volts, r.tolerance, r.may_be_absent) for r in intent.rails] == [
        ("+12V", 12.0, None, False),
        ("-5V", -5.0, None, False),
        ("+5V", 5.0, 0.05, True),
    ]
    antenna, output = intent.ports
    assert (antenna.net, antenna.role, antenna.impedance_ohm, antenna.attach) == ("ANT", "input", 50.0, True)
    assert (output.part, output.pin, output.role, output.attach) == ("J2", "1", "output", False)
    assert output.band == Band(low_hz=0.0, high_hz=10.7e6)
    (state,) = intent.states
    assert (state.name, dict(state.pins), state.absent) == ("reset", {"U1.7": "open", "U1.8": 2.4}, ("+5V",))
    gain, corner, current = intent.targets
    assert (gain.stage, gain.quantity, gain.minimum, gain.maximum) == ("Q1", "voltage_gain_db", 18.0, 24.0)
    assert (corner.source, corner.to, corner.minimum, corner.maximum) == ("antenna", "IF", None, 3000.0)
    assert (current.group, current.minimum) == ("Q1+Q2", 0.9)
    assert intent.limits == {"input-mismatch": {"return_loss_db": 14.0}}
    transistor, relay = intent.parts
    assert transistor.ratings == {"p_max_w": 0.3, "tj_max_c": 125.0, "i_max_a": 0.1}
    assert (transistor.ref, transistor.card, transistor.tolerance) == ("Q3", "generic-npn", 0.1)
    assert (relay.resistance_ohm, relay.inductance_h, relay.capacitance_f) == (400.0, 0.5, 20e-12)
    first, second = intent.accepted
    assert (first.rule, first.subject, first.until) == ("input-mismatch", "Q1", datetime.date(2027, 6, 30))
    assert (second.fingerprint, second.until) == ("0123abcd", datetime.date(2027, 7, 1))


def test_every_entry_has_its_line(tmp_path: Path) -> None:
    intent = read(tmp_path, WHOLE)
    found = [entry.origin.line for entry in (*intent.rails, *intent.ports, *intent.states, *intent.targets)]
    wanted = [line_of(WHOLE, f'"{net}" =') for net in ("+12V", "-5V", "+5V")]
    for header in ("[[port]]", "[[state]]", "[[target]]"):
        wanted += [n for n, line in enumerate(WHOLE.splitlines(), start=1) if line == header]
    assert found == wanted
    assert intent.limit_lines == {"input-mismatch": line_of(WHOLE, "[limits.")}


def test_empty_file_is_an_empty_intent(tmp_path: Path) -> None:
    intent = read(tmp_path, "")
    assert (intent.band, intent.rails, intent.ports, intent.limits) == (None, (), (), {})


@pytest.mark.parametrize(
    ("written", "peak_v"),
    [
        # by definition: 0 dBm is 1 mW, 0.2236 V r.m.s. across a load of 50 ohm, and the e.m.f. twice that
        ("0 dBm", 2 * math.sqrt(2) * math.sqrt(1e-3 * 50)),
        ("-30 dBm", 0.02),  # 1 uW: 2 sqrt(2 * 1e-6 * 50) = 20 mV
        ("10 mV", 10e-3 * math.sqrt(2)),
        ("10 mVrms", 10e-3 * math.sqrt(2)),
        ("1 Vpp", 0.5),
        ("100 mVpp", 0.05),
        ("100 mVpk", 0.1),
        ("0.1 Vp", 0.1),
    ],
)
def test_levels_are_peak_emf(tmp_path: Path, written: str, peak_v: float) -> None:
    text = f'[[port]]\nname="a"\nnet="A"\nrole="input"\nimpedance=50\nlevel="{written}"\n'
    assert read(tmp_path, text).ports[0].level_v == pytest.approx(peak_v, rel=1e-12)


PORT = '[[port]]\nname = "a"\nnet = "A"\nrole = "input"\n'
SLIPS = [
    # a misspelt key, value or header, at every place that has keys
    (WHOLE.replace("impedance", "impedence", 1), "impedence", "did you mean 'impedance'?"),
    (WHOLE.replace("[ambient]", "[ambiant]"), "[ambiant]", "did you mean 'ambient'?"),
    (WHOLE.replace("[[port]]", "[[ports]]"), "[[ports]]", "did you mean 'port'?"),
    (WHOLE.replace("nominal", "nomnal"), "nomnal", "did you mean 'nominal'?"),
    (WHOLE.replace('role = "input"', 'role = "inptu"'), "inptu", "did you mean 'input'?"),
    (WHOLE.replace('tolerance = "5', 'tolerence = "5'), "tolerence", "did you mean 'tolerance'?"),
    (WHOLE.replace("quantity", "quantitiy", 1), "quantitiy", "did you mean 'quantity'?"),
    (WHOLE.replace("p_max_w", "pmax_w"), "pmax_w", "did you mean 'p_max_w'?"),
    (WHOLE.replace("until", "untill", 1), "untill", "did you mean 'until'?"),
    # a key swallowed by the table above it
    ("[rails]\nVCC = 5\nband = { low = 1, high = 2 }\n", "band", "'band' stands inside [rails]"),
    ("[rails]\nVCC = 5\n[rails.ambient]\nmin = 1\n", "[rails.amb", "'ambient' stands inside [rails]"),
    ("[rails]\nVCC = 5\nlow = '3 MHz'\n", "low", "'low' is a key of 'band'"),
    ("[limits.x]\na = 1\naccepted = 2\n", "accepted", "'accepted' stands inside [limits.x]"),
    ("[limits]\nband = { low = 1 }\n", "band", "'band' stands inside [limits]"),
    ("[band]\nlow = 1\nhigh = 2\nambient = { min = 1 }\n", "ambient", "write it as [ambient]"),
    ("[[state]]\nname = 's'\n[state.pins]\n'U1.1' = 'high'\nabsent = ['V']\n", "absent", "move it above"),
    ("low = '3 MHz'\n", "low", "'low' is a key of 'band'"),
    # values
    ("[band]\nlow = 2\nhigh = 1\n", "low", "not below 'high'"),
    ("[band]\nlow = -2\nhigh = 1\n", "low", "negative"),
    ("[band]\nlow = 1\nhigh = inf\n", "high", "finite"),
    ("[band]\nlow = 1\nhigh = nan\n", "high", "finite"),
    ("[band]\nlow = 1\nhigh = 1" + "0" * 400 + "\n", "high", "finite"),
    ("[band]\nlow = 1\nhigh = true\n", "high", "got true"),
    ("[band]\nlow = 1\nhigh = '3 V'\n", "high", "a number in Hz"),
    ("[band]\nlow = 1\n", "[band]", "lacks 'high'"),
    ("[ambient]\nmin = -300\n", "min", "absolute zero"),
    ("[ambient]\nmin = 30\nmax = 20\n", "min", "above 'max'"),
    ("[rails]\nVCC = []\n", "VCC", "got a list"),
    ("[rails]\nVCC = { volts = 5, tolerance = 5 }\n", "VCC", "from 0 to 1"),
    ("[rails]\nVCC = { volts = 5, tolerance = '150 %' }\n", "VCC", "from 0 to 1"),
    ("[rails]\nVCC = { tolerance = 0.1 }\n", "VCC", "lacks 'volts'"),
    ("[[rails]]\nVCC = 5\n", "[[rails]]", "must be written as [rails]"),
    ("[port]\nname = 'a'\n", "[port]", "must be written as [[port]]"),
    (PORT + "impedance = 0\n", "impedance", "not above 0"),
    (PORT + "level = '-30 dBm'\n", "level", "has no impedance"),
    (PORT + "level = 3\n", "level", "a level with its unit"),
    (PORT + "level = '3 A'\n", "level", "a level with its unit"),
    (PORT + "level = '0 V'\n", "level", "above zero"),
    (PORT + "impedance = 50\nlevel = '9e9 dBm'\n", "level", "finite"),
    (PORT + "part = 'J1'\n", "[[port]]", "'net', or 'part' and 'pin'"),
    (PORT.replace('net = "A"', 'part = "J1"'), "[[port]]", "'net', or 'part' and 'pin'"),
    (PORT + PORT, "", "used twice, first in line 2"),
    ("[[state]]\nname = 's'\npins = { U1 = 'high' }\n", "pins", "write the part and the pin"),
    ("[[state]]\nname = 's'\npins = { 'U1.1' = 'hi' }\n", "pins", '"high", "low", "open"'),
    ("[[state]]\nname = 's'\nabsent = 'V'\n", "absent", "a list of texts"),
    ("[[target]]\nstage = 'Q1'\nquantity = 'x_hz'\n", "[[target]]", "'min', 'max' or both"),
    ("[[target]]\nstage = 'Q1'\nquantity = 'x_hz'\nmin = 2\nmax = 1\n", "min = ", "above 'max'"),
    ("[[target]]\nstage = 'Q1'\nquantity = 'x_hz'\nmin = '2 dB'\n", "min = ", "a number in Hz"),
    ("[[target]]\nfrom = 'a'\nquantity = 'x_hz'\nmin = 1\n", "[[target]]", "'from' and 'to'"),
    (
        "[[target]]\nstage = 'Q1'\ngroup = 'Q1+Q2'\nquantity = 'x'\nmin = 1\n",
        "[[target]]",
        "got 'stage', 'group'",
    ),
    ("[[part]]\nref = 'Q1'\nv_max_v = 1\nratings = { v_max_v = 2 }\n", "ratings", "given twice"),
    ("[[part]]\nref = 'Q1'\nresistance = 0\n", "resistance", "not above 0"),
    ("[[accepted]]\nreason = 'r'\nby = 'b'\nrule = 'x'\n", "[[accepted]]", "'rule' and 'subject', or"),
    ("[[accepted]]\nreason = 'r'\nby = 'b'\nfingerprint = 'x'\nuntil = 'May'\n", "until", "a day such as"),
    ("[[accepted]]\nreason = ''\nby = 'b'\nfingerprint = 'x'\n", "reason", "a text in quotes"),
    ("[limits]\nx = 1\n", "x = ", "[limits.x]"),
    ("[limits.x]\na = true\n", "a = ", "got true"),
    # not TOML, or not for us
    ("a b\n", "a b", "not valid TOML"),
    ("[band]\nlow = 1\nlow = 2\n", "low = 2", "not valid TOML"),
    ("[band]\nlow = ", "low", "not valid TOML"),
    ("a." * MAX_DOTTED + "b = 1\n", "a.", "parts"),
    ("# " + "x" * MAX_LINE + "\n", "#", "characters"),
]


@pytest.mark.parametrize(("text", "fragment", "said"), SLIPS)
def test_a_slip_is_named_with_its_line(tmp_path: Path, text: str, fragment: str, said: str) -> None:
    fault = trouble(tmp_path, text)
    assert said in fault.message
    if fragment:
        assert fault.line == line_of(text, fragment)


def test_a_quoted_bare_tolerance_is_a_fraction(tmp_path: Path) -> None:
    intent = read(tmp_path, '[rails]\nVCC = { volts = 5, tolerance = "0.05" }\n')
    assert intent.rails[0].tolerance == 0.05


def test_lines_are_found_past_long_texts_and_below_lists(tmp_path: Path) -> None:
    text = (
        "[[port]]\nname = 'a'\nnet = 'A'\nrole = 'input'\n"
        "[[accepted]]\nby = 'b'\nfingerprint = 'f'\nreason = '''\\x\nrole = 1\n'''\n"
        "[[port]]\nname = 'b'\nnet = 'B'\nrole = 'output'\n[port.band]\nlow = 3\nhigh = 1\n"
    ).replace("'''\\x\nrole = 1\n'''", '"""\\\n  role = 1\\\n  """')
    assert trouble(tmp_path, text).line == line_of(text, "low = 3")


@pytest.mark.parametrize(
    ("raw", "said"),
    [
        (b"a = '\xff'", "not UTF-8"),
        (b"#" * (MAX_BYTES + 1), "larger than"),
        (b"a = " + b"[\n" * 100_000, "nested too deeply"),
        (b"a = 1" + b"0" * 1900, ""),
        (b"\x00", "not valid TOML"),
    ],
)
def test_hostile_bytes_get_one_message(tmp_path: Path, raw: bytes, said: str) -> None:
    path = tmp_path / "x.toml"
    path.write_bytes(raw)
    with pytest.raises(InputTrouble) as caught:
        read_intent(path)
    assert said in str(caught.value)


def test_deep_dotted_keys_take_no_time(tmp_path: Path) -> None:
    """The TOML reader is quadratic in the parts of a key; the bound on dots keeps the worst file short."""
    line = ".a" * (MAX_DOTTED - 1)
    text = "\n".join(f"k{number}{line} = 1" for number in range(MAX_BYTES // 4 // (len(line) + 11)))
    start = time.perf_counter()
    trouble(tmp_path, text)
    assert time.perf_counter() - start < 5.0


def test_a_missing_file_and_a_folder_are_input_troubles(tmp_path: Path) -> None:
    for path in (tmp_path / "none.toml", tmp_path):
        with pytest.raises(InputTrouble, match="cannot read the intent file"):
            read_intent(path)


def test_byte_order_mark_and_crlf(tmp_path: Path) -> None:
    path = tmp_path / "x.toml"
    path.write_bytes(b"\xef\xbb\xbf[band]\r\nlow = 1\r\nhigh = 2\r\n")
    assert read_intent(path).band == Band(low_hz=1.0, high_hz=2.0)
    path.write_bytes(b"[band]\r\nlow = 1\r\nhihg = 2\r\n")
    with pytest.raises(InputTrouble, match="did you mean 'high'") as caught:
        read_intent(path)
    assert caught.value.line == 3


def test_names_that_later_layers_know(tmp_path: Path) -> None:
    intent = read(tmp_path, WHOLE)
    check_quantity(intent, {"voltage_gain_db", "low_corner_hz", "current_gain"})
    check_limits(intent, {"input-mismatch": ("return_loss_db",), "other": ()})
    with pytest.raises(InputTrouble, match="did you mean 'low_corner'") as caught:
        check_quantity(intent, {"voltage_gain_db", "low_corner", "current_gain"})
    assert caught.value.line == [n for n, text in enumerate(WHOLE.splitlines(), 1) if text == "[[target]]"][1]
    with pytest.raises(InputTrouble, match="did you mean 'input-match'"):
        check_limits(intent, {"input-match": ("return_loss_db",)})
    with pytest.raises(InputTrouble, match="did you mean 'return_loss'") as caught:
        check_limits(intent, {"input-mismatch": ("return_loss",)})
    assert caught.value.line == line_of(WHOLE, "[limits.")


def test_which_file_belongs_to_a_netlist(tmp_path: Path) -> None:
    netlist = tmp_path / "board.v2.net"
    assert find_intent(netlist) is None
    (tmp_path / "intent.toml").write_text("")
    assert find_intent(netlist) == tmp_path / "intent.toml"
    (tmp_path / "board.v2.intent.toml").write_text("")
    assert find_intent(netlist) == tmp_path / "board.v2.intent.toml"
