"""Shapes: JSON Schema 2020-12 with findings that say where, what, and what would be right.

Only the keywords of ``_KEYWORDS`` may be used, so that each has a message of its own and a
misspelt one is no silent hole; the schema for a kind is chosen in Python, never by anyOf.
``cure`` (a sentence) and ``examples`` are annotations used in messages. Patterns are anchored at
both ends and read ``\\d``, ``\\w`` and ``\\s`` as ASCII.
"""

import difflib
import json
import math
import pathlib
import re
from collections.abc import Iterable, Iterator, Mapping
from typing import Any

from jsonschema import Draft202012Validator, SchemaError, ValidationError, validators

from builder.read.document import Document, Literal, Path, Value
from builder.read.findings import Finding, Place, quoted, shortened

# Code of every finding made here, and its cure where the schema gives none.
CODES: Mapping[str, str] = {
    "shape-missing-key": "add it",
    "shape-unknown-key": "remove it",
    "shape-wrong-type": "write a value of that kind",
    "shape-pattern": "write it in that form",
    "shape-not-listed": "write one of the list",
    "shape-range": "write a number within the limits",
    "shape-too-many": "remove what is too much",
    "shape-too-few": "add what is missing",
    "shape-repeated": "keep one of them",
    "shape-empty": "write a value, or remove the key",
}

_CODE_OF = {
    "required": "shape-missing-key",
    "additionalProperties": "shape-unknown-key",
    "type": "shape-wrong-type",
    "pattern": "shape-pattern",
    "enum": "shape-not-listed",
    "const": "shape-not-listed",
    "minimum": "shape-range",
    "maximum": "shape-range",
    "exclusiveMinimum": "shape-range",
    "exclusiveMaximum": "shape-range",
    "minItems": "shape-too-few",
    "minLength": "shape-too-few",
    "minProperties": "shape-too-few",
    "maxItems": "shape-too-many",
    "maxLength": "shape-too-many",
    "maxProperties": "shape-too-many",
    "uniqueItems": "shape-repeated",
}
_KEYWORDS = {*_CODE_OF, "properties", "items", "propertyNames", "$ref", "$defs"}
_ANNOTATIONS = {"$schema", "$id", "$comment", "title", "description", "cure", "examples"}
_LIMITS = {
    "minimum": "below",
    "maximum": "above",
    "exclusiveMinimum": "not above",
    "exclusiveMaximum": "not below",
}
_UNITS = {"Items": "item", "Length": "character", "Properties": "key"}
_TYPES = {
    "string": "text",
    "number": "a number",
    "integer": "a whole number",
    "boolean": "true or false",
    "null": "null",
    "array": "a list",
    "object": "a mapping",
}


class ShapeFolderError(Exception):
    """A schema is broken or missing: a fault of the builder's own files, not of the data."""


class Shapes:
    """The schemas of a folder, each with its validator, built once."""

    def __init__(self, validators_by_name: Mapping[str, Any]) -> None:
        self._validators = validators_by_name

    @classmethod
    def from_folder(cls, folder: pathlib.Path) -> "Shapes":
        """All ``*.json`` of the folder under their names without ``.json``."""
        built = {}
        for file in sorted(folder.glob("*.json")):
            try:
                schema = json.loads(file.read_text(encoding="utf-8"))
                Draft202012Validator.check_schema(schema)
                _refuse_loose_ends(schema, "#")
            except (OSError, ValueError) as wrong:
                raise ShapeFolderError(f"{file.name}: {wrong}") from wrong
            except SchemaError as wrong:
                raise ShapeFolderError(
                    f"{file.name}: {wrong.json_path}: {wrong.message}"
                ) from wrong
            built[file.stem] = _VALIDATOR(schema)
        if not built:
            raise ShapeFolderError(f"no schema (*.json) in {folder}")
        return cls(built)

    def check(self, name: str, document: Document, path: Path = ()) -> list[Finding]:
        """Findings about the document's value at the path, against the schema of that name."""
        errors = self._validators[name].iter_errors(document.at(path))
        found = (_finding(document, (*path, *error.absolute_path), error) for error in errors)
        return list(dict.fromkeys(found))  # a text that is empty fails its pattern as well


def _refuse_loose_ends(schema: Any, where: str) -> None:
    """Raise ValueError for a keyword without a message here, or an object that is left open."""
    if not isinstance(schema, dict):
        return
    if unknown := sorted(set(schema) - _KEYWORDS - _ANNOTATIONS):
        raise ValueError(f"{where}: the keyword {unknown[0]!r} is not used here")
    properties = schema.get("properties", {})
    if "properties" in schema and "additionalProperties" not in schema:
        raise ValueError(f"{where}: properties without additionalProperties")
    if strangers := [key for key in schema.get("required", ()) if key not in properties]:
        raise ValueError(f"{where}: the required key {strangers[0]!r} is not among the properties")
    if not schema.get("$ref", "#").startswith("#"):
        raise ValueError(f"{where}: $ref leads to another file")
    for group in ("properties", "$defs"):
        for key, inner in schema.get(group, {}).items():
            _refuse_loose_ends(inner, f"{where}/{group}/{key}")
    for keyword in ("items", "additionalProperties", "propertyNames"):
        _refuse_loose_ends(schema.get(keyword), f"{where}/{keyword}")


# The keywords below differ from the library's: one error a key with the key as its message,
# anchored patterns, and numbers by the characters they were written with.


def _required(_: Any, keys: list[str], instance: Any, __: Any) -> Iterator[ValidationError]:
    if isinstance(instance, dict):
        yield from (ValidationError(key) for key in keys if key not in instance)


