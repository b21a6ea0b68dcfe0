"""The JSON Schema of the report, made from the record's classes and the texts below their fields."""

from __future__ import annotations

import ast
import inspect
import types
from collections.abc import Mapping
from dataclasses import fields
from pathlib import Path
from typing import Any, Literal, Union, get_args, get_origin, get_type_hints

from checker.record.base import Record, has_default, key_of
from checker.record.report import Report

SHIPPED = Path(__file__).with_name("schema.json")
"""The schema as shipped; a test holds it equal to `schema()`."""


def schema() -> dict[str, Any]:
    """JSON Schema (draft 2020-12) of `stageproof-report/1`. Needs the package's source files."""
    definitions: dict[str, Any] = {}
    root = _class(Report, definitions)
    return {
        "$schema": "https://json-schema.org/draft/2020-12/schema",
        "title": "Stageproof report",
        **root,
        "$defs": dict(sorted(definitions.items())),
    }


def _class(kind: type[Record], definitions: dict[str, Any]) -> dict[str, Any]:
    hints, meanings = get_type_hints(kind), _meanings(kind)
    each = fields(kind)
    types_of = {f.name: _type(hints[f.name], definitions) for f in each}
    return {
        "type": "object",
        "description": inspect.cleandoc(kind.__doc__ or ""),
        "properties": {key_of(name): {**of, "description": meanings[name]} for name, of in types_of.items()},
        "required": [key_of(f.name) for f in each if not has_default(f)],
    }


def _meanings(kind: type[Record]) -> dict[str, str]:
    """The text that stands below each field."""
    body = ast.parse(inspect.getsource(kind)).body[0]
    assert isinstance(body, ast.ClassDef)  # noqa: S101 - the source of a class is a class
    meanings: dict[str, str] = {}
    for field, text in zip(body.body, body.body[1:], strict=False):
        if isinstance(field, ast.AnnAssign) and isinstance(text, ast.Expr):
            meanings[ast.unparse(field.target)] = " ".join(str(ast.literal_eval(text.value)).split())
    return meanings


_SCALARS = {str: "string", bool: "boolean", int: "integer", float: "number", type(None): "null"}


def _type(hint: Any, definitions: dict[str, Any]) -> dict[str, Any]:
    origin, args = get_origin(hint), get_args(hint)
    if hint in _SCALARS:
        return {"type": _SCALARS[hint]}
    if origin in (Union, types.UnionType):
        return {"anyOf": [_type(each, definitions) for each in args]}
    if origin is Literal:
        return {"enum": list(args)}
    if origin is Mapping:
        return {"type": "object", "additionalProperties": _type(args[1], definitions)}
    if origin is tuple:
        return _array(args, definitions)
    if hint.__name__ not in definitions:
        definitions[hint.__name__] = {}  # holds the place while the class is described
        definitions[hint.__name__] = _class(hint, definitions)
    return {"$ref": f"#/$defs/{hint.__name__}"}


def _array(args: tuple[Any, ...], definitions: dict[str, Any]) -> dict[str, Any]:
    if args[-1] is Ellipsis:
        return {"type": "array", "items": _type(args[0], definitions)}
    items = [_type(each, definitions) for each in args]
    size = {"minItems": len(items), "maxItems": len(items)}
    return {"type": "array", "prefixItems": items, "items": False, **size}
