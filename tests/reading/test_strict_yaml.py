"""What the reader accepts, what each word means, and where each refusal points."""

import copy
import json
import pickle
from decimal import Decimal

import pytest
import yaml
from hypothesis import given
from hypothesis import strategies as st

from builder.read import document as module
from builder.read.document import CODES, Literal, read_document
from builder.read.findings import Place
from builder.read.text import MOST_BYTES

PARSERS = {
    "python": yaml.BaseLoader,
    "libyaml": yaml.CBaseLoader if yaml.__with_libyaml__ else yaml.BaseLoader,
}


@pytest.fixture(params=list(PARSERS))
def parser(request, monkeypatch):
    """Every example must read the same with both parsers."""
    monkeypatch.setattr(module, "_PARSER", PARSERS[request.param])


def read(text: str):
    document, findings = read_document(text.encode(), "x.yaml")
    assert [str(finding) for finding in findings] == []
    return document


def found(data: bytes | str):
    data = data.encode() if isinstance(data, str) else data
    document, findings = read_document(data, "x.yaml")
    assert (document is None) == bool(findings)
    assert {finding.level for finding in findings} <= {"error"}
    return [(finding.code, finding.place.line, finding.place.column) for finding in findings]


NEARLY_NUMBERS = """
1_000 010 08 .5 5. +2 0x1F 0o17 0b1 1e400 -1e400 1e-400 .nan .inf -.inf NaN Infinity 1.e5 -.5e3 00
"""

# The places were counted by hand in the text; a tab, a return and a mark are one column each.
FAILING = [
    ("read-too-large", b"# " + b"x" * MOST_BYTES, 1, 1),
    ("read-not-utf8", "a: 1\nname: é".encode() + b"\xe9\n", 2, 8),
    ("read-not-utf8", "a: 1\n".encode("utf-16"), 1, 1),
    ("read-byte-order-mark", "\ufeffa: 1\n", 1, 1),
    ("read-line-ending", "a: 1\nb: 2\r\nc: 3\r\n", 2, 5),
    ("read-line-ending", "a: 1\rb: 2\n", 1, 5),
    ("read-tab", "a: 1\nb:\t2\n", 2, 3),
    ("read-control-character", "a: 1\nb: x\x00y\n", 2, 5),
    ("read-control-character", "a: 1 # \u202e\n", 1, 8),
    ("read-control-character", "a: 1\u200b0\n", 1, 5),
    ("read-control-character", 'a: "x\\u202ey"\n', 1, 4),
    ("read-control-character", 'a: "x\\ty"\n', 1, 4),
    ("read-control-character", '"x\\0y": 1\n', 1, 1),
    ("read-number-comma", "a: 1,5\n", 1, 4),
    ("read-number-comma", "a: 13,774.5\n", 1, 4),
    ("read-number-comma", "a: 5,35e-13\n", 1, 4),
    ("read-number-minus", "a:\n  b: \u22124.5\n", 2, 6),
    ("read-number-minus", "a: 1e\u22125\n", 1, 4),
    ("read-number-minus", "a: \u20134,5\n", 1, 4),
    *[("read-number-form", f"a: {word}\n", 1, 4) for word in NEARLY_NUMBERS.split()],
    ("read-empty", b"", 1, 1),
    ("read-empty", "# only a remark\n", 1, 1),
    ("read-empty", "---\n", 1, 1),
    ("read-syntax", "a: 1\nb: c: d\n", 2, 5),
    ("read-syntax", "a: p. 12: x\n", 1, 9),
    ("read-syntax", "a: @x\n", 1, 4),
    ("read-syntax", "a: %x\n", 1, 4),
    ("read-syntax", "a:\n  b: 'never closed\n\nc: 1\n", 2, 6),
    ("read-syntax", "a:\n  b: 1\n c: 2\n", 3, 2),
    ("read-syntax", "a: [1, 2\nb: 2\n", 2, 2),
    ("read-syntax", 'a: "\\q"\n', 1, 4),
    ("read-syntax", "# remark\n%YAML 1.1\n---\na: 1\n", 2, 1),
    ("read-several-documents", "a: 1\n---\nb: 2\n", 2, 1),
    ("read-too-deep", "[" * 21 + "]" * 21, 1, 21),
    ("read-duplicate-key", "a: 1\nb:\n  c: 1\n  'c': 2\n", 4, 3),
    ("read-key-not-text", "a: 0\n1.5: 2\n", 2, 1),
    ("read-key-not-text", "true: 2\n", 1, 1),
    ("read-key-not-text", "010: 2\n", 1, 1),
    ("read-key-not-text", "? [a, b]\n: 1\n", 1, 3),
    ("read-key-not-text", "'': 1\n", 1, 1),
    ("read-merge-key", "a:\n  <<: {b: 1}\n", 2, 3),
    ("read-anchor", "a: &x 1\n", 1, 4),
    ("read-anchor", "&k a: 1\n", 1, 1),
    ("read-tag", "a: !!str 1\n", 1, 4),
    ("read-tag", "a: ! 12\n", 1, 4),
    ("read-tag", "a: !python/object:os.system {}\n", 1, 4),
    ("read-empty-value", "a: 1\nb:\nc: 2\n", 2, 1),
    ("read-empty-value", "a: 1\nb: {s}\n", 2, 5),
    ("read-empty-value", "a:\n- 1\n-\n", 3, 2),
]


