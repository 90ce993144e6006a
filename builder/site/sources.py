"""Every source in the order of ISO 690, with what of the collection rests on it."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass, field

from builder.collection.records import Citation as Cited
from builder.collection.records import Collection, Source
from builder.collection.reference import Reference
from builder.site.frame import Frame, salt_address, words_of_count
from builder.site.render import Renderer

ADDRESS = "sources.html"

# CSL-JSON type -> whether the title is that of a part (roman, in quotes) or of the whole (italic)
PARTS = ("article-journal", "chapter")

KIND_WORDS = {
    "critical-evaluation": "critical evaluation",
    "primary-measurement": "measurement",
    "formation-table": "table of formation properties",
    "compilation": "compilation",
    "textbook": "textbook",
    "teaching-table": "teaching table",
    "method": "method",
    "practice": "practice",
}


@dataclass(frozen=True)
class Citation:
    """A source taken apart for printing, in the order of ISO 690; empty texts where not known.

    authors: without the full stop that follows them.
    """

    id: str
    authors: str
    title: str
    title_is_part: bool
    edition: str
    container: str
    numbers: str
    publisher: str
    year: str
    doi: str
    isbn: str
    url: str
    note: str
    kind: str
    family: str


@dataclass
class Uses:
    """What rests on a source: ids of salts, and words for everything else."""

    salts: list[str] = field(default_factory=list)
    others: list[str] = field(default_factory=list)


def pages(reference: Reference, frame: Frame, renderer: Renderer) -> dict[str, bytes]:
    """The sources page under its address."""
    collection = reference.collection
    used = uses(collection)
    citations = [citation(source) for source in collection.sources.values()]
    citations.sort(key=lambda c: ((c.authors or c.title).casefold(), c.year, c.title))
    context = frame.context("Sources", 0, ADDRESS) | {
        "citations": [(c, used.get(c.id, Uses())) for c in citations],
        "count": words_of_count(len(citations), "source", "sources"),
        "salts": collection.salts,
        "address": salt_address,
    }
    return {ADDRESS: renderer.page("sources.html", context)}


def citation(source: Source) -> Citation:
    """The printed parts of a source."""
    facts = source.facts

    def text(key: str) -> str:
        value = str(facts.get(key, ""))
        return "" if value == "unknown" else value

    numbers = [
        words + text(key).replace("-", "–")
        for key, words in (("volume", "vol. "), ("issue", "no. "), ("page", "pp. "))
        if text(key)
    ]
    if "-" not in text("page"):
        numbers = [n.replace("pp. ", "p. ") for n in numbers]
    issued = facts.get("issued")
    return Citation(
        id=source.id,
        authors=authors(facts.get("author")).removesuffix("."),
        title="" if source.title == "unknown" else source.title,
        title_is_part=facts.get("type") in PARTS,
        edition=text("edition"),
        container=text("container-title"),
        numbers=", ".join(numbers),
        publisher=text("publisher"),
        year=f"{issued:g}" if isinstance(issued, (int, float)) else "",
        doi=text("DOI"),
        isbn=text("ISBN"),
        url=text("URL"),
        note=text("note"),
        kind=KIND_WORDS[source.kind],
        family=source.family,
    )


def authors(names: object) -> str:
    """`POWELL, Kipton J., BROWN, Paul L. and BYRNE, Robert H.`; empty where none is known."""
    written: list[str] = []
    for name in names if isinstance(names, Sequence) else ():
        if isinstance(name, Mapping):
            family = str(name.get("family", "")).upper()
            parts = [str(name.get("literal", "")), family, str(name.get("given", ""))]
            written.append(", ".join(p for p in parts if p))
    return " and ".join([", ".join(written[:-1]), written[-1]] if len(written) > 1 else written)


def uses(collection: Collection) -> dict[str, Uses]:
    """What cites each source, by source id."""
    found: dict[str, Uses] = {}

    def of(source: str) -> Uses:
        return found.setdefault(source, Uses())

    for salt in collection.salts.values():
        citations = [d.citation for d in salt.determinations.values()]
        citations += [law.citation for law in salt.laws.values()]
        for source in _named(citations):
            of(source).salts.append(salt.id)
    for reaction in collection.side_reactions.values():
        for source in _named((reaction.citation, reaction.law.citation)):
            of(source).others.append(f"formation of {reaction.forms}")
    for ion in collection.ions.values():
        of(ion.size_citation.source).others.append(f"size of {ion.formula}")
    for statement in collection.no_pairs.values():
        of(statement.source).others.append("ions that do not pair")
    for table in collection.formation.values():
        of(table.source).others.append("formation properties")
    for hazard in collection.hazards.values():
        of(hazard.source).others.append("hazard words")
    for entry in found.values():
        entry.others[:] = dict.fromkeys(entry.others)
    return found


def _named(citations: Iterable[Cited]) -> list[str]:
    """The sources of citations and those they came through, each once."""
    return sorted({s for c in citations for s in (c.source, c.via) if s is not None})
