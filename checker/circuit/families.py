"""Families of integrated parts whose pins have a known way to act at rest, by type number or library.

Type numbers and library names are common practice of makers and of schematic editors, no source.
"""

from __future__ import annotations

import re
from typing import Final

from checker.circuit.parts import symbol_name
from checker.netlist.types import Part
from checker.pattern import lazy

_TWO_LEVEL: Final = lazy(
    r"(?:SN|MC|CD|HEF|HCF|TC|MM|M|NC7|U)?(?:74|54)[A-Z]{0,4}(?:[123]G)?\d{1,5}(?:[A-Z]{1,6}\d?)?"  # 7400 logic
    r"|(?:CD|HEF|HCF|TC|MC1)?4[05]\d{2,3}(?:U?B\w{0,3})?"  # 4000 logic
    r"|(?:NE|LM|SE|NA|TLC|ICM|LMC|CSS|KA|MC1|SA)?7?55[56]\w*"  # timers
    r"|(?:LM|LP|UA)?(?:2901|2903|3302|393|339|311)[A-Z]{0,3}|TLV3[245]\d\d\w*|TL331\w*"  # comparators
    r"|(?:PCA96|PCF85|TCA95|MCP23|TLC59|MAX72|MAX69)\d+\w*"  # expanders and drivers of lamps
    r"|(?:MAX|ST|SP|ADM|TRSF?|SN75|LT1)(?:2[0-4]\d|3(?:2[2-4]\d|38\d)|185|485)\w*|FT(?:232|230|231)\w*|CP210\w*|CH340\w*"
    r"|(?:TC44|MIC44|MCP14|UCC27|IR[S]?2)\d+\w*|A498[38]\w*",  # drivers of gates
    re.IGNORECASE,
)
_OPEN_COLLECTOR: Final = lazy(
    r"(?:LM|LP|UA)?(?:2901|2903|3302|393|339|311)[A-Z]{0,3}|TL331\w*|ULN2[08]\d\d\w*|TPIC6\w+", re.IGNORECASE
)
_CONTROLLER: Final = lazy(
    r"AT(?:MEGA|TINY|XMEGA|90|SAM|89)\w*|PIC(?:12|16|18|24|32)\w*|DSPIC\w*|STM(?:32|8)\w*|GD32\w*|CH32\w*"
    r"|ESP[-_]?(?:8266|32|WROOM|12|07|01)\w*|(?:RP20\d\d|RASPBERRY|NRF5\d|MSP430|MSPM0|LPC\d|MKL?\d|SAM[DC3]\d|EFM|K20DX)\w*"
    r"|\w*(?:ARDUINO|TEENSY|PRO[-_ ]?MI(?:CRO|NI)|BLUE_?PILL|NUCLEO|WEMOS|DAISY|PI_?PICO|FEATHER|XIAO)\w*",
    re.IGNORECASE,
)
_LOGIC_LIBRARY: Final = lazy(r"74\w*|4[x0]{3}\w*|logic\w*|timer\w*|comparator|interface_expansion", re.IGNORECASE)
_CONTROLLER_LIBRARY: Final = lazy(r"MCU\w*|atmel|cpu\w*|CPLD\w*|FPGA\w*|microcontrollers?|espressif", re.IGNORECASE)
_LETTERS: Final = frozenset({"U", "IC", "A", "M", "N", "MCU", "MOD", "DD", "X", ""})
_MAX_NAME: Final = 60


def type_names(part: Part) -> tuple[str, ...]:
    """What the part may be called: first word of the value, whole value, the symbol."""
    value = part.value[:_MAX_NAME]
    texts = (re.split(r"[\s(/,]", value, maxsplit=1)[0], value, symbol_name(part)[:_MAX_NAME])
    return tuple(re.split(r"[-_ ]", text, maxsplit=1)[0] if text.count("-") else text for text in texts) + texts


def _is(pattern: re.Pattern[str], part: Part) -> bool:
    return any(pattern.fullmatch(name) for name in type_names(part))


def _library(part: Part) -> str:
    return part.symbol.split(":", 1)[0] if ":" in part.symbol else ""


def is_controller(part: Part) -> bool:
    """A microcontroller or programmable part: its port pins are inputs after reset, and both levels occur."""
    if part.letter.upper() not in _LETTERS:
        return False
    return _is(_CONTROLLER, part) or bool(_CONTROLLER_LIBRARY.fullmatch(_library(part)))


def is_two_level(part: Part) -> bool:
    """A part whose outputs are either low or high: logic, timers, comparators, drivers."""
    if part.letter.upper() not in _LETTERS:
        return False
    return _is(_TWO_LEVEL, part) or _is(_OPEN_COLLECTOR, part) or bool(_LOGIC_LIBRARY.fullmatch(_library(part)))


def pulls_down_only(part: Part) -> bool:
    """A part whose outputs sink current or are open, whatever the symbol calls them."""
    return _is(_OPEN_COLLECTOR, part)
