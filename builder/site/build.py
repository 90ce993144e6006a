"""All pages of the site from the reference; nothing is written here (builder/site/writer.py)."""

from __future__ import annotations

from collections.abc import Sequence

from builder import __version__
from builder.collection.folders import shipped_folder
from builder.collection.identity import collection_digest
from builder.collection.reference import Reference
from builder.read.findings import Finding
from builder.site import bath, checks, find, notes, sheet, sources
from builder.site.frame import Frame
from builder.site.render import Renderer


def build_site(
    reference: Reference, findings: Sequence[Finding], issue_date: str
) -> dict[str, bytes]:
    """Every page by its address. issue_date: ISO 8601, the only date a page shows."""
    renderer = Renderer.from_folder(shipped_folder("templates"))
    frame = Frame(issue_date, "DRAFT", collection_digest(reference.collection), __version__)
    return {
        **find.pages(reference, frame, renderer),
        **sheet.pages(reference, frame, renderer),
        **bath.pages(reference, frame, renderer),
        **sources.pages(reference, frame, renderer),
        **checks.pages(reference, frame, renderer, findings),
        **notes.pages(reference, frame, renderer),
    }
