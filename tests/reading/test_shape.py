"""Shapes: one failing example a code with its place, and what the messages must say.

The schema and the records are invented.
"""

import json

import pytest

from builder.read.document import Document, Literal, read_document
from builder.read.findings import Place
from builder.read.shape import CODES, ShapeFolderError, Shapes

POINT = {
    "type": "object",
    "properties": {
        "id": {"type": "string", "pattern": "[a-z-]+", "cure": "write words like lead-sulfate"},
        "temperature": {"type": "number", "minimum": -5, "exclusiveMaximum": 400},
        "count": {"type": "integer", "exclusiveMinimum": 0, "maximum": 9, "examples": [3]},
        "note": {"type": ["string", "null"], "minLength": 1, "maxLength": 10},
        "page": {"type": "string", "minLength": 1, "pattern": "^p\\d+$", "examples": ["p12"]},
    },
    "required": ["id", "temperature", "count"],
    "additionalProperties": False,
}
RECORD = {
    "$schema": "https://json-schema.org/draft/2020-12/schema",
    "type": "object",
    "properties": {
        "version": {"const": "one"},
        "kind": {"enum": ["measured", "computed"]},
        "points": {"type": "array", "items": {"$ref": "#/$defs/point"}, "minItems": 2},
        "tags": {"type": "array", "uniqueItems": True, "minItems": 1, "maxItems": 3},
        "parts": {
            "type": "object",
            "propertyNames": {"pattern": "[A-Z][a-z]?"},
            "additionalProperties": {"type": "number"},
            "minProperties": 1,
            "maxProperties": 2,
        },
    },
    "required": ["version", "kind", "points", "tags", "parts"],
    "additionalProperties": False,
    "$defs": {"point": POINT},
}
SOUND = """\
version: one
kind: measured
points:
  - id: first
    temperature: 25
    count: 1
  - id: second
    temperature: 37.5
    count: 2
    note: null
    page: p7
tags: [a, b]
parts:
  Pb: 1
  O: 4
"""


@pytest.fixture(scope="module")
def shapes(tmp_path_factory):
    folder = tmp_path_factory.mktemp("schema")
    (folder / "record.json").write_text(json.dumps(RECORD))
    (folder / "point.json").write_text(json.dumps(POINT))
    return Shapes.from_folder(folder)


def check(shapes, text, name="record", path=()):
    document, findings = read_document(text.encode(), "x.yaml")
    assert findings == []
    return shapes.check(name, document, path)


def test_a_sound_record_has_no_finding(shapes):
    assert check(shapes, SOUND) == []


# Code, what is replaced in the sound record and by what, place, pieces of the message.
FAILING = [
    ("shape-missing-key", "    temperature: 25\n", "", 5, 5, ["no key 'temperature'", "'first'"]),
    ("shape-missing-key", "version: one\n", "", 1, 1, ["no key 'version'"]),
    ("shape-missing-key", "    count: 1\n", "", 5, 5, ["for example 3"]),
    ("shape-unknown-key", "note:", "nota:", 10, 5, ["'nota'", "did you mean 'note'?"]),
    ("shape-unknown-key", "note:", "zzzz:", 10, 5, ["known keys: id, temperature, count, note"]),
    ("shape-wrong-type", "25", "'25'", 5, 18, ["text '25' instead of a number (points 'first', "]),
    ("shape-wrong-type", "25", "true", 5, 18, ["true instead of a number"]),
    ("shape-wrong-type", "count: 1", "count: 1.0", 6, 12, ["number 1.0 instead of a whole number"]),
    ("shape-wrong-type", "count: 1", "count: 1e0", 6, 12, ["a whole number", "for example 3"]),
    ("shape-wrong-type", "page: p7", "page: 1.10", 11, 11, ['put it in quotes: "1.10"']),
    ("shape-wrong-type", "note: null", "note: [a]", 10, 11, ["a list of 1", "text or null"]),
    ("shape-wrong-type", "id: second", "id: null", 7, 9, ["null instead of text (points item 2"]),
    ("shape-wrong-type", "{SOUND}", "[a]", 1, 1, ["a list of 1 instead of a mapping"]),
    ("shape-pattern", "id: first", "id: First", 4, 9, ["'First'", "lead-sulfate"]),
    ("shape-pattern", "id: first", 'id: "first\\n"', 4, 9, ["'first\\u000a'"]),
    ("shape-pattern", "p7", "xp7", 11, 11, ["for example p12"]),
    ("shape-pattern", "p7", "p7x", 11, 11, ["for example p12"]),
    ("shape-pattern", "p7", '"p7\\n"', 11, 11, ["for example p12"]),
    ("shape-pattern", "p7", "p\u0667", 11, 11, ["for example p12"]),
    ("shape-pattern", "  O: 4", "  oxygen: 4", 15, 3, ["'oxygen'", "[A-Z][a-z]?"]),
    ("shape-not-listed", "kind: measured", "kind: mesured", 2, 7, ["mean 'measured'?"]),
    ("shape-not-listed", "kind: measured", "kind: 5", 2, 7, ["list: measured, computed"]),
    ("shape-not-listed", "version: one", "version: two", 1, 10, ["the list: one"]),
    ("shape-range", "25", "-5.5", 5, 18, ["the number -5.5, which is below -5"]),
    ("shape-range", "25", "400", 5, 18, ["400, which is not below 400"]),
    ("shape-range", "count: 1", "count: 0", 6, 12, ["0, which is not above 0"]),
    ("shape-range", "count: 1", "count: 10", 6, 12, ["10, which is above 9"]),
    ("shape-too-many", "[a, b]", "[a, b, c, d]", 12, 7, ["4 items, where at most 3 belong"]),
    ("shape-too-many", "note: null", "note: long enough", 10, 11, ["11 characters", "most 10"]),
    ("shape-too-many", "  O: 4", "  O: 4\n  H: 2", 14, 3, ["3 keys, where at most 2 belong"]),
    (
        "shape-too-few",
        "  - id: second\n    temperature: 37.5\n    count: 2\n    note: null\n    page: p7\n",
        "",
        4,
        3,
        ["1 item, where at least 2 belong"],
    ),
    ("shape-repeated", "[a, b]", "[a, b, a]", 12, 14, ["'a' a second time (tags item 3)"]),
    ("shape-empty", "[a, b]", "[]", 12, 7, ["an empty list (tags)"]),
    ("shape-empty", "note: null", "note: ''", 10, 11, ["an empty text"]),
    ("shape-empty", "p7", "''", 11, 11, ["an empty text (points 'second', page)"]),
    ("shape-empty", "parts:\n  Pb: 1\n  O: 4", "parts: {}", 13, 8, ["an empty mapping (parts)"]),
]  # fmt: skip


