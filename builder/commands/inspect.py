"""`inspect`: all that reading and checking the constants finds, or counts of what they hold."""

from __future__ import annotations

from collections import Counter
from collections.abc import Mapping
from dataclasses import asdict
from typing import Any

from builder.collection.inspection import Inspection
from builder.collection.summary import summarise
from builder.commands.outcome import DATA_WRONG, FINE, Outcome
from builder.commands.telling import aligned, json_text, plain
from builder.read.findings import LEVELS, report_text


def run(found: Inspection, summary: bool, as_json: bool) -> Outcome:
    """Findings, or the summary, as text or as JSON; exit 1 where there is an error."""
    counts = Counter(finding.level for finding in found.findings)
    numbers = {f"{level}s": counts[level] for level in LEVELS}
    code = DATA_WRONG if counts["error"] else FINE
    if summary:
        record = {**asdict(summarise(found.collection)), **numbers}
        return Outcome(code, json_text(record) if as_json else _summary_text(record))
    if as_json:
        record = {"findings": [finding.as_json() for finding in found.findings], **numbers}
        return Outcome(code, json_text(record))
    return Outcome(code, report_text(found.findings, most_per_file=len(found.findings)))


def _summary_text(record: Mapping[str, Any]) -> str:
    return aligned(
        [
            ("salts", str(record["salts"])),
            ("determinations", str(record["determinations"])),
            ("independent families", str(record["families"])),
            ("two families or more", f"{record['two_families']} salts"),
            ("laws by kind", _kinds(record["laws"])),
            ("laws chosen", _kinds(record["laws_of_chosen"])),
            ("evidence of all", _shares(record["evidence"])),
            ("evidence of chosen", _shares(record["evidence_of_chosen"])),
            ("must be found", f"{record['required_found']} of {record['required']} salts"),
            ("findings", ", ".join(f"{record[f'{level}s']} {level}s" for level in LEVELS)),
        ]
    )


def _kinds(counts: Mapping[str, int]) -> str:
    return ", ".join(f"{n} {kind}" for kind, n in counts.items())


def _shares(counts: Mapping[str, int]) -> str:
    total = sum(counts.values())
    return ", ".join(f"{plain(100.0 * n / total, 0)} % {word} ({n})" for word, n in counts.items())
