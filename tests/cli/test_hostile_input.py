"""Netlists made to harm, through the real command line: one message and status 2, or a report in which every name is
harmless."""

from __future__ import annotations

import json
import os
import re
from collections.abc import Callable
from pathlib import Path
from xml.etree import ElementTree as Xml

import pytest

from checker.netlist.limits import ReadLimits
from checker.report.forms import FORMS
from tests.boards.writer import SAMPLES, kicad_export
from tests.cli.conftest import Done

Call = Callable[..., Done]
PLAIN = "R1 a 0 1k\nR2 a 0 1k\n"
EXPORT = '(export (version "E") (components (comp (ref "R1") (value "1k"))) (nets (net (code "1") (name "A"))))'


def nested(count: int, inner: str) -> str:
    """Subcircuits that each hold the next."""
    heads = "".join(f".subckt s{level} a\n" for level in range(count))
    return heads + inner + ".ends\n" * count


def levels(count: int, width: int) -> str:
    """Each level instantiates the next `width` times."""
    parts = "".join(f".subckt s{n} a\n" + f"X{{}} a s{n + 1}\n" * width + ".ends\n" for n in range(count))
    parts = re.sub(r"X\{\}", lambda found: f"X{found.start()}", parts)
    return f"{parts}.subckt s{count} a\n.ends\nX1 b s0\n"


def refused(done: Done, *words: str) -> None:
    """One line on standard error, nothing on standard output."""
    assert (done.status, done.out) == (2, "")
    assert done.err.startswith("stageproof: ") and done.err.count("\n") == 1 and "Traceback" not in done.err
    assert all(word in done.err for word in words), done.err


@pytest.mark.parametrize(
    ("content", "words"),
    [
        (b"* t\nR1 a 0 1\0k\n", ("board.net:2", "NUL")),
        (EXPORT.encode()[:60], ("board.net:1", "cut off")),
        (EXPORT.encode()[:-3], ("board.net:1", "cut off")),
        (("* t\n" + PLAIN).encode("utf-16")[:-1], ("board.net", "UTF-16")),
        (bytes(range(256)) * 40, ("board.net",)),
        (b"\x7fELF" + bytes(range(1, 32)) * 100, ("board.net", "binary")),
        (b"", ("board.net", "empty")),
        (b"(export (version E) (components" + b"(" * 100_000, ("board.net:1", "--most-depth")),
        (b"* t\n.subckt a x\nX1 x a\n.ends\nX1 1 a\n", ("--most-depth",)),
        (b"* t\nR1 a 0 {" + b"(" * 100_000 + b"1}\n", ("board.net:2", "--most-")),
        (("* t\n" + levels(12, 10)).encode(), ("--most-elements",)),
        (b"* t\nR1 a 0 1\n.include board.net\n", ("board.net:3", "includes itself")),
    ],
)
def test_refused_with_one_message(content: bytes, words: tuple[str, ...], tmp_path: Path, call: Call) -> None:
    path = tmp_path / "board.net"
    path.write_bytes(content)
    refused(call("check", str(path), "--most-elements", "50000"), *words)


def test_a_ring_of_includes_and_of_links(tmp_path: Path, call: Call) -> None:
    for name, other in (("a.lib", "b.lib"), ("b.lib", "a.lib")):
        (tmp_path / name).write_text(f".include {other}\n")
    path = tmp_path / "board.net"
    path.write_text(f"* t\n{PLAIN}.include a.lib\n")
    refused(call("check", str(path)), "b.lib:1", "includes itself")
    (tmp_path / "ring").symlink_to(tmp_path / "ring")
    path.write_text(f"* t\n{PLAIN}.include ring\n.include ring/x\n")
    assert call("check", str(path)).err == ""
    link = tmp_path / "link.net"
    link.symlink_to(link)
    assert call("check", str(link)).status == 2