@pytest.mark.parametrize(("code", "data", "line", "column"), FAILING)
@pytest.mark.usefixtures("parser")
def test_each_refusal_has_its_code_and_place(code, data, line, column):
    assert found(data) == [(code, line, column)]


@pytest.mark.usefixtures("parser")
def test_an_alias_is_refused_beside_its_anchor():
    data = "a: &x 1\nb: *x\n"
    assert found(data) == [("read-anchor", 1, 4), ("read-alias", 2, 4)]


def test_every_code_has_a_failing_example():
    assert {code for code, *_ in FAILING} | {"read-alias"} == set(CODES)


# Each word is read as something else by YAML 1.1; here only JSON numbers and three words are not
# text. The expected values are typed, not computed.
SCALARS = [
    ("1e-10", 1e-10), ("6.02e23", 6.02e23), ("1.0e10", 1e10), ("1e5", 1e5), ("1E+5", 1e5),
    ("10.1021", 10.1021), ("1.10", 1.1), ("-0.5", -0.5), ("0", 0.0), ("-6", -6.0),
    ("NO", "NO"), ("No", "No"), ("on", "on"), ("off", "off"), ("yes", "yes"), ("Y", "Y"),
    ("n", "n"), ("1:2", "1:2"), ("3:2", "3:2"), ("1:30", "1:30"), ("2026-01-15", "2026-01-15"),
    ("2026-1-5", "2026-1-5"), ("2+", "2+"), ("Pb^2+", "Pb^2+"), ("~", "~"), ("True", "True"),
    ("NULL", "NULL"), ("=", "="), ("1 5", "1 5"), ("10-11", "10-11"), ("1\u20132", "1\u20132"),
    ("1,2,3", "1,2,3"), ("InF", "InF"), ("7446-14-2", "7446-14-2"), ("\u0661", "\u0661"),
    ("a #b", "a"), ("true", True), ("false", False), ("null", None), ("'1,5'", "1,5"),
    ('"1.10"', "1.10"), ("'null'", "null"), ("''", ""), ("'\u22124'", "\u22124"),
]  # fmt: skip


@pytest.mark.parametrize(("written", "value"), SCALARS)
@pytest.mark.usefixtures("parser")
def test_words_become_numbers_only_where_json_would_say_so(written, value):
    read_back = read(f"a: {written}\n").value["a"]
    assert read_back == value
    assert isinstance(read_back, Literal) == isinstance(value, float)
    if isinstance(read_back, Literal):
        assert read_back.text == written


def test_a_number_keeps_its_characters_through_copies():
    number = read("a: 1.10\n").value["a"]
    for same in (number, copy.deepcopy(number), pickle.loads(pickle.dumps(number))):
        assert (same, same.text) == (1.1, "1.10")
    assert hash(number) == hash(1.1)
    assert json.dumps(number) == "1.1"


