"""Digests: a short text that changes when the thing it stands for changes (contract 2).

The canonical form of a value is JSON in UTF-8: texts and keys in Unicode normal form C, keys
sorted by code point, no spaces, numbers as the characters they were written with. Its SHA-256
(FIPS 180-4) is shown as its first 50 bits in ten characters without look-alikes and one check
character (the Luhn algorithm of ISO/IEC 7812-1 with 32 in the place of 10).

The check character finds every slip of one character and every exchange of neighbours but that
of `2` with `Z`, the first and the last of the alphabet.
"""

from __future__ import annotations

import hashlib
import json
from collections.abc import Mapping, Sequence
from typing import Any
from unicodedata import normalize

from builder.collection.records import Collection, Determination, Law, Origin, Salt
from builder.read.document import Literal, read_document

ALPHABET = "23456789ABCDEFGHJKLMNPQRSTUVWXYZ"
SHOWN_CHARACTERS = 10
_SIZE = len(ALPHABET)  # 32: five bits a character


def canonical_json(value: object) -> bytes:
    """The canonical form of texts, Literal numbers, true, false, null, sequences and mappings.

    TypeError for anything else: a bare float has no printed text. ValueError for keys that are
    one key in normal form C.
    """
    text = json.dumps(_plain(value), ensure_ascii=False, sort_keys=True, separators=(",", ":"))
    return text.encode("utf-8")


def digest(value: object) -> str:
    """The shown form `XXXXX-XXXXXX` of the SHA-256 of the canonical form."""
    first = int.from_bytes(hashlib.sha256(canonical_json(value)).digest()[:8], "big") >> 14
    codes = [first >> 5 * i & 31 for i in reversed(range(SHOWN_CHARACTERS))]
    shown = "".join(ALPHABET[code] for code in (*codes, -_luhn_sum(codes, 2) % _SIZE))
    return f"{shown[:5]}-{shown[5:]}"


def check(text: str) -> bool:
    """Whether a typed digest has its form and its check character; lower case and no hyphen do."""
    plain = text.strip().upper()
    if plain[5:6] == "-":
        plain = plain[:5] + plain[6:]
    if len(plain) != SHOWN_CHARACTERS + 1 or not set(plain) <= set(ALPHABET):
        return False
    return _luhn_sum([ALPHABET.index(c) for c in plain], 1) % _SIZE == 0


def figure_digest(salt: Salt, determination: Determination, law: Law | None = None) -> str:
    """Of one figure: printed text, quantity, unit, temperature, medium, reaction, law, source.

    Notes, evidence and what was stated of the uncertainty may be corrected without a new figure.
    A computed determination has its rule and table in the place of what is printed.
    """
    record = _record(determination.origin)
    printed = record.get("printed", {})
    keys = ("as", "quantity", "unit", "solid_as", "temperature_c", "medium")
    return digest(
        {
            **{key: printed[key] for key in keys if key in printed},
            "computed": record.get("computed"),
            "reaction": printed.get("reaction", salt.reaction),
            "law": None if law is None or law.origin is None else _law(law.origin),
            "source": determination.citation.source,
            "locator": determination.citation.locator,
        }
    )


def record_digest(record: Salt) -> str:
    """Of the whole record of a salt but its history."""
    return digest({k: v for k, v in _record(record.origin).items() if k != "history"})


def collection_digest(collection: Collection) -> str:
    """Of every file read, by name and in the order read: a later folder overrules an earlier.

    ValueError for a file that does not read.
    """
    content: list[list[object]] = []
    for name, data in collection.files.items():
        document, _ = read_document(data, name)
        if document is None:
            raise ValueError(f"{name} does not read: a collection with errors has no digest")
        content.append([name, document.value])
    return digest(content)


def _plain(value: object) -> object:
    if value is None or isinstance(value, bool):
        return value
    if isinstance(value, Literal):
        return value.text
    if isinstance(value, str):
        return normalize("NFC", value)
    if isinstance(value, Mapping):
        made = {normalize("NFC", key): _plain(item) for key, item in value.items()}
        if len(made) < len(value):
            raise ValueError("two keys differ only in how their characters are composed")
        return made
    if isinstance(value, Sequence) and not isinstance(value, bytes | bytearray):
        return [_plain(item) for item in value]
    raise TypeError(f"{type(value).__name__} has no canonical form; give numbers as printed text")


def _luhn_sum(codes: Sequence[int], last_factor: int) -> int:
    """Sum of codes, every second one doubled from the right, its two digits in base 32 added."""
    total = 0
    factor = last_factor
    for code in reversed(codes):
        total += sum(divmod(factor * code, _SIZE))
        factor = 3 - factor
    return total


def _record(origin: Origin) -> Mapping[str, Any]:
    value: Any = origin.document.at(origin.path)
    return value  # type: ignore[no-any-return]  # of a sound shape, so a mapping


def _law(origin: Origin) -> dict[str, Any]:
    return {key: value for key, value in _record(origin).items() if key != "note"}
