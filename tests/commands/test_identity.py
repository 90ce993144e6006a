"""Digests: the canonical form, known answers by an independent route, and what typing slips do."""

from __future__ import annotations

import hashlib
import json
from dataclasses import replace

import pytest
from hypothesis import given
from hypothesis import strategies as st
from running import shipped_inspection

from builder.collection.identity import (
    ALPHABET,
    canonical_json,
    check,
    collection_digest,
    digest,
    figure_digest,
    record_digest,
)
from builder.collection.records import Collection
from builder.read.document import Document, Literal, read_document


def by_hand(content: bytes) -> str:
    """The shown form from its description: SHA-256, 50 bits, Luhn modulo 32, in another way."""
    bits = "".join(f"{byte:08b}" for byte in hashlib.sha256(content).digest())[:50]
    codes = [int(bits[i : i + 5], 2) for i in range(0, 50, 5)]
    # The last of the ten is doubled, as it will stand beside the check character.
    total = 0
    for place, code in enumerate(codes):
        doubled = 2 * code if place % 2 == 1 else code
        total += doubled // 32 + doubled % 32
    codes.append((32 - total % 32) % 32)
    text = "".join("23456789ABCDEFGHJKLMNPQRSTUVWXYZ"[code] for code in codes)
    return text[:5] + "-" + text[5:]


@pytest.mark.parametrize(
    ("value", "form"),
    [
        ({"b": "2", "a": "1"}, b'{"a":"1","b":"2"}'),
        ([True, False, None], b"[true,false,null]"),
        (Literal("1.10"), b'"1.10"'),
        ({"t": Literal("25"), "of": ["x", Literal("1e-8")]}, b'{"of":["x","1e-8"],"t":"25"}'),
        ("CaSO4·2H2O", b'"CaSO4\xc2\xb72H2O"'),
        ("e\u0301", b'"\xc3\xa9"'),  # composed: NFC
        ({"e\u0301": "a"}, b'{"\xc3\xa9":"a"}'),
        ('a"\n', b'"a\\"\\n"'),
        ({}, b"{}"),
    ],
)
def test_canonical_form(value: object, form: bytes) -> None:
    assert canonical_json(value) == form


@pytest.mark.parametrize("value", [1, 1.5, float("nan"), {"a": 0.1}, b"x", {1, 2}])
def test_what_has_no_printed_text_has_no_canonical_form(value: object) -> None:
    with pytest.raises(TypeError):
        canonical_json(value)


def test_keys_that_are_one_key_are_refused() -> None:
    with pytest.raises(ValueError, match="composed"):
        canonical_json({"e\u0301": "1", "\u00e9": "2"})


@pytest.mark.parametrize(
    ("value", "content"), [("", b'""'), ({}, b"{}"), ({"as": "-7.80"}, b'{"as":"-7.80"}')]
)
def test_known_answers(value: object, content: bytes) -> None:
    assert digest(value) == by_hand(content)


@given(st.text(st.characters(exclude_categories=["Cs"])))
def test_digest_is_the_one_computed_by_hand_and_checks(text: str) -> None:
    shown = digest({"text": text})
    assert check(shown)
    assert check(f" {shown.lower().replace('-', '')} ")
    if text.isascii():
        form = json.dumps({"text": text}, separators=(",", ":"), ensure_ascii=False)
        assert shown == by_hand(form.encode())


@pytest.mark.parametrize("number", range(20))
def test_every_slip_of_one_character_is_found(number: int) -> None:
    plain = digest([str(number)]).replace("-", "")
    for place in range(11):
        for other in set(ALPHABET) - {plain[place]}:
            assert not check(plain[:place] + other + plain[place + 1 :])


@pytest.mark.parametrize("place", range(10))
def test_every_exchange_of_neighbours_is_found_but_that_of_2_and_z(place: int) -> None:
    """Luhn sees no exchange of its lowest with its highest character (0 and 9 with ten digits)."""
    unseen = set()
    for first in ALPHABET:
        for second in ALPHABET:
            body = list("A" * 11)
            body[place], body[place + 1] = first, second
            free = 10 if place < 9 else 0  # a character elsewhere that makes the text check
            for character in ALPHABET:
                body[free] = character
                if check("".join(body)):
                    break
            body[place], body[place + 1] = second, first
            if first != second and check("".join(body)):
                unseen.add(first + second)
    assert unseen == {"2Z", "Z2"}


@pytest.mark.parametrize("text", ["", "-", "ABCDE", "ABCDE-FGHJ0", "ABCDE--FGHJKL", "ä" * 11])
def test_what_is_no_digest_does_not_check(text: str) -> None:
    assert not check(text)


@pytest.fixture(scope="module")
def collection() -> Collection:
    return shipped_inspection().collection


def _edited(collection: Collection, old: str, new: str) -> Document:
    """The document of lead sulfate after an edit of its text."""
    name = "constants/salts/lead-sulfate.yaml"
    text = collection.files[name].decode()
    assert old in text
    document, findings = read_document(text.replace(old, new).encode(), name)
    assert document is not None, findings
    return document


def test_record_digest_leaves_out_the_history_alone(collection: Collection) -> None:
    salt = collection.salts["lead-sulfate"]

    def after(old: str, new: str) -> str:
        document = _edited(collection, old, new)
        return record_digest(replace(salt, origin=replace(salt.origin, document=document)))

    assert after("what: first entry", "what: another entry") == record_digest(salt)
    assert after("mineral: anglesite", "mineral: none") != record_digest(salt)


def test_figure_digest_follows_the_figure_and_not_its_notes(collection: Collection) -> None:
    salt = collection.salts["lead-sulfate"]
    determination = salt.determinations["powell-2009"]
    law = salt.laws[salt.choice.law]
    first = figure_digest(salt, determination, law)

    def after(old: str, new: str) -> str:
        document = _edited(collection, old, new)
        origin = replace(determination.origin, document=document)
        return figure_digest(salt, replace(determination, origin=origin), law)

    assert after('as: "-7.80"', 'as: "-7.8"') != first
    assert after("evidence: recalled", "evidence: open-copy") == first
    assert figure_digest(salt, determination) != first
    assert figure_digest(replace(salt, reaction="x"), determination, law) != first


def test_collection_digest_sees_content_name_and_order_but_not_layout(
    collection: Collection,
) -> None:
    first = collection_digest(collection)
    files = dict(collection.files)
    name = "constants/salts/gypsum.yaml"
    with_comment = replace(collection, files={**files, name: b"# checked\n" + files[name]})
    assert collection_digest(with_comment) == first
    edited = files[name].replace(b"mineral: gypsum", b"mineral: none")
    assert collection_digest(replace(collection, files={**files, name: edited})) != first
    backwards = dict(reversed(files.items()))
    assert collection_digest(replace(collection, files=backwards)) != first
    with pytest.raises(ValueError, match=r"gypsum\.yaml does not read"):
        collection_digest(replace(collection, files={**files, name: b"\t"}))