@pytest.mark.usefixtures("parser")
def test_all_findings_come_in_one_run():
    data = "a: &x 1\na: 1,5\nb:\nc: [*x, +2, !t y]\n? {z: 1}\n: 010\nb: 1\n---\nd: 1\n"
    assert [code for code, *_ in found(data)] == [
        "read-anchor",
        "read-duplicate-key",
        "read-number-comma",
        "read-empty-value",
        "read-alias",
        "read-number-form",
        "read-tag",
        "read-key-not-text",
        "read-number-form",
        "read-duplicate-key",
        "read-several-documents",
    ]


def test_unsound_characters_do_not_hide_the_structure():
    data = "\ufeffa:\t1\r\nb: 1,5\r\na: 2\r\n"
    assert found(data) == [
        ("read-byte-order-mark", 1, 1),
        ("read-line-ending", 1, 5),
        ("read-tab", 1, 3),
        ("read-number-comma", 2, 4),
        ("read-duplicate-key", 3, 1),
    ]


def test_syntax_broken_by_an_unsound_character_is_no_finding_of_its_own():
    assert found("a:\n  b: 1\n\tc: 2\n") == [("read-tab", 3, 1)]
    assert found("a:\n  b: 1\n c: 2\n") == [("read-syntax", 3, 2)]


def test_all_lines_with_a_tab_are_named_in_one_finding():
    _, findings = read_document(b"a: 1\nb:\t2\nc: 3\nd:\t4\n", "x.yaml")
    assert [finding.found for finding in findings] == ["a tab (U+0009; lines 2, 4)"]


def test_an_alias_bomb_is_refused_and_never_unfolded():
    lines = ["a0: &a0 [x,x,x,x,x,x,x,x,x]"]
    lines += [f"a{n}: &a{n} [{','.join([f'*a{n - 1}'] * 9)}]" for n in range(1, 8)]
    codes = [code for code, *_ in found("\n".join(lines))]
    assert (codes.count("read-anchor"), codes.count("read-alias")) == (8, 63)


@pytest.mark.usefixtures("parser")
def test_limits_are_met_exactly():
    assert found("[" * 20 + "]" * 20) == []
    padding = b"a: 1\n#" + b"x" * (MOST_BYTES - 6)
    assert len(padding) == MOST_BYTES
    assert found(padding) == []


SAMPLE = """\
# invented
name: "lé\U0001f9ea"
laws:
  - id: one
    range: [0, 60]
    note: |
      two lines
      of text

  - {id: two, range: {low: 5, high: 40}}
last:
    deep: a
    long: some words
      folded
"""


@pytest.mark.usefixtures("parser")
@pytest.mark.parametrize(
    ("path", "key_place", "place"),
    [
        ((), (2, 1), (2, 1)),
        (("name",), (2, 1), (2, 7)),
        (("laws",), (3, 1), (4, 3)),
        (("laws", 0), (4, 5), (4, 5)),
        (("laws", 0, "range", 1), (5, 16), (5, 16)),
        (("laws", 0, "note"), (6, 5), (6, 11)),
        (("laws", 1, "range", "high"), (10, 31), (10, 37)),
        (("last", "long"), (13, 5), (13, 11)),
    ],
)
def test_places_of_values_and_keys(path, key_place, place):
    document = read(SAMPLE)
    assert document.key_place(path) == Place("x.yaml", *key_place)
    assert document.place(path) == Place("x.yaml", *place)


@pytest.mark.usefixtures("parser")
@pytest.mark.parametrize(
    ("path", "key", "order", "place"),
    [
        ((), "formula", ["name", "formula", "laws"], (3, 1)),  # before the next key present
        ((), "formula", ["name", "formula", "absent", "last"], (11, 1)),
        ((), "history", ["name", "laws", "history"], (14, 1)),  # none follows: the last line
        (("laws", 0), "source", ["id", "range", "note", "source"], (8, 5)),
        (("laws", 1), "source", ["id", "range", "source"], (10, 5)),
        (("last",), "unlisted", ["deep"], (14, 5)),
    ],
)
def test_a_missing_key_is_placed_where_it_would_stand(path, key, order, place):
    assert read(SAMPLE).missing_place(path, key, order) == Place("x.yaml", *place)


