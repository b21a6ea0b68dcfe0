"""The set-ups of docs/ci.md, each run as it is written there."""

from __future__ import annotations

import json
import os
import re
import subprocess
import sys
import threading
from collections.abc import Iterator
from http.server import BaseHTTPRequestHandler, HTTPServer
from pathlib import Path

import pytest

from checker.report.markup import MOST
from tests.compare.boards import SAMPLES, lay, text_of

ROOT = Path(__file__).resolve().parents[2]
BLOCKS = dict(
    re.findall(r"<!-- tried: (\w+) -->\n```sh\n(.*?)```", (ROOT / "docs" / "ci.md").read_text("utf-8"), re.DOTALL)
)
FAULTY = re.sub(r"(?m)^R2 VF B1 .*$", "R2 VF B1 2.7k", text_of("receiver_input"))
INTENT = SAMPLES / "receiver_input" / "receiver_input.intent.toml"

pytestmark = pytest.mark.skipif(sys.platform == "win32", reason="shell scripts")


def shell(script: str, folder: Path, **variables: str) -> subprocess.CompletedProcess[str]:
    return subprocess.run(
        ["sh", "-c", script], cwd=folder, env={**os.environ, **variables}, capture_output=True, text=True, timeout=300
    )


def git(folder: Path, *arguments: str) -> subprocess.CompletedProcess[str]:
    return subprocess.run(["git", *arguments], cwd=folder, capture_output=True, text=True)


@pytest.fixture
def repository(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Iterator[Path]:
    """A clean board on the branch `trunk`, and `stageproof` on the path."""
    programs = tmp_path / "bin"
    programs.mkdir()
    code = f"import sys; sys.path.insert(0, {str(ROOT)!r}); from checker.cli.main import main; main()"
    (programs / "stageproof").write_text(f'#!/bin/sh\nexec {sys.executable} -P -c "{code}" "$@"\n')
    (programs / "stageproof").chmod(0o755)
    monkeypatch.setenv("PATH", f"{programs}:{os.environ['PATH']}")
    for name in ("GIT_AUTHOR", "GIT_COMMITTER"):
        monkeypatch.setenv(f"{name}_NAME", "A")
        monkeypatch.setenv(f"{name}_EMAIL", "a@b.invalid")
    folder = tmp_path / "repository"
    lay(folder / "boards", text_of("receiver_input"), INTENT)
    git(folder, "init", "-q", "-b", "trunk")
    git(folder, "add", "-A")
    assert git(folder, "commit", "-qm", "first").returncode == 0
    yield folder


def hook(folder: Path, name: str) -> None:
    path = folder / ".git" / "hooks" / "pre-commit"
    path.parent.mkdir(exist_ok=True)
    path.write_text(BLOCKS[name])
    path.chmod(0o755)


def test_every_block_has_a_trial() -> None:
    assert BLOCKS.keys() == {"export", "hook", "job", "comment", "post", "new", "monorepo"}


def test_hook_checks_what_is_staged(repository: Path) -> None:
    hook(repository, "hook")
    (repository / "notes.txt").write_text("no netlist\n")
    git(repository, "add", "-A")
    assert git(repository, "commit", "-qm", "no netlist").returncode == 0
    lay(repository / "boards", FAULTY, INTENT)
    git(repository, "add", "-A")
    lay(repository / "boards", text_of("receiver_input"), INTENT)  # the working folder is clean, the index is not
    refused = git(repository, "commit", "-qm", "faulty")
    assert refused.returncode == 1 and "MUST FIX" in refused.stdout + refused.stderr
    git(repository, "add", "-A")
    lay(repository / "boards", FAULTY, INTENT)
    (repository / "boards" / "-x --out.net").write_text(text_of("receiver_input"))
    lay(repository / "boards", text_of("receiver_input"), INTENT, name="-x --out")
    git(repository, "add", "--", "boards/-x --out.net", "boards/-x --out.intent.toml")
    done = git(repository, "commit", "-qm", "clean")
    assert done.returncode == 0, done.stderr


def test_export_hook(repository: Path) -> None:
    hook(repository, "export")
    (repository / "boards" / "board.kicad_sch").write_text("(sheet)")
    git(repository, "add", "-A")
    refused = git(repository, "commit", "-qm", "schematic alone")
    assert refused.returncode == 1 and "its netlist did not" in refused.stderr
    (repository / "boards" / "board.net").write_text("(export)")
    git(repository, "add", "-A")
    assert git(repository, "commit", "-qm", "both").returncode == 0


def test_job(repository: Path) -> None:
    assert shell(BLOCKS["job"], repository).returncode == 0
    assert (repository / "reports" / "stageproof.sarif").is_file()
    lay(repository / "boards", FAULTY, INTENT)
    assert shell(BLOCKS["job"], repository).returncode == 1


class Host(BaseHTTPRequestHandler):
    """Takes a comment as the host of a repository would."""

    taken: list[tuple[str, str]] = []  # noqa: RUF012 - one server in one test

    def do_POST(self) -> None:
        body = self.rfile.read(int(self.headers["Content-Length"]))
        self.taken.append((self.headers["Authorization"], json.loads(body)["body"]))
        self.send_response(201)
        self.end_headers()

    def log_message(self, *_: object) -> None:
        """Keep quiet."""


def test_comment_is_made_and_posted(repository: Path) -> None:
    git(repository, "switch", "-q", "-c", "work")
    lay(repository / "boards", FAULTY, INTENT)
    git(repository, "commit", "-qam", "faulty")
    with HTTPServer(("127.0.0.1", 0), Host) as server:
        thread = threading.Thread(target=server.serve_forever)
        thread.start()
        url = f"http://127.0.0.1:{server.server_port}/comments"
        done = shell(BLOCKS["comment"] + BLOCKS["post"], repository, TARGET="trunk", COMMENTS_URL=url, TOKEN="t0")  # noqa: S106 - made up
        server.shutdown()
        thread.join()
    assert done.returncode == 1, done.stderr
    [(token, comment)] = Host.taken
    assert token.endswith(" t0") and comment.startswith("## Stageproof: ") and len(comment) < MOST
    assert "(new)" in comment and comment == (repository / "comment.md").read_text("utf-8")
    assert not (repository / ".base").exists()


def test_new_findings_alone(repository: Path) -> None:
    assert shell(BLOCKS["new"], repository, TARGET="trunk").returncode == 0
    git(repository, "switch", "-q", "-c", "work")
    lay(repository / "boards", FAULTY, INTENT)
    git(repository, "commit", "-qam", "faulty")
    assert shell(BLOCKS["new"], repository, TARGET="trunk").returncode != 0
    git(repository, "switch", "-q", "-c", "more")
    lay(repository / "boards", FAULTY.replace("* The antenna", "* An antenna"), INTENT)
    git(repository, "commit", "-qam", "as faulty as before")
    done = shell(BLOCKS["new"], repository, TARGET="work")
    assert done.returncode == 0 and "0 new" in done.stdout


def test_monorepo(repository: Path) -> None:
    for name in ("a", "b"):
        folder = repository / "projects" / name / "netlist"
        lay(folder, text_of("receiver_input"), INTENT, name="x")
        (folder / "x.cir").rename(folder / "x.net")
    assert shell(BLOCKS["monorepo"], repository).returncode == 0
    whole = json.loads((repository / "all.json").read_text("utf-8"))
    paths = [report["netlist"]["path"] for report in whole["reports"]]
    assert paths == ["boards/board.cir", "projects/a/netlist/x.net", "projects/b/netlist/x.net"]
