"""The rules of reading, gathered: what a schema can not say about constants.

`check` needs records only; `judge` needs what is computed from them and is asked when `check`
found no error. No rule raises: each parses what it needs and leaves what another rule reports.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping

from builder.collection import (
    rules_figures,
    rules_judge,
    rules_reactions,
    rules_salt,
    rules_sources,
    rules_words,
)
from builder.collection.folders import Files
from builder.collection.records import Collection, Salt
from builder.collection.rules_judge import judge
from builder.read.findings import Finding, Level

__all__ = ["CODES", "check", "check_one_salt", "judge"]

CODES: Mapping[str, Level] = {
    **rules_figures.CODES,
    **rules_judge.CODES,
    **rules_reactions.CODES,
    **rules_salt.CODES,
    **rules_sources.CODES,
    **rules_words.CODES,
}

# What is not known while files of a kind are broken: a record may stand in one of them.
WAITS_FOR: Mapping[str, tuple[str, ...]] = {
    "chem-source-unknown": ("sources",),
    "chem-unknown-form": ("ions", "side_reactions"),
    "chem-needs-missing": ("ions", "side_reactions"),
    "chem-water-missing": ("ions", "side_reactions"),
    "chem-hazard": ("hazards",),
    "chem-table": ("formation",),
    "chem-molar-mass": ("weights",),
}


def check(collection: Collection, files: Files) -> list[Finding]:
    """Errors, doubts and notes of records that were read; `files` are those they came from."""
    found = [*_shared(collection, files)]
    for salt in collection.salts.values():
        found += check_one_salt(salt, collection)
    return list(_ripe(found, collection))


def check_one_salt(salt: Salt, collection: Collection) -> list[Finding]:
    """The rules that look at one salt alone."""
    return [
        *rules_salt.check_salt(salt, collection),
        *rules_words.check_words(salt, collection),
        *rules_sources.unknown_sources(salt.origin.document, collection.sources),
    ]


def _shared(collection: Collection, files: Files) -> Iterator[Finding]:
    yield from rules_reactions.check_reactions(collection)
    for reaction in collection.side_reactions.values():
        yield from rules_figures.check_figure(reaction.figure, reaction.origin)
        yield from rules_figures.check_law(reaction.law, reaction.origin, "law")
    yield from rules_figures.check_formation(collection)
    yield from rules_sources.check_sources(collection, files.documents)
    yield from rules_words.check_aliases(collection)


def _ripe(findings: Iterable[Finding], collection: Collection) -> Iterator[Finding]:
    """Without what can not be known while another file is broken."""
    broken = {f.place.file.split("/")[1] for f in collection.findings if f.level == "error"}
    for finding in findings:
        waits = WAITS_FOR.get(finding.code, ())
        if finding.code == "chem-source-unused" and broken:
            continue
        if not broken.intersection(waits):
            yield finding