def test_values_are_found_by_path():
    document = read(SAMPLE)
    assert document.at(("laws", 1, "range", "low")) == 5
    with pytest.raises(KeyError):
        document.at(("nothing",))


sound = st.text(st.characters(exclude_categories=["Cc", "Cf", "Cs", "Co", "Cn", "Zl", "Zp"]))
numbers = st.integers(-(10**9), 10**9) | st.floats(allow_nan=False, allow_infinity=False)
json_values = st.recursive(
    st.none() | st.booleans() | numbers | sound.filter(lambda text: "\ufffd" not in text),
    lambda inner: (
        st.lists(inner, max_size=4)
        | st.dictionaries(st.text("abcé#: {", min_size=1, max_size=8), inner, max_size=4)
    ),
    max_leaves=12,
)


@given(json_values)
def test_json_is_read_as_the_json_library_reads_it(value):
    written = json.dumps(value, ensure_ascii=False)
    document = read(written)
    assert document.value == json.loads(written)


@given(st.decimals(allow_nan=False, allow_infinity=False, min_value=-(10**6), max_value=10**6))
def test_numbers_are_the_nearest_float_of_their_decimal_text(number):
    written = f"{number:f}"
    value = read(f"a: {written}\n").value["a"]
    assert (value, value.text) == (float(Decimal(written)), written)


SIGNS = r"""
a b 1 1,5 - -1 : , [ ] { } ? & * ! !! % @ ` | > ' " # \ ~ << --- ... 0x1 1e999 \UFFFFFFFF \ud800 \x
"""
SPACES_AND_ODD_ONES = [" ", "\n", "  ", "\n  ", ": ", "- ", "\t", "\r\n", '"', "'", "\u2212"]
SPACES_AND_ODD_ONES += ["\u2028", "\ufeff", "\x85", "\x00", "\r", "\ud7ff", "\U0010ffff", "é"]
PIECES = """
a b a: '' "" 1 010 1,5 &x *x !t <<: ?: - [a] {b:} | > #c {*x: [&y a, *y]}
"""
yaml_like = st.lists(
    st.sampled_from(SIGNS.split()) | st.sampled_from(SPACES_AND_ODD_ONES), max_size=40
).map("".join)
yaml_lines = st.lists(
    st.builds(
        lambda indent, start, *rest: " " * indent + start + " ".join(rest),
        st.integers(0, 3),
        st.sampled_from(["", "a: ", "b: ", "- ", "? ", ": ", "- a: ", "'a': ", "*x : ", "&y c: "]),
        st.sampled_from(PIECES.split()),
        st.sampled_from(["", *PIECES.split()]),
    ),
    max_size=8,
).map("\n".join)


@pytest.mark.parametrize("name", list(PARSERS))
@given(data=st.binary(max_size=300) | (yaml_like | yaml_lines).map(lambda text: text.encode()))
def test_no_bytes_make_the_reader_raise(name, data):
    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(module, "_PARSER", PARSERS[name])
        document, findings = read_document(data, "x.yaml")
    assert (document is None) == bool(findings)
    lines = data.count(b"\n") + data.count(b"\r") + 2
    for finding in findings:
        assert finding.code in CODES
        assert len(str(finding).splitlines()) == 1
        assert 1 <= finding.place.line <= lines
        assert finding.place.column >= 1


@given(yaml_like | yaml_lines)
def test_what_is_accepted_has_the_structure_a_plain_reader_sees(text):
    """Against the YAML library's own composer, which keeps every word as text."""
    document, _ = read_document(text.encode(), "x.yaml")
    if document is not None:
        assert as_texts(document.value) == yaml.load(text, Loader=yaml.BaseLoader)


def as_texts(value):
    if isinstance(value, dict):
        return {key: as_texts(item) for key, item in value.items()}
    if isinstance(value, list):
        return [as_texts(item) for item in value]
    if isinstance(value, Literal):
        return value.text
    return value if isinstance(value, str) else json.dumps(value)
