"""What the collection holds, in counts: for the command line, first page and checks page."""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterable, Mapping
from dataclasses import dataclass

from builder.collection.records import Collection, Salt


@dataclass(frozen=True)
class Summary:
    """Counts of what the sound files hold; families are independent origins of numbers.

    two_families: salts with determinations of two or more. laws, evidence: of all and of the
    chosen ones, the most frequent first. required_found: of the salts a laboratory must find.
    """

    salts: int
    determinations: int
    families: int
    two_families: int
    laws: Mapping[str, int]
    laws_of_chosen: Mapping[str, int]
    evidence: Mapping[str, int]
    evidence_of_chosen: Mapping[str, int]
    required: int
    required_found: int


def summarise(collection: Collection) -> Summary:
    """Count a collection; ids that lead nowhere are left out (they are findings of their own)."""
    salts = list(collection.salts.values())
    reported = [d for salt in salts for d in salt.determinations.values()]
    chosen = [
        salt.determinations[salt.choice.determination]
        for salt in salts
        if salt.choice.determination in salt.determinations
    ]
    chosen_laws = [salt.laws[salt.choice.law] for salt in salts if salt.choice.law in salt.laws]
    families = {salt.id: _families(salt, collection) for salt in salts}
    return Summary(
        salts=len(salts),
        determinations=len(reported),
        families=len(set().union(*families.values())),
        two_families=sum(1 for own in families.values() if len(own) >= 2),
        laws=_counted(law.kind for salt in salts for law in salt.laws.values()),
        laws_of_chosen=_counted(law.kind for law in chosen_laws),
        evidence=_counted(d.citation.evidence for d in reported),
        evidence_of_chosen=_counted(d.citation.evidence for d in chosen),
        required=len(collection.required),
        required_found=sum(1 for name in collection.required if name in collection.salts),
    )


def _families(salt: Salt, collection: Collection) -> set[str]:
    sources = (collection.sources.get(d.citation.source) for d in salt.determinations.values())
    return {source.family for source in sources if source is not None}


def _counted(words: Iterable[str]) -> dict[str, int]:
    """The most frequent first, equals by name."""
    return dict(sorted(Counter(words).items(), key=lambda item: (-item[1], item[0])))
