"""Read, assemble, judge: everything found in folders of constants, and what can be computed.

The circle is short: errors stop the reference; where there are none it is built once, and what
only computed values can show (an exponent that slipped, a law beside its constant) is judged on it.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from pathlib import Path

from builder.collection.assemble import assemble, assemble_salt
from builder.collection.folders import Files, read_folders, shipped_folder
from builder.collection.records import Collection
from builder.collection.reference import Reference, build_reference
from builder.collection.rules import check, check_one_salt, judge
from builder.collection.rules_words import check_aliases
from builder.read.document import read_document
from builder.read.findings import Finding, in_order
from builder.read.shape import Shapes


@dataclass(frozen=True)
class Inspection:
    """findings: all of them, sorted. reference: None when one of them is an error."""

    collection: Collection
    findings: tuple[Finding, ...]
    reference: Reference | None


def inspect(folders: Sequence[Path]) -> Inspection:
    """Inspect exactly the folders given, a later one laid over an earlier one.

    Raises FolderError for a folder that is none.
    """
    shapes = shipped_shapes()
    return inspect_files(read_folders(folders, shapes), shapes)


def shipped_shapes() -> Shapes:
    """The schemas of the builder itself; a folder of constants never brings its own."""
    return Shapes.from_folder(shipped_folder("constants") / "schema")


def inspect_files(files: Files, shapes: Shapes) -> Inspection:
    """Inspect what is read already."""
    collection = assemble(files, shapes)
    findings = [*collection.findings, *check(collection, files)]
    reference = None
    if not any(f.level == "error" for f in findings):
        reference = build_reference(collection)
        for evaluated in reference.salts.values():
            findings += judge(evaluated, collection)
    return Inspection(collection, tuple(in_order(findings)), reference)


def inspect_salt(data: bytes, file: str, others: Collection, shapes: Shapes) -> tuple[Finding, ...]:
    """The findings in one salt's file of these bytes, shown as `file`, among sound other records.

    `others` has no errors; a salt of the same file in it is left out. What a proposed record or a
    changed file brings is found without reading everything again.
    """
    document, found = read_document(data, file)
    if document is not None:
        found += shapes.check("salt", document)
    if document is None or found:
        return tuple(in_order(found))
    salt, assembling = assemble_salt(document, shapes)
    if salt is None:
        return tuple(in_order(assembling))
    kept = {k: s for k, s in others.salts.items() if s.origin.document.file != file}
    together = replace(others, salts={**kept, salt.id: salt}, files={**others.files, file: data})
    findings = [*assembling, *check_one_salt(salt, together), *check_aliases(together)]
    if not any(f.level == "error" for f in findings):
        reference = build_reference(replace(together, salts={salt.id: salt}))
        findings += judge(reference.salts[salt.id], together)
    return tuple(in_order(f for f in findings if f.place.file == file))
