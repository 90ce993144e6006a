"""Rules for citations: every source cited exists, every source is used, its numbers are sound."""

from __future__ import annotations

import re
from collections.abc import Iterator, Mapping, Sequence
from difflib import get_close_matches

from builder.collection.records import Collection, Source
from builder.read.document import Document, Path, Value
from builder.read.findings import Finding, Level, Place, quoted

CODES: Mapping[str, Level] = {
    "chem-source-unknown": "error",
    "chem-source-unused": "error",
    "chem-isbn": "error",
    "chem-doi": "error",
    "judge-source-twice": "doubt",
}

CITING_KEYS = ("source", "via")


def citations(document: Document) -> Iterator[tuple[str, Place]]:
    """Every source id that a document cites, wherever it stands, with its place."""
    yield from _cited(document, (), document.value)


def _cited(document: Document, path: Path, value: Value) -> Iterator[tuple[str, Place]]:
    if isinstance(value, dict):
        for key, inner in value.items():
            if key in CITING_KEYS and isinstance(inner, str):
                yield inner, document.place((*path, key))
            else:
                yield from _cited(document, (*path, key), inner)
    elif isinstance(value, list):
        for i, inner in enumerate(value):
            yield from _cited(document, (*path, i), inner)


def unknown_sources(document: Document, sources: Mapping[str, Source]) -> Iterator[Finding]:
    for name, place in citations(document):
        if name not in sources:
            near = get_close_matches(name, sources, 1)
            cure = f"did you mean {near[0]}?" if near else "add it to the sources, or mend the id"
            found = f"no source {quoted(name)}"
            yield Finding("error", "chem-source-unknown", place, found, cure)


def check_sources(
    collection: Collection, documents: Mapping[str, Sequence[Document]]
) -> Iterator[Finding]:
    """`documents`: by kind. A source that any file cites is used, also one laid over."""
    used: set[str] = set()
    for kind, of_kind in documents.items():
        for document in of_kind if kind != "sources" else ():
            used |= {name for name, _ in citations(document)}
            if kind != "salts":  # those are looked at salt by salt
                yield from unknown_sources(document, collection.sources)
    first_with: dict[str, Source] = {}
    for source in collection.sources.values():
        if source.id not in used:
            place = source.origin.place("id")
            found = f"the source {quoted(source.id)}, which nothing cites"
            yield Finding("error", "chem-source-unused", place, found, "cite it, or remove it")
        yield from _numbers(source)
        doi = str(source.facts.get("DOI", "")).casefold()
        if doi and first_with.setdefault(doi, source) is not source:
            place = source.origin.place("DOI")
            found = f"the DOI of {first_with[doi].id}"
            cure = "keep one record of one work, or mend the DOI"
            yield Finding("doubt", "judge-source-twice", place, found, cure)


def _numbers(source: Source) -> Iterator[Finding]:
    isbn, doi = source.facts.get("ISBN"), source.facts.get("DOI")
    if isbn is not None and not isbn_is_sound(str(isbn)):
        place = source.origin.place("ISBN")
        found = f"the ISBN {isbn}, whose length or check digit is wrong"
        yield Finding("error", "chem-isbn", place, found, "look it up again, digit by digit")
    if doi is not None and not doi_is_sound(str(doi)):
        place = source.origin.place("DOI")
        cure = "write prefix/suffix alone, such as 10.1351/PAC-REP-09-03-05"
        yield Finding("error", "chem-doi", place, f"the DOI {quoted(str(doi))}", cure)


def isbn_is_sound(isbn: str) -> bool:
    """ISO 2108: ten digits weighted 10 ... 1 modulo 11 (X is 10), 13 weighted 1, 3 modulo 10."""
    signs = isbn.replace("-", "")
    if "X" in signs[:-1] or (len(signs) == 13 and signs[-1] == "X"):
        return False
    digits = [10 if s == "X" else int(s) for s in signs]
    if len(digits) == 10:
        return sum(d * (10 - i) for i, d in enumerate(digits)) % 11 == 0
    return len(digits) == 13 and sum(d * (1, 3)[i % 2] for i, d in enumerate(digits)) % 10 == 0


def doi_is_sound(doi: str) -> bool:
    """ISO 26324 form, with nothing of the sentence or address it was copied from."""
    form = re.fullmatch(r"10\.[0-9]{4,9}/(\S*[^\s.,;:])", doi)
    return form is not None and not re.search(r"%[0-9A-F]{2}|doi\.org|^10\.[0-9]+/", form[1])
