"""Each sample board is one circuit in two formats with one intent file."""

from __future__ import annotations

import tomllib

import pytest

from tests.boards.writer import SAMPLES, kicad_export, placed_parts

BOARDS = sorted(path.name for path in SAMPLES.iterdir() if path.is_dir())


def test_the_boards_are_there() -> None:
    wanted = {"receiver_input", "coax_cascade", "audio_follower", "audio_follower_fixed", "relay_driver"}
    assert wanted <= set(BOARDS)


@pytest.mark.parametrize("board", BOARDS)
def test_both_formats_are_one_circuit(board: str) -> None:
    folder = SAMPLES / board
    text = (folder / f"{board}.cir").read_text("utf-8")
    assert (folder / f"{board}.net").read_text("utf-8") == kicad_export(board, text)


@pytest.mark.parametrize("board", BOARDS)
def test_the_intent_names_nets_and_parts_of_the_board(board: str) -> None:
    folder = SAMPLES / board
    parts = placed_parts((folder / f"{board}.cir").read_text("utf-8"))
    refs = {part.ref for part in parts}
    nets = {net for part in parts for net in part.nets}
    intent = tomllib.loads((folder / f"{board}.intent.toml").read_text("utf-8"))
    ports = intent.get("port", [])
    named = set(intent["rails"]) | {port["net"] for port in ports}
    assert named <= nets
    pins = {pin.split(".")[0] for state in intent.get("state", []) for pin in state["pins"]}
    assert {part["ref"] for part in intent.get("part", [])} | pins <= refs
    targets = intent.get("target", [])
    ends = {target[end] for target in targets for end in ("from", "to") if end in target}
    assert ends <= {port["name"] for port in ports}


def test_the_corrected_audio_board_differs_in_four_values_only() -> None:
    names = ("audio_follower", "audio_follower_fixed")
    texts = [(SAMPLES / name / f"{name}.cir").read_text("utf-8") for name in names]
    planted, corrected = ({(p.ref, p.nets): p.value for p in placed_parts(text)} for text in texts)
    assert planted.keys() == corrected.keys()
    changed = {ref for ref, nets in planted if planted[ref, nets] != corrected[ref, nets]}
    assert changed == {"R2", "R3", "C2", "C3"}
