"""The strict YAML reader: bytes to plain values that remember where they stood.

Values are built from the parser's events, so no tag, anchor, constructor or implicit type of
YAML 1.1 can act. A document is returned only when nothing was found; until then the reader goes on
as far as it safely can, to report everything in one run.
"""

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from typing import Any, NoReturn, TypeAlias, cast

import yaml

from builder.read import text as characters
from builder.read.findings import Finding, Place, quoted
from builder.read.text import Literal

__all__ = ["CODES", "Document", "Literal", "Path", "Value", "read_document"]

Value: TypeAlias = "str | Literal | bool | list[Value] | dict[str, Value] | None"
Path: TypeAlias = tuple[str | int, ...]

# Line and column of the key (or item), line and column of the value, last line of the value.
_Spot: TypeAlias = tuple[int, int, int, int, int]

# The published types of events leave out the properties and make every mark optional.
_Event: TypeAlias = Any
_Mark: TypeAlias = Any

MOST_DEEP = 20

# Code of every finding of the reader, and its cure.
CODES: Mapping[str, str] = {
    **characters.CODES,
    "read-empty": "write the record, or remove the file",
    "read-syntax": "mend the line or the one above; text with ': ', ' #' or an odd first sign "
    "needs quotes",
    "read-several-documents": "keep one document a file",
    "read-too-deep": f"at most {MOST_DEEP} levels are read",
    "read-duplicate-key": "keep one of them",
    "read-key-not-text": "put the key in quotes if it is meant",
    "read-merge-key": "write the keys out",
    "read-anchor": "remove it, and write the value out wherever it is needed",
    "read-alias": "write the value out",
    "read-tag": "remove it",
    "read-empty-value": "write a value, write null, or remove the key or item",
}

# Pieces of a parser's message, the same in both parsers, and what they mean in plain words.
_PLAIN_WORDS = (
    ("mapping values are not allowed", "a second ': ' in one value"),
    ("could not find expected ':'", "a line that is neither 'key: value' nor part of a text"),
    ("cannot start any token", "a value that begins with a sign YAML keeps for itself"),
    ("unexpected end of stream", "a quoted text that is never closed"),
    ("escape", "an escape sequence that is none, in a double-quoted text"),
    ("block end", "a line whose indentation or beginning does not fit the lines above"),
    ("block mapping", "a line whose indentation or beginning does not fit the lines above"),
    ("block collection", "a line whose indentation or beginning does not fit the lines above"),
    ("expected ',' or", "a bracket that is not closed, or a missing comma"),
    ("flow node", "a bracket that is not closed, or a missing value"),
)

_PARSER = yaml.CBaseLoader if yaml.__with_libyaml__ else yaml.BaseLoader


@dataclass(frozen=True)
class Document:
    """The value of one file; its places are asked for by path, ``("laws", 0, "id")``."""

    file: str
    value: Value
    spots: Mapping[Path, _Spot]

    def at(self, path: Path) -> Value:
        """The value at the path; a LookupError or TypeError where there is none."""
        value: Any = self.value
        for step in path:
            value = value[step]
        return cast(Value, value)

    def place(self, path: Path) -> Place:
        """Where the value at the path begins."""
        _, _, line, column, _ = self.spots[path]
        return Place(self.file, line, column)

    def key_place(self, path: Path) -> Place:
        """Where the key that leads to the path begins; of an item, its own place."""
        line, column, *_ = self.spots[path]
        return Place(self.file, line, column)

    def missing_place(self, path: Path, key: str, order: Sequence[str]) -> Place:
        """Where the missing key of the mapping at the path would stand.

        That is the next key of the order that is there, else the last line of the mapping: within
        one line of the damage where a line was deleted from a file in canonical order.
        """
        mapping = self.at(path)
        later = order[order.index(key) :] if key in order else ()
        for name in later:
            if isinstance(mapping, dict) and name in mapping:
                return self.key_place((*path, name))
        _, _, _, column, last_line = self.spots[path]
        return Place(self.file, last_line, column)


