"""From checked documents to records. What does not fit becomes a finding, never an exception.

Documents arrive with sound shapes (collection/folders.py); what a schema alone can not say -
which keys go with which quantity, whether printed characters read as a number - is checked here.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from typing import Any, TypeVar, cast

from builder.chem.weights import AtomicWeight
from builder.collection.folders import Files
from builder.collection.parts import Parts
from builder.collection.records import (
    Choice,
    Collection,
    Determination,
    Electrolyte,
    FormationEntry,
    FormationTable,
    Hazard,
    Law,
    NoPairs,
    Origin,
    Salt,
    SideReaction,
    Source,
)
from builder.read.document import Document
from builder.read.findings import Finding
from builder.read.shape import Shapes

Record = TypeVar("Record")


def assemble(files: Files, shapes: Shapes) -> Collection:
    """All records of the files, with the findings of reading and of assembling."""
    findings: list[Finding] = list(files.findings)
    parts = Parts(shapes, findings)
    docs = files.documents

    def lists(kind: str, key: str, make: Callable[[Origin, Any], Record | None]) -> list[Record]:
        made: list[Record] = []
        for document in docs[kind]:
            items = cast(Mapping[str, Any], document.value).get(key, [])
            for i, item in enumerate(items):
                record = make(Origin(document, (key, i)), item)
                if record is not None:
                    made.append(record)
        return made

    def keyed(records: Sequence[Record], key: Callable[[Record], str]) -> dict[str, Record]:
        """By id; within one folder of constants an id stands once, a later folder replaces."""
        out: dict[str, Record] = {}
        for record in records:
            name = key(record)
            if name in out and _top(out[name]) == _top(record):
                origin = cast(Any, record).origin
                findings.append(
                    Finding(
                        "error",
                        "chem-id-twice",
                        origin.place(),
                        f"{name!r}, which stands in {_where(out[name])} already",
                        "give it another id, or remove one of the two",
                    )
                )
                continue
            out[name] = record
        return out

    weights: dict[str, AtomicWeight] = {}
    for document in docs["weights"]:
        for item in cast(Any, document.value)["weights"]:
            weight = AtomicWeight(
                item["symbol"],
                float(item["value"]),
                float(item["plus_minus"]),
                f"{item['value'].text} ± {item['plus_minus'].text}",
            )
            weights[weight.symbol] = weight

    salts = [s for d in docs["salts"] if (s := _salt(d, parts)) is not None]
    tables = [_formation(d, parts) for d in docs["formation"]]
    return Collection(
        salts=keyed(salts, lambda r: r.id),
        ions=keyed(lists("ions", "ions", parts.ion), lambda r: r.formula),
        side_reactions=keyed(
            lists("side_reactions", "side_reactions", _side(parts)), lambda r: r.id
        ),
        no_pairs=keyed(lists("side_reactions", "no_pairs", _no_pairs), lambda r: r.id),
        electrolytes=keyed(
            lists("electrolytes", "electrolytes", _electrolyte), lambda r: r.formula
        ),
        hazards=keyed(lists("hazards", "hazards", _hazard), lambda r: r.id),
        sources=keyed(lists("sources", "sources", _source), lambda r: r.id),
        formation=keyed(tables, lambda r: r.id),
        weights=weights,
        required=tuple(n for d in docs["required"] for n in cast(Any, d.value)["required"]),
        findings=tuple(findings),
        files=files.content,
    )


def _top(record: object) -> str:
    return cast(Any, record).origin.document.file.split("/", 1)[0]  # type: ignore[no-any-return]


def _where(record: object) -> str:
    place = cast(Any, record).origin.place()
    return f"{place.file}:{place.line}"


def assemble_salt(document: Document, shapes: Shapes) -> tuple[Salt | None, tuple[Finding, ...]]:
    """The record of one salt's document, and the findings of making it."""
    findings: list[Finding] = []
    salt = _salt(document, Parts(shapes, findings))
    return salt, tuple(findings)


