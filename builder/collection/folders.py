"""Reads the folders of constant files into checked documents, by kind.

A later folder lays records over those of an earlier one by id (a house's own constants over the
shipped ones); the schema folder is the shipped one always.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass
from pathlib import Path

from builder.read.document import Document, read_document
from builder.read.findings import Finding, Place
from builder.read.shape import Shapes

# folder -> (schema of a file, lists inside it as (key, schema of an item))
KINDS: Mapping[str, tuple[str, Sequence[tuple[str, str]]]] = {
    "salts": ("salt", ()),
    "ions": ("ions", (("ions", "ion"),)),
    "side_reactions": (
        "side-reactions",
        (("side_reactions", "side-reaction"), ("no_pairs", "no-pairs")),
    ),
    "electrolytes": ("electrolytes", (("electrolytes", "electrolyte"),)),
    "hazards": ("hazards", (("hazards", "hazard"),)),
    "sources": ("sources", (("sources", "source"),)),
    "formation": ("formation", (("entries", "formation-entry"),)),
    "weights": ("weights", (("weights", "weight"),)),
    "water": ("water", ()),
    "required": ("required", ()),
}


class FolderError(Exception):
    """A folder given on the command line can not be used; the message is one sentence."""


@dataclass(frozen=True)
class Files:
    """Sound documents by kind, findings, and the bytes of every file by its shown name."""

    documents: Mapping[str, tuple[Document, ...]]
    findings: tuple[Finding, ...]
    content: Mapping[str, bytes]


def shipped_folder(name: str) -> Path:
    """`constants` or `templates`: inside the installed package, else beside it in the clone."""
    package = Path(__file__).resolve().parent.parent
    inside = package / name
    return inside if inside.is_dir() else package.parent / name


def read_folders(folders: Sequence[Path], shapes: Shapes) -> Files:
    """Read every YAML file of the folders. Raises FolderError for a folder that is none."""
    documents: dict[str, list[Document]] = {kind: [] for kind in KINDS}
    findings: list[Finding] = []
    content: dict[str, bytes] = {}
    for folder, label in zip(folders, _labels(folders), strict=True):
        if not folder.is_dir():
            raise FolderError(f"{folder} is not a folder; name a folder of constant files")
        for path, kind, shown in _files(folder, label):
            if kind is None:
                findings.append(_stray(shown))
                continue
            try:
                data = path.read_bytes()
            except OSError as wrong:
                findings.append(_unreadable(shown, wrong))
                continue
            content[shown] = data
            document, found = read_document(data, shown)
            findings += found
            if document is None:
                continue
            shape, lists = KINDS[kind]
            found = shapes.check(shape, document)
            for key, item_shape in lists:
                found += _check_items(shapes, document, key, item_shape)
            findings += found
            if not found:
                documents[kind].append(document)
    return Files({k: tuple(v) for k, v in documents.items()}, tuple(findings), content)


def _labels(folders: Sequence[Path]) -> list[str]:
    """What files of a folder are shown under: its name, with more of its path where two agree."""
    parts = [folder.resolve().parts for folder in folders]
    labels: list[str] = []
    for own in parts:
        length = 1
        while length < len(own) and sum(p[-length:] == own[-length:] for p in parts) > 1:
            length += 1
        labels.append("/".join(own[-length:]).lstrip("/"))
    return labels


def _files(folder: Path, label: str) -> Iterable[tuple[Path, str | None, str]]:
    """(path, kind or None, name shown), sorted by name; dot-files and schemas left out."""
    for path in sorted(folder.rglob("*"), key=lambda p: p.relative_to(folder).as_posix()):
        parts = path.relative_to(folder).parts
        if path.is_dir() or parts[0] == "schema" or any(p.startswith(".") for p in parts):
            continue
        shown = "/".join((label, *parts))
        known = len(parts) == 2 and parts[0] in KINDS and path.suffix == ".yaml"
        yield path, parts[0] if known else None, shown


def _check_items(shapes: Shapes, document: Document, key: str, shape: str) -> list[Finding]:
    value = document.value
    items = value.get(key) if isinstance(value, dict) else None
    if not isinstance(items, list):
        return []
    found: list[Finding] = []
    for i in range(len(items)):
        found += shapes.check(shape, document, (key, i))
    return found


def _stray(shown: str) -> Finding:
    kinds = ", ".join(KINDS)
    return Finding(
        "error",
        "read-stray-file",
        Place(shown, 1, 1),
        "a file that belongs to no kind of record",
        f"keep .yaml files directly in one of the folders {kinds}, or move it elsewhere",
    )


def _unreadable(shown: str, wrong: OSError) -> Finding:
    return Finding(
        "error",
        "read-unreadable",
        Place(shown, 1, 1),
        f"a file that can not be read ({wrong.strerror})",
        "give the reading account access to it",
    )