@pytest.mark.parametrize(
    "escape", ["link.lib", "linked/secret.lib", "../secret.lib", "inner/../../secret.lib", "{abs}"]
)
def test_no_include_leaves_the_folder(escape: str, tmp_path: Path, call: Call) -> None:
    """By a link to a file, a link to a folder, dots or an absolute path; with the folder allowed it is read."""
    secret, board = tmp_path / "out" / "secret.lib", tmp_path / "out" / "board"
    (board / "inner").mkdir(parents=True)
    secret.write_text("R9 a 0 {hidden}\n.param hidden=42\n")
    (board / "link.lib").symlink_to(secret)
    (board / "linked").symlink_to(secret.parent)
    path = board / "board.net"
    path.write_text(f"* t\n{PLAIN}.include {escape.format(abs=secret)}\n")
    done = call("check", str(path), "--as", "json")
    assert "R9" not in done.out and "is not in the netlist's folder" in done.out
    allowed = call("check", str(path), "--as", "json", "--include-from", str(secret.parent))
    assert '"R9"' in allowed.out


def test_what_is_no_plain_file(tmp_path: Path, call: Call) -> None:
    """A pipe would wait for ever, a device never end."""
    os.mkfifo(tmp_path / "pipe.net")
    for path in (tmp_path / "pipe.net", Path("/dev/zero"), tmp_path / "absent.net"):
        refused(call("check", str(path), "--intent", __file__) if not path.exists() else call("check", str(path)))
    board = tmp_path / "board.net"
    board.write_text(f"* t\n{PLAIN}.include pipe.net\n")
    assert "is not in the netlist's folder" in call("check", str(board)).out.replace("\n    ", " ")


@pytest.mark.parametrize("number", ["1e400", "1e999999999", "9" * 400, "{10^400}", "{1e308*10}", "1e30"])
def test_a_number_beyond_all_measure_is_named(number: str, tmp_path: Path, call: Call) -> None:
    """It makes its own part unknown; the board is read on."""
    path = tmp_path / "board.net"
    path.write_text(f"* t\n{PLAIN}R3 a 0 {number}\n.model QX NPN(BF={number})\nQ1 a a 0 QX\n")
    done = call("check", str(path), "--as", "json")
    report = json.loads(done.out)
    assert done.err == "" and report["faults"] == []
    assert "R3" in {gap["subject"] for gap in report["unchecked"] if gap["location"]["line"] == 4}


def test_the_limits_are_those_that_the_help_promises(call: Call) -> None:
    limits = ReadLimits()
    assert (limits.bytes, limits.parts, limits.depth) == (32 * 1024 * 1024, 200_000, 64)
    assert (limits.elements, limits.steps) == (1_000_000, 10_000)
    options = call("check", "--help").out.split("--most-")[1:]
    told = {name: int(bound) for name, bound in re.findall(r"(\w+) .*?default:\s+(\d+)", "".join(options), re.DOTALL)}
    assert told == {name: getattr(limits, name) for name in ("bytes", "parts", "depth", "elements", "steps")}


@pytest.mark.parametrize(
    ("option", "most", "more", "raised"),
    [
        ("parts", f"* t\n{PLAIN}" + ".op\n" * 199_998, ".op\n", 200_001),
        ("depth", "* t\n" + PLAIN + nested(64, ""), "", 64),
        ("depth", f"* t\n{PLAIN}R3 a 0 {{{'(' * 64}1{')' * 64}}}\n", "", 64),
        ("steps", f"* t\n{PLAIN}R3 a 0 {{{'1+' * 4_999}1}}\n", "", 10_000),
    ],
)
def test_the_default_limit_itself_is_allowed(
    option: str, most: str, more: str, raised: int, tmp_path: Path, call: Call
) -> None:
    path = tmp_path / "board.net"
    path.write_text(most)
    assert call("intent", str(path)).status == 0
    if more:
        path.write_text(most + more)
        refused(call("intent", str(path)), f"limit of {raised - 1};", f"--most-{option}")
        assert call("intent", str(path), f"--most-{option}", str(raised)).status == 0


@pytest.mark.parametrize(
    ("option", "bound", "raised", "text"),
    [
        ("bytes", 33_554_432, 40_000_000, f"* t\n{PLAIN}" + f"* {'x' * 2**20}\n" * 32),
        ("depth", 64, 100, "* t\n" + PLAIN + nested(65, "")),
        ("depth", 64, 100, f"* t\n{PLAIN}R3 a 0 {{{'(' * 66}1{')' * 66}}}\n"),
        ("depth", 64, 100, EXPORT.replace("(nets", f"{'(' * 64}{')' * 64}(nets")),
        ("steps", 10_000, 20_000, f"* t\n{PLAIN}R3 a 0 {{{'1+' * 5_001}1}}\n"),
        ("elements", 1_000_000, 1_000_010, f"* t\n{PLAIN}V1 a 0 PWL({'1 ' * 1_000_000})\n"),
    ],
)
def test_a_default_limit_holds_and_its_option_raises_it(
    option: str, bound: int, raised: int, text: str, tmp_path: Path, call: Call
) -> None:
    path = tmp_path / "board.net"
    path.write_text(text)
    refused(call("intent", str(path)), f"limit of {bound};", f"--most-{option} raises it")
    assert call("intent", str(path), f"--most-{option}", str(raised)).status == 0


