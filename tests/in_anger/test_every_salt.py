"""Every salt at six bath temperatures: an answer, or a refusal in words (run with -m sweep)."""

from __future__ import annotations

from collections import Counter

import pytest

from builder.chem.curve import at
from builder.collection.dissolve import dissolve
from builder.collection.folders import shipped_folder
from builder.collection.inspection import inspect
from builder.collection.reference import Reference

TEMPERATURES = (0.0, 4.0, 25.0, 37.0, 60.0, 90.0)


@pytest.fixture(scope="module")
def reference() -> Reference:
    found = inspect([shipped_folder("constants")]).reference
    assert found is not None
    return found


@pytest.mark.sweep
def test_every_salt_answers_or_refuses_in_words(reference: Reference) -> None:
    causes: Counter[str] = Counter()
    answered = 0
    for salt_id, evaluated in reference.salts.items():
        curve = evaluated.law.curve
        assert curve is not None, salt_id
        for t in TEMPERATURES:
            value = at(curve, t)
            assert (value.log10_k is None) == (value.state == "refused"), salt_id
            answer = dissolve(reference, salt_id, t)
            if answer.state == "computed":
                answered += 1
                assert answer.solubility_mol_per_kg is not None, salt_id
                assert answer.solubility_mol_per_kg > 0.0, (salt_id, t)
                continue
            assert answer.reason, salt_id
            causes[_cause(answer.reason)] += 1
    print(f"\n{answered} answered, {sum(causes.values())} refused:")
    for cause, count in causes.most_common():
        print(f"{count:5d} {cause}")
    assert answered > 3 * sum(causes.values())


def _cause(reason: str) -> str:
    for words in ("beyond the range", "ionic strength", "holds nothing on how", "it needs"):
        if words in reason:
            return words
    return reason