def read_document(data: bytes, file: str) -> tuple[Document | None, list[Finding]]:
    """Read one file, shown to the user as ``file``; never raises on any bytes."""
    text, findings = characters.sound_text(data, file)
    if text is None:
        return None, findings
    composer = _Composer(file, text)
    value = composer.run()
    # Characters that were replaced can break the syntax: then that is no finding of its own.
    findings += [f for f in composer.findings if not (findings and f.code == "read-syntax")]
    return (None if findings else Document(file, value, composer.spots)), findings


class _GiveUpError(Exception):
    """The rest of the file can not be read; the reason is among the findings."""


class _Composer:
    """Builds the value of one text from the parser's events, and notes places and findings."""

    def __init__(self, file: str, text: str) -> None:
        self.file = file
        self.text = text
        self.findings: list[Finding] = []
        self.spots: dict[Path, _Spot] = {}
        self.reached: _Mark = yaml.Mark(file, 0, 0, 0, None, 0)  # end of the last event
        self.events: Iterator[_Event] = yaml.parse(text, Loader=_PARSER)

    def run(self) -> Value:
        """The value of the text; None after a finding that ends the reading."""
        try:
            return self.one_document()
        except _GiveUpError:
            pass
        except yaml.YAMLError as wrong:
            self.syntax_error(wrong)
        except (ValueError, OverflowError):  # the Python parser, at an escape beyond Unicode
            self.error(
                "read-syntax", self.place(self.reached), "an escape sequence that is no character"
            )
        return None

    def one_document(self) -> Value:
        self.refuse_directive()
        self.following()  # the stream starts
        start = self.following()
        if isinstance(start, yaml.StreamEndEvent):
            self.give_up("read-empty", Place(self.file, 1, 1), "an empty file")
        first = self.following()
        if isinstance(first, yaml.ScalarEvent) and _is_empty(first):
            self.give_up("read-empty", Place(self.file, 1, 1), "an empty document")
        value = self.value(first, (), None, 1)
        self.following()  # the document ends
        after = self.following()
        if not isinstance(after, yaml.StreamEndEvent):
            self.error("read-several-documents", self.place(after.start_mark), "a second document")
        return value

    def refuse_directive(self) -> None:
        for number, line in enumerate(self.text.split("\n"), 1):
            if line.startswith("%"):
                place = Place(self.file, number, 1)
                self.give_up("read-syntax", place, f"a directive {quoted(line)}")
            if line.strip() and not line.lstrip().startswith("#"):
                return

    def value(self, event: _Event, path: Path, key: Place | None, depth: int) -> Value:
        """The value that begins with the event, its place noted under the path."""
        begin, end = event.start_mark, event.end_mark
        place = self.place(begin)
        value: Value = None
        last_line = place.line
        self.refuse_properties(event, place)
        if isinstance(event, yaml.ScalarEvent):
            value = self.scalar(event, key or place, place)
            last_line = place.line + self.text[begin.index : end.index].rstrip().count("\n")
        elif not isinstance(event, yaml.AliasEvent):
            if depth > MOST_DEEP:
                self.give_up("read-too-deep", place, f"a value nested {depth} levels deep")
            is_list = isinstance(event, yaml.SequenceStartEvent)
            value = self.items(path, depth) if is_list else self.mapping(path, depth)
            last_line = self.reached.line + 1
            if not event.flow_style:  # then the end is noticed only at whatever follows
                last = next(reversed(value)) if isinstance(value, dict) else len(value) - 1
                last_line = self.spots[(*path, last)][4]
        start = key or place
        self.spots[path] = (start.line, start.column, place.line, place.column, last_line)
        return value

    def items(self, path: Path, depth: int) -> list[Value]:
        items: list[Value] = []
        while not isinstance(event := self.following(), yaml.SequenceEndEvent):
            items.append(self.value(event, (*path, len(items)), None, depth + 1))
        return items

    def mapping(self, path: Path, depth: int) -> dict[str, Value]:
        mapping: dict[str, Value] = {}
        while not isinstance(event := self.following(), yaml.MappingEndEvent):
            place = self.place(event.start_mark)
            key = self.key(event, path, place, depth)
            if key in mapping:
                first = self.spots[(*path, key)][0]
                again = f"the key {quoted(key)} again, first on line {first}"
                self.error("read-duplicate-key", place, again)
            mapping[key] = self.value(self.following(), (*path, key), place, depth + 1)
        return mapping

    def key(self, event: _Event, path: Path, place: Place, depth: int) -> str:
        if isinstance(event, yaml.ScalarEvent):
            self.refuse_properties(event, place)
            key: str = event.value
            self.refuse_unsound(event, place)
            if not event.style and key == "<<":
                self.error("read-merge-key", place, "the merge key '<<'")
            elif not event.style and (plain := characters.plain_value(key)) != (key, None):
                what = "number" if isinstance(plain[0], Literal) or plain[1] else "value"
                self.error("read-key-not-text", place, f"the {what} {quoted(key)} as a key")
            elif not key:
                self.error("read-key-not-text", place, "an empty key")
            return key
        found = "an alias" if isinstance(event, yaml.AliasEvent) else "a list or mapping"
        self.error("read-key-not-text", place, f"{found} as a key")
        self.value(event, (*path, ""), place, depth + 1)
        return f" {place.line}:{place.column}"  # stands for the key, so that reading can go on

    def scalar(self, event: _Event, start: Place, place: Place) -> Value:
        self.refuse_unsound(event, place)
        word: str = event.value
        if event.style:
            return word
        if _is_empty(event):
            self.error("read-empty-value", start, "a key or item without a value")
            return None
        value, wrong = characters.plain_value(word)
        if wrong:
            self.error(wrong, place, characters.number_found(wrong, word))
        return value

    def refuse_properties(self, event: _Event, place: Place) -> None:
        if isinstance(event, yaml.AliasEvent):
            self.error("read-alias", place, f"the alias {quoted(f'*{event.anchor}')}")
            return
        if event.anchor is not None:
            self.error("read-anchor", place, f"the anchor {quoted(f'&{event.anchor}')}")
        if event.tag is not None:
            self.error("read-tag", place, f"the tag {quoted(event.tag)}")

    def refuse_unsound(self, event: _Event, place: Place) -> None:
        """Escapes of a double-quoted text can bring in what the file itself may not hold."""
        hit = characters.UNSOUND_ESCAPED.search(event.value) if event.style == '"' else None
        if hit:
            found = f"an escape for the character U+{ord(hit[0]):04X}"
            self.error("read-control-character", place, found)

    def following(self) -> _Event:
        event = next(self.events)
        self.reached = event.end_mark
        return event

    def place(self, mark: _Mark) -> Place:
        return Place(self.file, mark.line + 1, mark.column + 1)

    def error(self, code: str, place: Place, found: str) -> None:
        self.findings.append(characters.error(code, place, found, CODES))

    def give_up(self, code: str, place: Place, found: str) -> NoReturn:
        self.error(code, place, found)
        raise _GiveUpError

    def syntax_error(self, wrong: Any) -> None:
        message = f"{getattr(wrong, 'problem', '')} {getattr(wrong, 'context', '')}"
        mark = getattr(wrong, "problem_mark", None)
        if "end of stream" in message or "escape" in message:
            mark = wrong.context_mark  # the beginning of the quoted text, the same in both parsers
        place = self.place(mark or self.reached)
        meaning = (plain for piece, plain in _PLAIN_WORDS if piece in message)
        line = [*self.text.split("\n"), ""][place.line - 1].strip()
        found = next(meaning, "a line that is no YAML")
        self.error("read-syntax", place, f"{found}: {quoted(line, 60)}" if line else found)


def _is_empty(event: _Event) -> bool:
    return not event.style and event.value == ""
