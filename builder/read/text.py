"""From bytes to sound text, and from a plain word to its value.

Two narrow rules replace the wide ones of YAML 1.1: which characters a file may hold, and which
unquoted words are not text (numbers as JSON writes them, ``true``, ``false``, ``null``).
"""

import math
import re
from collections.abc import Mapping

from builder.read.findings import Finding, Place, quoted

MOST_BYTES = 1_000_000
_MOST_LINES_NAMED = 10

# Code of every finding made here, and its cure.
CODES: Mapping[str, str] = {
    "read-too-large": f"split it: a file has at most {MOST_BYTES} bytes",
    "read-not-utf8": "save the file as UTF-8",
    "read-byte-order-mark": "save the file as UTF-8 without a byte order mark",
    "read-line-ending": "save the file with line feeds only (LF, not CR or CR LF)",
    "read-tab": "use spaces",
    "read-control-character": "remove it or write what it stands for",
    "read-number-comma": "write a decimal point and no thousands separator, or quote the text",
    "read-number-minus": "write the hyphen-minus (-) of the keyboard, or quote the text",
    "read-number-form": "write it as 1000, 10, 0.5, 5 or 2e-3 are written, or quote the text",
}

# Control characters, soft hyphen, zero-width and direction marks (text would not be what it looks
# like), line and paragraph separators (YAML 1.1 breaks lines there), surrogates, private use,
# the replacement character (a letter was lost) and tag characters.
_UNSOUND = (
    "\x00-\x08\x0b\x0c\x0e-\x1f\x7f-\x9f\xad\u061c\u180e\u200b-\u200f\u2028-\u202e\u2060-\u206f"
    "\ud800-\udfff\ue000-\uf8ff\ufeff\ufff9-\uffff\U000e0000-\U0010ffff"
)
UNSOUND = re.compile(f"[{_UNSOUND}]")
UNSOUND_ESCAPED = re.compile(f"[\t\r{_UNSOUND}]")  # in a double-quoted text, where \t is possible

_JSON_NUMBER = re.compile(r"-?(?:0|[1-9][0-9]*)(?:\.[0-9]+)?(?:[eE][-+]?[0-9]+)?")
_NEARLY_NUMBER = re.compile(
    r"[-+]?(?:[0-9][0-9_]*\.?[0-9_]*|\.[0-9][0-9_]*)(?:[eE][-+]?[0-9]+)?"
    r"|[-+]?0[xXoObB][0-9A-Fa-f_]+"
    r"|[-+]?\.(?:inf|Inf|INF)|\.(?:nan|NaN|NAN)|NaN|[-+]?Infinity"
)
_COMMA_NUMBER = re.compile(
    r"[-+]?(?:[0-9]*,[0-9]+|[0-9]{1,3}(?:,[0-9]{3})+(?:\.[0-9]+)?)(?:[eE][-+]?[0-9]+)?"
)
_DASHES = str.maketrans({"\u2212": "-", "\u2013": "-"})
_WORDS: Mapping[str, bool | None] = {"true": True, "false": False, "null": None}


class Literal(float):
    """A number and the characters it was written with: ``Literal("1.10").text == "1.10"``."""

    __slots__ = ("text",)
    text: str

    def __new__(cls, text: str) -> "Literal":
        number = super().__new__(cls, text)
        number.text = text
        return number

    def __getnewargs__(self) -> tuple[str]:  # type: ignore[override]
        return (self.text,)  # copies and pickles keep the characters


def error(code: str, place: Place, found: str, cures: Mapping[str, str] = CODES) -> Finding:
    """An error with the cure that belongs to its code."""
    return Finding("error", code, place, found, cures[code])


def sound_text(data: bytes, file: str) -> tuple[str | None, list[Finding]]:
    """The text of the bytes, and what is wrong with its characters.

    The text is None where there is none to go on with. Else unsound characters have been replaced
    one for one, so that places still hold and the structure can be read for further findings.
    """
    if len(data) > MOST_BYTES:
        return None, [error("read-too-large", Place(file, 1, 1), f"{len(data)} bytes")]
    try:
        text = data.decode("utf-8")
    except UnicodeDecodeError as wrong:
        lines = data[: wrong.start].decode("utf-8").split("\n")
        place = Place(file, len(lines), len(lines[-1]) + 1)
        found = f"the byte 0x{data[wrong.start]:02X}, which is not UTF-8 here"
        return None, [error("read-not-utf8", place, found)]
    findings = []
    if text.startswith("\ufeff"):
        text = text[1:]
        findings.append(error("read-byte-order-mark", Place(file, 1, 1), "a byte order mark"))
    for code, pattern, stand_in, name in (
        ("read-line-ending", re.compile("\r\n?"), "\n", "a carriage return"),
        ("read-tab", re.compile("\t"), " ", "a tab"),
        ("read-control-character", UNSOUND, "?", "an invisible or control character"),
    ):
        if pattern.search(text):
            findings.append(_where(code, pattern, text, file, name))
            text = pattern.sub(stand_in, text)
    return text, findings


def _where(code: str, pattern: re.Pattern[str], text: str, file: str, name: str) -> Finding:
    """One finding for all characters of a kind: a whole file can be full of them."""
    hits = [
        (number, hit)
        for number, line in enumerate(text.split("\n"), 1)
        if (hit := pattern.search(line + "\n" if code == "read-line-ending" else line))
    ]
    first_line, first = hits[0]
    lines = ", ".join(str(number) for number, _ in hits[:_MOST_LINES_NAMED])
    more = f" and {len(hits) - _MOST_LINES_NAMED} more" if len(hits) > _MOST_LINES_NAMED else ""
    found = f"{name} (U+{ord(first[0][0]):04X}; line{'s' if len(hits) > 1 else ''} {lines}{more})"
    return error(code, Place(file, first_line, first.start() + 1), found)


def plain_value(word: str) -> tuple[str | Literal | bool | None, str | None]:
    """The value of an unquoted word and, where it nearly is a number, the code of the error.

    ``1e-10`` is a number; ``NO``, ``1:2``, ``2026-01-15`` and ``2+`` are text; ``1,5`` is an error.
    """
    if word in _WORDS:
        return _WORDS[word], None
    if _JSON_NUMBER.fullmatch(word):
        number = Literal(word)
        vanished = not number and re.search("[1-9]", re.split("[eE]", word)[0])
        return number, "read-number-form" if math.isinf(number) or vanished else None
    with_hyphens = word.translate(_DASHES)
    if _NEARLY_NUMBER.fullmatch(with_hyphens) or _COMMA_NUMBER.fullmatch(with_hyphens):
        if with_hyphens != word:
            return word, "read-number-minus"
        return word, "read-number-comma" if "," in word else "read-number-form"
    return word, None


def number_found(code: str, word: str) -> str:
    """What a finding about a near-number says was found."""
    what = {
        "read-number-comma": "a comma in the number",
        "read-number-minus": "a typographic minus in the number",
        "read-number-form": "a number in a form or size that is not accepted,",
    }
    return f"{what[code]} {quoted(word)}"
