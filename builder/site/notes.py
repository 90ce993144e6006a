"""Method notes: Markdown files of templates/notes, one page each."""

from __future__ import annotations

import re
from collections.abc import Container

import markdown
from markupsafe import Markup

from builder.collection.reference import Reference
from builder.site.frame import Frame
from builder.site.render import Renderer

FOLDER = "notes"
_CITATION = re.compile(r"\[([^\]]+)\]\(source:([a-z0-9-]+)\)")


def pages(reference: Reference, frame: Frame, renderer: Renderer) -> dict[str, bytes]:
    """Every note under notes/<name of its file>.html.

    A note starts with its title (`# ...`) and cites as `[words](source:id)`, which becomes a link
    where the collection holds the source. ValueError for a note without a title.
    """
    out: dict[str, bytes] = {}
    for file in sorted((renderer.folder / FOLDER).glob("*.md")):
        address = f"{FOLDER}/{file.stem}.html"
        title, body = split_title(file.read_text(encoding="utf-8"), file.name)
        html = markdown.markdown(with_citations(body, reference.collection.sources))
        # the notes are part of the program, like the templates: their markup is trusted
        context = frame.context(title, 1, address) | {"body": Markup(html)}
        out[address] = renderer.page("note.html", context)
    return out


def split_title(text: str, name: str) -> tuple[str, str]:
    """(title, the rest) of a note."""
    first, _, body = text.partition("\n")
    if not first.startswith("# "):
        raise ValueError(f"{name} does not start with its title, '# ...'")
    return first.removeprefix("# ").strip(), body


def with_citations(body: str, sources: Container[str]) -> str:
    """The note with its citations as links to the sources page, or as plain words."""

    def link(match: re.Match[str]) -> str:
        words, source = match.groups()
        return f"[{words}](../sources.html#{source})" if source in sources else words

    return _CITATION.sub(link, body)
