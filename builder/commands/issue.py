"""`issue`: inspect, compute, render and write the whole reference."""

from __future__ import annotations

import re
import sys
from collections.abc import Mapping, Sequence
from contextlib import suppress
from datetime import UTC, date, datetime
from pathlib import Path

from builder.collection.identity import collection_digest
from builder.collection.records import Collection
from builder.commands.asking import inspection
from builder.commands.outcome import DATA_WRONG, FINE, CommandError, Outcome
from builder.read.findings import quoted, report_text
from builder.site.build import build_site
from builder.site.writer import TargetRefused, recover, write_site

FIRST_PAGE = "index.html"
_DATE = re.compile(r"[0-9]{4}-[0-9]{2}-[0-9]{2}")


def run(
    target: Path, laid_over: Sequence[Path], on: str | None, environment: Mapping[str, str]
) -> Outcome:
    """Issue the reference at `target`; where the constants have an error nothing is touched."""
    dated = _stated_date(on, environment)
    if told := recover(target).message:
        _progress(told)
    found = inspection([], laid_over)
    report = report_text(found.findings, most_per_file=len(found.findings))
    _progress(f"inspected {len(found.collection.files)} files: {report.splitlines()[-1]}")
    if found.reference is None:
        return Outcome(DATA_WRONG, report)
    _progress(f"computed {len(found.reference.salts)} salts")
    issue_date = dated or _newest_date(found.collection)
    pages = build_site(found.reference, found.findings, issue_date)
    size = sum(map(len, pages.values()))
    _progress(f"rendered {len(pages)} files, {size / 1e6:.2f} MB, dated {issue_date}")
    try:
        written = write_site(pages, target)
    except TargetRefused as refused:
        raise CommandError(str(refused)) from refused
    _progress(f"wrote {written.files} files ({written.method})")
    digest = collection_digest(found.collection)
    return Outcome(FINE, f"collection {digest}\n{written.target / FIRST_PAGE}\n")


def _stated_date(on: str | None, environment: Mapping[str, str]) -> str | None:
    """--on, else SOURCE_DATE_EPOCH in seconds (UTC); the clock is never read."""
    if on is not None:
        with suppress(ValueError):
            if _DATE.fullmatch(on):
                return date.fromisoformat(on).isoformat()
        raise CommandError(f"{quoted(on)} is no date; write it as in 2026-12-01")
    epoch = environment.get("SOURCE_DATE_EPOCH")
    if not epoch:
        return None
    with suppress(ValueError, OverflowError, OSError):
        if re.fullmatch(r"[0-9]{1,12}", epoch):
            return datetime.fromtimestamp(int(epoch), UTC).date().isoformat()
    raise CommandError(f"SOURCE_DATE_EPOCH is {quoted(epoch)}; set it to seconds since 1970")


def _newest_date(collection: Collection) -> str:
    return max(salt.newest_date for salt in collection.salts.values())


def _progress(line: str) -> None:
    """One line on standard error, as soon as the stage is done; nobody has to read it."""
    if sys.stderr is not None:
        with suppress(OSError):
            print(line, file=sys.stderr, flush=True)
