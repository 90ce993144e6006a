"""`--batch`: many questions from a CSV file, all its errors named before one is computed."""

from __future__ import annotations

import csv
import io
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import TypeVar

from builder.commands.outcome import CommandError
from builder.read.findings import quoted

LARGEST_FILE = 10_000_000  # bytes
LONGEST_CELL = 1_000  # characters
REQUIRED = ("salt", "at")  # columns every file has

Question = TypeVar("Question")
Wrong = tuple[int, str]  # line and what is wrong there


@dataclass(frozen=True)
class Row:
    """One row: the line it ends on, counted from 1, and its cells by column."""

    line: int
    cells: Mapping[str, str]

    def cell(self, column: str) -> str | None:
        """None where it is empty."""
        return self.cells.get(column) or None

    def parts(self, column: str) -> list[str]:
        """What a cell holds several of, parted by `;`."""
        return [part for part in self.cells.get(column, "").split(";") if part.strip()]


def questions(path: Path, columns: Sequence[str], ask: Callable[[Row], Question]) -> list[Question]:
    """Every row asked for, in order. CommandError names every line that cannot be."""
    asked: list[Question] = []
    wrong: list[Wrong] = []
    shown = quoted(str(path))
    for row in _rows(path, columns, shown, wrong):
        try:
            asked.append(ask(row))
        except CommandError as problem:
            wrong.append((row.line, str(problem)))
    if wrong:
        raise CommandError(*(f"{shown}, line {line}: {what}" for line, what in sorted(wrong)))
    return asked


def _rows(path: Path, columns: Sequence[str], shown: str, wrong: list[Wrong]) -> list[Row]:
    """The rows that have the right shape; what is wrong with the others is appended to `wrong`."""
    reader = csv.reader(io.StringIO(_text(path, shown), newline=""), strict=True)
    head: list[str] | None = None
    rows: list[Row] = []
    try:
        for cells in reader:
            if not any(cell.strip() for cell in cells):
                continue
            if head is None:
                head = _head(cells, columns, shown)
            elif problem := _shape(cells, head):
                wrong.append((reader.line_num, problem))
            else:
                stripped = map(str.strip, cells)
                rows.append(Row(reader.line_num, dict(zip(head, stripped, strict=False))))
    except csv.Error as problem:
        wrong.append((reader.line_num, f"not CSV ({problem})"))
    if not rows and not wrong:
        raise CommandError(f"{shown} has no rows; write {','.join(REQUIRED)} and a row below it")
    return rows


def _text(path: Path, shown: str) -> str:
    try:
        with path.open("rb") as file:
            data = file.read(LARGEST_FILE + 1)
    except OSError as problem:
        raise CommandError(f"{shown} cannot be read: {problem.strerror}") from problem
    if len(data) > LARGEST_FILE:
        raise CommandError(f"{shown} is larger than 10 MB; split it")
    try:
        return data.decode("utf-8-sig")
    except UnicodeDecodeError as problem:
        raise CommandError(f"{shown} is not in UTF-8; save it as CSV in UTF-8") from problem


def _head(cells: Sequence[str], columns: Sequence[str], shown: str) -> list[str]:
    head = [cell.strip().lower() for cell in cells]
    if len(head) == 1 and any(sign in head[0] for sign in ";\t"):
        raise CommandError(
            f"{shown} has its columns parted by {';' if ';' in head[0] else 'tab'!r}; save it with "
            "commas between the columns and a point in the numbers, as in PbSO4,37.5"
        )
    if unknown := [name for name in head if name not in columns]:
        raise CommandError(
            f"{shown} has a column {quoted(unknown[0])}; the columns are {', '.join(columns)}"
        )
    if twice := [name for name in columns if head.count(name) > 1]:
        raise CommandError(f"{shown} has the column {twice[0]} twice; keep one")
    if missing := [name for name in REQUIRED if name not in head]:
        raise CommandError(f"{shown} has no column {missing[0]}; begin with {','.join(REQUIRED)}")
    return head


def _shape(cells: Sequence[str], head: Sequence[str]) -> str:
    """What is wrong with the number or the length of the cells; empty where nothing is."""
    if len(cells) > len(head):
        return (
            f"{len(cells)} cells for {len(head)} columns; put a cell that holds a comma in quotes, "
            "write decimals with a point and part electrolytes and solids by ';'"
        )
    if any(len(cell) > LONGEST_CELL for cell in cells):
        return f"a cell of more than {LONGEST_CELL} characters; shorten it"
    filled = {name for name, cell in zip(head, cells, strict=False) if cell.strip()}
    missing = [name for name in REQUIRED if name not in filled]
    return f"no {missing[0]}; fill the cell in" if missing else ""
