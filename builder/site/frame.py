"""What every page has in common: edition line, links between pages, small pieces of typography."""

from __future__ import annotations

from dataclasses import dataclass
from datetime import date
from typing import Any

from markupsafe import Markup

# Address from the first page, words of the link; in the order of the head line.
PAGES = (
    ("index.html", "Find a salt"),
    ("bath-table.html", "Bath table"),
    ("sources.html", "Sources"),
    ("checks.html", "Checks"),
    ("notes/how-the-numbers-are-made.html", "How the numbers are made"),
)

STATUS_WORDS = {"DRAFT": "DRAFT, not approved for use"}


@dataclass(frozen=True)
class Frame:
    """The edition a page belongs to. issue_date: ISO 8601; status: a key of STATUS_WORDS."""

    issue_date: str
    status: str
    collection_digest: str
    version: str

    def context(self, title: str, depth: int, here: str) -> dict[str, Any]:
        """What base.html asks for.

        depth: folders between the page and the first page. here: address of the page from the
        first page; its link in the head line is marked as the current one.
        """
        root = "../" * depth
        return {
            "title": title,
            "root": root,
            "navigation": [
                {"href": root + address, "label": words, "current": address == here}
                for address, words in PAGES
            ],
            "issue_date": self.issue_date,
            "issue_date_words": date_words(self.issue_date),
            "status": self.status,
            "status_words": STATUS_WORDS[self.status],
            "collection_digest": self.collection_digest,
            "version": self.version,
        }


def date_words(iso: str) -> str:
    """`2026-12-01` as `1 December 2026`; ValueError for what is no date."""
    day = date.fromisoformat(iso)
    return f"{day.day} {day:%B} {day.year}"


def aligned(shown: str) -> Markup:
    """A number in two parts, so that a column of them stands on the decimal point."""
    whole, point, part = shown.partition(".")
    return Markup('<span class="whole">{}</span><span class="part">{}{}</span>').format(
        whole, point, part
    )


def salt_address(salt_id: str, root: str = "", at: float | None = None) -> str:
    """Address of a sheet from a page whose way back to the first page is `root`; at in °C."""
    return f"{root}salts/{salt_id}.html" + ("" if at is None else f"#t={at:g}")


def words_of_count(n: int, one: str, many: str) -> str:
    """`1 salt`, `12 salts`."""
    return f"{n} {one if n == 1 else many}"
