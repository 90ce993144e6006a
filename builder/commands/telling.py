"""Answers as JSON, as CSV, and as lines for people."""

from __future__ import annotations

import csv
import io
import json
import math
import re
import textwrap
from collections.abc import Mapping, Sequence
from typing import Any

from builder.chem.rounding import display, fixed, significant, ten_digits, with_uncertainty

LINE_WIDTH = 84  # characters of a folded line, beside the column of what it is about

Record = Mapping[str, Any]


def number(x: float | None) -> float | None:
    """A number of an answer: ten digits, None where there is none."""
    return None if x is None or not math.isfinite(x) else ten_digits(x)


def json_text(record: Any) -> str:
    """ASCII JSON; NaN and infinity are refused (ValueError)."""
    return json.dumps(record, indent=2, allow_nan=False) + "\n"


def csv_text(keys: Sequence[str], records: Sequence[Record]) -> str:
    """One line a record; what is null in JSON is an empty cell, a list is compact text."""
    out = io.StringIO()
    writer = csv.writer(out, lineterminator="\n")
    writer.writerow(keys)
    writer.writerows([_cell(record.get(key)) for key in keys] for record in records)
    return out.getvalue()


def _cell(value: Any) -> str:
    if value is None:
        return ""
    if isinstance(value, list):
        return "; ".join(_compact(item) for item in value)
    return value if isinstance(value, str) else json.dumps(value)


def _compact(item: Record) -> str:
    """`form PbSO4(aq), share 0.5, ...`: keys that are null are left out."""
    return ", ".join(f"{key} {_cell(value)}" for key, value in item.items() if value is not None)


def plain(x: float, decimals: int) -> str:
    """So many decimals, typographic minus."""
    return display(fixed(x, decimals))


def typographic(text: str) -> str:
    """A sentence with U+2212 before negative numbers, its hyphens left alone."""
    return re.sub(r"(?<!\w)-(?=[0-9])", "−", text)


def celsius(t: float) -> str:
    """A temperature as people write it: `37 °C`."""
    return typographic(f"{t:g} °C")


def digits(x: float, count: int = 3) -> str:
    """So many significant digits, typographic."""
    return display(significant(x, count))


def give_or_take(x: float, u: float | None) -> str:
    """`−7.737 ± 0.029`; two decimals alone where u is not evaluated."""
    if not u:
        return plain(x, 2)
    value, uncertainty = with_uncertainty(x, u)
    return f"{display(value)} ± {display(uncertainty)}"


def between(low: float, high: float) -> str:
    return f"95 % between {digits(low)} and {digits(high)}"


def aligned(lines: Sequence[tuple[str, str]]) -> str:
    """Two columns; the first is as wide as its longest text, the second is folded."""
    width = max(len(left) for left, _ in lines)
    out: list[str] = []
    for left, right in lines:
        for i, line in enumerate(_folded(right, LINE_WIDTH)):
            out.append(f"{'' if i else left:{width}}  {line}".rstrip())
    return "\n".join(out) + "\n"


def paragraph(text: str) -> str:
    """Lines of a text that stands by itself."""
    return "\n".join(_folded(text, LINE_WIDTH)) + "\n"


def _folded(text: str, width: int) -> list[str]:
    """Lines of at most `width` characters, broken at spaces but never inside a number."""
    held_together = text.replace(" × ", "\u00a0×\u00a0")
    lines = textwrap.wrap(held_together, width, break_on_hyphens=False)
    return [line.replace("\u00a0", " ") for line in lines or [""]]


def table(head: Sequence[str], rows: Sequence[Sequence[str]]) -> str:
    """Columns of text, the first flush left, the others flush right."""
    widths = [max(len(row[i]) for row in (head, *rows)) for i in range(len(head))]
    return "".join(
        "  ".join(
            cell.ljust(width) if i == 0 else cell.rjust(width)
            for i, (cell, width) in enumerate(zip(row, widths, strict=True))
        ).rstrip()
        + "\n"
        for row in (head, *rows)
    )