@pytest.mark.parametrize(("code", "old", "new", "line", "column", "pieces"), FAILING)
def test_each_finding_has_its_code_place_and_words(shapes, code, old, new, line, column, pieces):
    damaged = SOUND.replace(old, new, 1) if old != "{SOUND}" else new
    assert damaged != SOUND
    [finding] = check(shapes, damaged)
    assert (finding.level, finding.code) == ("error", code)
    assert finding.place == Place("x.yaml", line, column)
    assert [piece for piece in pieces if piece not in str(finding)] == []
    assert len(str(finding).splitlines()) == 1


def test_every_code_has_a_failing_example():
    assert {code for code, *_ in FAILING} == set(CODES)


def test_a_deleted_line_is_reported_within_one_line_of_the_damage(shapes):
    """Every line with a key of its own that the record requires; 'points:' and 'parts:' are no
    lines of their own, since what stands below them then belongs elsewhere."""
    lines = SOUND.splitlines(keepends=True)
    required = ("version", "kind", "tags", "    temperature", "    count")
    places = [n for n, line in enumerate(lines) if line.startswith(required)]
    assert len(places) == 7
    for n in places:
        findings = check(shapes, "".join(lines[:n] + lines[n + 1 :]))
        assert [finding.code for finding in findings] == ["shape-missing-key"]
        assert abs(findings[0].place.line - (n + 1)) <= 1


def test_all_findings_come_in_one_run(shapes):
    damaged = SOUND.replace("kind: measured\n", "").replace("25", "x").replace("[a, b]", "[a, a]")
    assert sorted(finding.code for finding in check(shapes, damaged)) == [
        "shape-missing-key",
        "shape-repeated",
        "shape-wrong-type",
    ]


def test_a_part_of_a_document_is_checked_with_places_of_the_whole(shapes):
    damaged = SOUND.replace("37.5", "375.5e3")
    [finding] = check(shapes, damaged, "point", ("points", 1))
    assert finding.place == Place("x.yaml", 8, 18)
    assert "points 'second', temperature" in finding.found


def test_long_values_are_shortened(shapes):
    keys = "".join(f"  K{n}: 1\n" for n in range(500))
    damaged = SOUND.replace("  Pb: 1\n  O: 4\n", keys).replace("measured", "x" * 5000)
    assert max(len(str(finding)) for finding in check(shapes, damaged)) < 400


@pytest.mark.parametrize("number", [float("nan"), float("inf"), float("-inf")])
def test_what_is_not_finite_is_no_number(shapes, number):
    value = {"id": "a", "temperature": number, "count": Literal("1")}
    spots = {(): (1, 1, 1, 1, 1), ("temperature",): (1, 1, 1, 1, 1), ("count",): (1, 1, 1, 1, 1)}
    findings = shapes.check("point", Document("x.yaml", value, spots))
    assert "shape-wrong-type" in [finding.code for finding in findings]


@pytest.mark.parametrize(
    ("schema", "words"),
    [
        ("{", "Expecting"),
        ('{"type": "txt"}', "txt"),
        ('{"type": "object", "requierd": ["a"]}', "'requierd'"),
        ('{"anyOf": [{"type": "string"}]}', "'anyOf'"),
        ('{"type": "object", "properties": {"a": {"format": "date"}}, '
         '"additionalProperties": false}', "#/properties/a: the keyword 'format'"),
        ('{"items": {"if": {}}}', "#/items: the keyword 'if'"),
        ('{"properties": {"a": {}}}', "without additionalProperties"),
        ('{"required": ["a"], "properties": {}, "additionalProperties": false}', "'a'"),
        ('{"$ref": "other.json"}', "another file"),
        ('{"$defs": {"a": {"pattern": "("}}}', "'(' is not a 'regex'"),
    ],
)  # fmt: skip
def test_a_broken_schema_is_refused_with_its_name(tmp_path, schema, words):
    (tmp_path / "bad.json").write_text(schema)
    with pytest.raises(ShapeFolderError) as caught:
        Shapes.from_folder(tmp_path)
    assert str(caught.value).startswith("bad.json: ")
    assert words in str(caught.value)


def test_a_folder_without_schemas_is_refused(tmp_path):
    with pytest.raises(ShapeFolderError):
        Shapes.from_folder(tmp_path / "nothing")
