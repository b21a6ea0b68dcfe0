"""The shipped JSON Schema: made from the classes, valid, and kept by what is written."""

from __future__ import annotations

import json
import subprocess
import sys
from typing import Any

import jsonschema  # type: ignore[import-untyped]
import pytest

from checker.record.describe import SHIPPED, schema
from checker.record.write import to_json
from tests.record.invented import report


def test_shipped_schema_is_the_one_made_from_the_classes() -> None:
    made = json.dumps(schema(), indent=2, ensure_ascii=False) + "\n"
    assert SHIPPED.read_text(encoding="utf-8") == made, "write schema() to checker/record/schema.json"


def test_report_keeps_the_schema() -> None:
    jsonschema.Draft202012Validator.check_schema(schema())
    jsonschema.validate(json.loads(to_json(report())), schema())


@pytest.mark.parametrize(
    ("key", "value"),
    [
        ("checked", {"stages": "3", "of": 4}),
        ("schema", "other"),
        ("stages", [{}]),
        ("findings", [{"rule": "x"}]),
    ],
)
def test_schema_refuses_what_is_wrong(key: str, value: Any) -> None:
    whole = json.loads(to_json(report()))
    whole[key] = value
    with pytest.raises(jsonschema.ValidationError):
        jsonschema.validate(whole, schema())


def test_every_field_has_a_meaning() -> None:
    for definition in (schema(), *schema()["$defs"].values()):
        assert definition["description"]
        for key, of in definition["properties"].items():
            assert of["description"].endswith("."), key


def test_import_is_light() -> None:
    code = "import sys, checker.record; print('numpy' in sys.modules, 'click' in sys.modules)"
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stdout == "False False\n"