def _additional(validator: Any, rule: Any, instance: Any, schema: Any) -> Iterator[ValidationError]:
    if not isinstance(instance, dict):
        return
    for key in (key for key in instance if key not in schema.get("properties", {})):
        if rule is False:
            yield ValidationError(key)
        else:
            yield from validator.descend(instance[key], rule, path=key, schema_path=key)


def _pattern(_: Any, pattern: str, instance: Any, __: Any) -> Iterator[ValidationError]:
    if isinstance(instance, str) and not re.fullmatch(pattern, instance, re.ASCII):
        yield ValidationError("")


def _is_number(_: Any, value: Any) -> bool:
    is_one = isinstance(value, int | float) and not isinstance(value, bool)
    return is_one and math.isfinite(value)


def _is_whole(_: Any, value: Any) -> bool:
    if isinstance(value, Literal):
        return value.text.removeprefix("-").isdecimal()
    return isinstance(value, int) and not isinstance(value, bool)


_extend: Any = validators.extend  # its published types are incomplete
_VALIDATOR = _extend(
    Draft202012Validator,
    {"required": _required, "additionalProperties": _additional, "pattern": _pattern},
    type_checker=Draft202012Validator.TYPE_CHECKER.redefine_many(
        {"number": _is_number, "integer": _is_whole}
    ),
)


def _finding(document: Document, path: Path, error: Any) -> Finding:
    """The finding for one error of the library; the path is that of the value in the document."""
    code = _CODE_OF[str(error.validator)]
    if code in ("shape-too-few", "shape-pattern") and error.instance in ("", [], {}):
        code = "shape-empty"
    if code == "shape-repeated":
        path = (*path, next(i for i, one in enumerate(error.instance) if one in error.instance[:i]))
        error.instance = document.at(path)
    found = _found(code, error) + _crumbs(document, path)
    return Finding("error", code, _place(code, document, path, error), found, _cure(code, error))


def _place(code: str, document: Document, path: Path, error: Any) -> Place:
    if code == "shape-missing-key":
        return document.missing_place(path, error.message, list(error.schema["properties"]))
    if code == "shape-unknown-key":
        return document.key_place((*path, error.message))
    if "propertyNames" in error.absolute_schema_path:
        return document.key_place((*path, error.instance))
    return document.place(path)


def _found(code: str, error: Any) -> str:
    keyword, limit, value = error.validator, error.validator_value, _shown(error.instance)
    match code:
        case "shape-missing-key":
            return f"no key {quoted(error.message)}"
        case "shape-unknown-key":
            return f"the unknown key {quoted(error.message)}"
        case "shape-wrong-type":
            kinds = [limit] if isinstance(limit, str) else limit
            return f"{value} instead of {' or '.join(_TYPES[kind] for kind in kinds)}"
        case "shape-pattern":
            return f"{value}, which has not the form asked for"
        case "shape-not-listed":
            return f"{value}, which is not in the list"
        case "shape-range":
            return f"{value}, which is {_LIMITS[keyword]} {limit}"
        case "shape-repeated":
            return f"{value} a second time"
        case "shape-empty":
            return value
    units = f"{_UNITS[keyword[3:]]}{'' if len(error.instance) == 1 else 's'}"
    most = "at most" if code == "shape-too-many" else "at least"
    return f"{value} ({len(error.instance)} {units}, where {most} {limit} belong)"


def _cure(code: str, error: Any) -> str:
    """The cure of the schema, else one from its examples, its lists or its pattern."""
    schema = error.schema
    if code == "shape-unknown-key":
        return _nearest(error.message, schema.get("properties", {}), f"{CODES[code]}; known keys")
    if code == "shape-missing-key":
        schema = schema["properties"][error.message]
    if isinstance(schema, dict) and "cure" in schema:
        return str(schema["cure"])
    if code == "shape-wrong-type" and isinstance(error.instance, Literal):
        if schema["type"] == "string":
            return f'put it in quotes: "{error.instance.text}"'
    elif code == "shape-not-listed":
        return _nearest(error.instance, schema.get("enum", [schema.get("const")]), "the list")
    if isinstance(schema, dict) and schema.get("examples"):
        return f"{CODES[code]}, for example {_written(schema['examples'][0])}"
    if code == "shape-pattern":
        return f"{CODES[code]}: {schema['pattern']}"
    return CODES[code]


def _nearest(word: Any, options: Iterable[Any], otherwise: str) -> str:
    listed = [str(option) for option in options]
    near = difflib.get_close_matches(str(word), listed, 1)
    return f"did you mean {quoted(near[0])}?" if near else f"{otherwise}: {', '.join(listed)}"


def _written(value: Any) -> str:
    """An example as it could stand in the file."""
    return shortened(value if isinstance(value, str) else json.dumps(value, ensure_ascii=False))


def _shown(value: Value) -> str:
    """A value in a message, long ones shortened."""
    if isinstance(value, str):
        return f"the text {quoted(value)}" if value else "an empty text"
    if isinstance(value, list):
        return f"a list of {len(value)}" if value else "an empty list"
    if isinstance(value, dict):
        return f"a mapping ({shortened(', '.join(value), 60)})" if value else "an empty mapping"
    if isinstance(value, Literal):
        return f"the number {shortened(value.text)}"
    return json.dumps(value)


def _crumbs(document: Document, path: Path) -> str:
    """The way to the value in words: `` (laws 'powell-2009', range)``; items by their id."""
    words: list[str] = []
    for depth, step in enumerate(path):
        if isinstance(step, str):
            words.append(step)
            continue
        item = document.at(path[: depth + 1])
        name = item.get("id") if isinstance(item, dict) else None
        label = quoted(name, 60) if isinstance(name, str) else f"item {step + 1}"
        words[-1:] = [f"{words[-1]} {label}" if words else label]
    return f" ({', '.join(words)})" if words else ""
