"""`inspect`: all that reading and checking the constants finds, or counts of what they hold."""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterable, Mapping
from typing import Any

from builder.collection.inspection import Inspection
from builder.collection.records import Collection
from builder.commands.outcome import DATA_WRONG, FINE, Outcome
from builder.commands.telling import aligned, json_text, plain
from builder.read.findings import LEVELS, report_text


def run(found: Inspection, summary: bool, as_json: bool) -> Outcome:
    """Findings, or the summary, as text or as JSON; exit 1 where there is an error."""
    counts = Counter(finding.level for finding in found.findings)
    numbers = {f"{level}s": counts[level] for level in LEVELS}
    code = DATA_WRONG if counts["error"] else FINE
    if summary:
        record = {**summarised(found.collection), **numbers}
        return Outcome(code, json_text(record) if as_json else _summary_text(record))
    if as_json:
        record = {"findings": [finding.as_json() for finding in found.findings], **numbers}
        return Outcome(code, json_text(record))
    return Outcome(code, report_text(found.findings, most_per_file=len(found.findings)))


def summarised(collection: Collection) -> dict[str, Any]:
    """Counts of what the sound files hold; families are independent origins of numbers.

    laws: by kind. evidence: numbers of determinations; evidence_of_chosen: of the chosen ones.
    """
    salts = collection.salts.values()
    reported = [d for salt in salts for d in salt.determinations.values()]
    chosen = [
        salt.determinations[salt.choice.determination]
        for salt in salts
        if salt.choice.determination in salt.determinations
    ]
    cited = {d.citation.source for d in reported} & collection.sources.keys()
    return {
        "salts": len(salts),
        "determinations": len(reported),
        "families": len({collection.sources[source].family for source in cited}),
        "laws": _counted(law.kind for salt in salts for law in salt.laws.values()),
        "evidence": _counted(d.citation.evidence for d in reported),
        "evidence_of_chosen": _counted(d.citation.evidence for d in chosen),
    }


def _counted(words: Iterable[str]) -> dict[str, int]:
    """The most frequent first, equals by name."""
    return dict(sorted(Counter(words).items(), key=lambda item: (-item[1], item[0])))


def _summary_text(record: Mapping[str, Any]) -> str:
    return aligned(
        [
            ("salts", str(record["salts"])),
            ("determinations", str(record["determinations"])),
            ("independent families", str(record["families"])),
            ("laws by kind", ", ".join(f"{n} {kind}" for kind, n in record["laws"].items())),
            ("evidence of all", _shares(record["evidence"])),
            ("evidence of chosen", _shares(record["evidence_of_chosen"])),
            ("findings", ", ".join(f"{record[f'{level}s']} {level}s" for level in LEVELS)),
        ]
    )


def _shares(counts: Mapping[str, int]) -> str:
    total = sum(counts.values())
    return ", ".join(f"{plain(100.0 * n / total, 0)} % {word} ({n})" for word, n in counts.items())
