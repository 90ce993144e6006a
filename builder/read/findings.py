"""What reading or checking found: one record for people (a line of text) and for JSON.

A finding has a level, a stable code in words, a place, what was found and what would be right.
``found`` reads on after the word "found", ``cure`` is a sentence of its own:
``salts/x.yaml:14:11: error read-duplicate-key: found the key 'salt' again; keep one of them``
"""

from collections import Counter
from collections.abc import Iterable
from dataclasses import dataclass
from itertools import groupby
from typing import Literal

Level = Literal["error", "doubt", "note"]
LEVELS: tuple[Level, ...] = ("error", "doubt", "note")
MOST_SHOWN = 120


@dataclass(frozen=True, order=True)
class Place:
    """A place in a file: POSIX path as shown to the user, line and column counted from 1."""

    file: str
    line: int
    column: int

    def __str__(self) -> str:
        return f"{self.file}:{self.line}:{self.column}"


@dataclass(frozen=True)
class Finding:
    """One thing found: errors stop an issue, doubts need a written reason, notes inform."""

    level: Level
    code: str
    place: Place
    found: str
    cure: str

    def __str__(self) -> str:
        """Always one line: whatever is not printable is escaped."""
        return escaped(f"{self.place}: {self.level} {self.code}: found {self.found}; {self.cure}")

    def as_json(self) -> dict[str, str | int]:
        return {
            "level": self.level,
            "code": self.code,
            "file": self.place.file,
            "line": self.place.line,
            "column": self.place.column,
            "found": self.found,
            "cure": self.cure,
        }


def escaped(text: str) -> str:
    """The text with line breaks, control and invisible characters written as ``\\u....``."""
    return "".join(c if c.isprintable() else f"\\u{ord(c):04x}" for c in text)


def quoted(text: str, most: int = MOST_SHOWN) -> str:
    """A value for a message: in quotes, escaped, at most ``most`` characters of it."""
    return f"'{escaped(shortened(text, most))}'"


def shortened(text: str, most: int = MOST_SHOWN) -> str:
    """The text, or its beginning and an ellipsis, ``most`` characters together."""
    return text if len(text) <= most else text[: most - 1] + "…"


def in_order(findings: Iterable[Finding]) -> list[Finding]:
    """Sorted by file, line, column, code and what was found."""
    return sorted(findings, key=lambda f: (f.place, f.code, f.found))


def report_text(findings: Iterable[Finding], most_per_file: int = 50) -> str:
    """One line a finding, at most ``most_per_file`` a file; the last line counts them all."""
    ordered = in_order(findings)
    lines: list[str] = []
    for file, group in groupby(ordered, key=lambda f: f.place.file):
        in_file = list(group)
        lines += [str(finding) for finding in in_file[:most_per_file]]
        if rest := in_file[most_per_file:]:
            lines.append(f"{escaped(file)}: {_counted(rest)} more, not shown")
    files = len({finding.place.file for finding in ordered})
    lines.append(f"{_counted(ordered)} in {files} file{'' if files == 1 else 's'}")
    return "\n".join(lines) + "\n"


def _counted(findings: Iterable[Finding]) -> str:
    """For example ``2 errors, 1 doubt, 0 notes``."""
    counts = Counter(finding.level for finding in findings)
    return ", ".join(
        f"{counts[level]} {level}{'' if counts[level] == 1 else 's'}" for level in LEVELS
    )
