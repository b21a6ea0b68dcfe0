"""What a small file can blow up to is bounded, by limits that name their option."""

from __future__ import annotations

import pytest

from checker.netlist.limits import ReadLimits
from checker.trouble import InputTrouble
from tests.netlist.conftest import Read

SMALL = ReadLimits(parts=100, elements=1_000)
START = "* t\nR1 a 0 1k\nR2 a 0 1k\n"


@pytest.mark.parametrize(
    ("text", "option"),
    [
        (START + ".nonsense\n" * 200, "parts"),
        (START + "? what\n" * 200, "parts"),
        (START + ".param a=1\n" * 200, "parts"),
        (START + "V1 a 0 PWL(" + "1 " * 2_000 + ")\n", "elements"),
        (START + ".param " + "a=1 " * 2_000 + "\n", "elements"),
        (START + ".model d1 d(" + "is=1," * 2_000 + ")\n", "elements"),
        ("(export (components " + "(comp)" * 200 + "))", "parts"),
        ("(export (components) (nets " + "(net (code 1))" * 1_200 + "))", "elements"),
        ("(export (components) (nets (net " + "(node (ref R1) (pin 1))" * 1_200 + ")))", "elements"),
        ("(export (components " + "()" * 6_000 + "))", "elements"),
    ],
)
def test_what_can_be_repeated_is_bounded(read: Read, text: str, option: str) -> None:
    with pytest.raises(InputTrouble, match=rf"limit of \d+; .*--most-{option} raises it"):
        read(text, limits=SMALL)
    # Within the default limits the same text is no trouble.
    read(text)


def test_a_long_card_of_few_words_is_none(read: Read) -> None:
    text = f"{START}V1 a 0 PWL({'1 ' + ' ' * 5_000})\n"
    assert len(read(text, limits=SMALL).parts) == 3