def _salt(document: Document, parts: Parts) -> Salt | None:
    value = cast(Mapping[str, Any], document.value)
    before = len(parts.findings)
    origin = Origin(document, ())
    determinations: dict[str, Determination] = {}
    for i, item in enumerate(value["determinations"]):
        made = parts.determination(Origin(document, ("determinations", i)), item)
        if made is None:
            continue
        if made.id in determinations:
            parts.report(
                "chem-id-twice",
                made.origin.place("id"),
                f"the id {made.id!r} again",
                "ids of determinations are unique within a salt: rename or remove it",
            )
        determinations[made.id] = made
    laws: dict[str, Law] = {}
    for i, item in enumerate(value["laws"]):
        law = parts.law(Origin(document, ("laws", i)), item)
        if law is None:
            continue
        if law.id in laws:
            parts.report(
                "chem-id-twice",
                origin.place("laws", i, "id"),
                f"the id {law.id!r} again",
                "ids of laws are unique within a salt: rename or remove it",
            )
        laws[law.id] = law
    second = value["second_look"]
    if any(f.level == "error" for f in parts.findings[before:]):
        return None
    dates = [h["on"] for h in value["history"]] + [value["entered"]["on"]]
    return Salt(
        id=value["id"],
        formula=value["formula"],
        name=value["name"],
        other_names=tuple(value["other_names"]),
        mineral=_unless_none(value["mineral"]),
        cas=_unless_none(value["cas"]),
        solid=value["solid"],
        reaction=value["reaction"],
        hazard=_unless_none(value["hazard"]),
        mistaken_for=tuple(value["mistaken_for"]),
        needs=tuple(value["needs"]),
        choice=Choice(**value["choice"]),
        determinations=determinations,
        laws=laws,
        entered=f"{value['entered']['by']}, {value['entered']['on']}",
        second_look=None
        if isinstance(second, str)
        else f"{second['by']}, {second['on']}: {second['how']}",
        newest_date=max(dates),
        origin=origin,
    )


def _unless_none(text: str) -> str | None:
    return None if text == "none" else text


def _side(parts: Parts) -> Callable[[Origin, Any], SideReaction | None]:
    def make(origin: Origin, item: Any) -> SideReaction | None:
        figure = parts.figure(origin, item["printed"])
        citation = parts.citation(origin, item["from"])
        law = parts.side_law(origin, item["law"], citation)
        if figure is None or citation is None or law is None:
            return None
        return SideReaction(
            id=item["id"],
            forms=item["forms"],
            reaction=item["reaction"],
            figure=figure,
            citation=citation,
            law=law,
            law_evidence=item["law"].get("evidence", citation.evidence),
            stands_beside=tuple(item["stands_beside"]),
            gas_per=item.get("gas_per"),
            note=item.get("note"),
            origin=origin,
        )

    return make


def _no_pairs(origin: Origin, item: Any) -> NoPairs:
    return NoPairs(
        item["id"],
        tuple(item["cations"]),
        tuple(item["anions"]),
        item["reason"],
        item["source"],
        origin,
    )


def _electrolyte(origin: Origin, item: Any) -> Electrolyte:
    return Electrolyte(item["formula"], item["name"], item["dissolves"], origin)


def _hazard(origin: Origin, item: Any) -> Hazard:
    return Hazard(item["id"], item["words"], item["care"], item["source"], origin)


def _source(origin: Origin, item: Any) -> Source:
    return Source(item["id"], item["kind"], item["family"], item["title"], dict(item), origin)


def _formation(document: Document, parts: Parts) -> FormationTable:
    value = cast(Mapping[str, Any], document.value)
    entries: dict[str, FormationEntry] = {}
    for i, item in enumerate(value["entries"]):
        origin = Origin(document, ("entries", i))
        if item["of"] in entries:
            parts.report(
                "chem-id-twice",
                origin.place("of"),
                f"{item['of']!r} again",
                "an ion or solid stands once in a table: remove one of the two",
            )
        keys = ("gibbs_kj_mol", "enthalpy_kj_mol", "entropy_j_mol_k", "heat_capacity_j_mol_k")
        entries[item["of"]] = FormationEntry(
            item["of"],
            *(
                None if item[k] == "not stated" else parts.number(origin.place(k), item[k])
                for k in keys
            ),
        )
    return FormationTable(
        value["table"],
        value["source"],
        value["evidence"],
        value["where"],
        entries,
        Origin(document, ()),
    )