def test_includes_too_deep_by_default(tmp_path: Path, call: Call) -> None:
    for index in range(70):
        (tmp_path / f"f{index}.lib").write_text(f".include f{index + 1}.lib\n" if index < 69 else "* end\n")
    path = tmp_path / "board.net"
    path.write_text(f"* t\n{PLAIN}.include f0.lib\n")
    refused(call("intent", str(path)), "limit of 64;", "--most-depth")
    assert call("intent", str(path), "--most-depth", "80").status == 0


EVIL = "N\x1b]0;owned\x07\u202eevil\u2066</td><script>[a](http://e.example)|`b`'&#%{0}\x85@x\u200b"


@pytest.fixture
def evil_board(tmp_path: Path) -> str:
    """The follower with a fault, a net, a reference, a value, a sheet and a title of such names."""
    text = (SAMPLES / "audio_follower" / "audio_follower.cir").read_text("utf-8")
    export = kicad_export("audio_follower", text)
    for name in ("COL1", "R3", "C2"):
        assert f'"{name}"' in export
        export = export.replace(f'"{name}"', f'"{name}{EVIL}"')
    export = export.replace('(names "/")', f'(names "/{EVIL}/")').replace('(title "', f'(title "{EVIL}')
    export = export.replace("(nets", f'(nets (net (code "99") (name "X{EVIL}") (node (ref "Z{EVIL}") (pin "1")))', 1)
    path = tmp_path / "board.net"
    path.write_text(export, "utf-8")
    intent = (SAMPLES / "audio_follower" / "audio_follower.intent.toml").read_text("utf-8")
    path.with_suffix(".intent.toml").write_text(intent, "utf-8")
    return str(path)


def harmless(text: str) -> None:
    """Every line can be printed: no control, escape, invisible or bidirectional character."""
    assert text.count("\n") > 10
    assert [line for line in text.split("\n") if not line.isprintable()] == []


@pytest.mark.parametrize("form", list(FORMS))
def test_names_are_neutralised_in_every_form(form: str, evil_board: str, call: Call) -> None:
    done = call("check", evil_board, "--as", form)
    assert done.status == 1 and done.err == ""
    harmless(done.out)
    if form == "json":
        report = json.loads(done.out)
        assert f"COL1{EVIL}" in report["nets"]
    elif form == "junit":
        assert list(Xml.fromstring(done.out).iter("testcase"))  # noqa: S314 - our own output
        assert "<script" not in done.out
    elif form == "sarif":
        assert json.loads(done.out)["runs"]
    elif form == "markdown":
        assert not re.search(r"(?<!\\)<script|(?<!\\)\[a\]\(http", done.out)
    else:
        assert "<U+202E>" in done.out


@pytest.mark.parametrize("command", [["specs"], ["intent"], ["why", "Q1"], ["why", "Q2"]])
def test_names_are_neutralised_by_every_command(command: list[str], evil_board: str, call: Call) -> None:
    done = call(command[0], evil_board, *command[1:])
    assert done.err == "" and done.status in (0, 1)
    harmless(done.out)


@pytest.mark.parametrize("form", ["text", "markdown", "json"])
def test_names_are_neutralised_in_comparisons(form: str, evil_board: str, call: Call) -> None:
    old = str(SAMPLES / "audio_follower" / "audio_follower.net")
    done = call("compare", old, evil_board, "--as", form)
    assert done.err == "" and done.status in (0, 1)
    harmless(done.out)


def test_names_in_messages_are_neutralised(tmp_path: Path, call: Call) -> None:
    path = tmp_path / "board.net"
    path.write_text(f"* t\nR1 a 0 1\n.include x{EVIL}\n.subckt {EVIL.split(']')[0]} a\n" * 70, "utf-8")
    done = call("check", str(path))
    refused(done)
    harmless(done.err + "\n" * 10)
