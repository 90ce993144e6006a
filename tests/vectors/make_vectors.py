"""Writes the shared vectors: problems of numbers only and their answers from mpmath.

    cd tests && python -m vectors.make_vectors [how many, 400 unless said]

A version is never rewritten once something rests on it: a longer or different set is a new file
(equilibrium-2.json). Raising the number keeps the earlier problems and adds to them. A drawn
problem that has no answer at all is passed over and counted; one whose ionic strength is within
1e-6 of its limit cannot be judged in doubles and is passed over too.
"""

from __future__ import annotations

import json
import random
import sys
from collections import Counter
from pathlib import Path
from typing import Any

from mpmath import mpf
from vectors.posed import Unsolved, log10_k
from vectors.random_problems import random_problem, twelve
from vectors.reference import COMPUTED, answer, sensitivities
from vectors.water_mp import debye_huckel, density, permittivity

HERE = Path(__file__).resolve().parent
FIRST_SEED = 20261201
SENSITIVITIES_EVERY = 10


def equilibrium(count: int) -> tuple[list[dict[str, Any]], Counter[str]]:
    """So many vectors, and how many of each kind."""
    vectors: list[dict[str, Any]] = []
    census: Counter[str] = Counter()
    seed = FIRST_SEED
    while len(vectors) < count:
        kind, problem = random_problem(seed)
        seed += 1
        try:
            found = answer(problem)
        except Unsolved as reason:
            census[f"passed over: {kind}: {reason}"] += 1
            continue
        if found["state"] == COMPUTED:
            if problem["model"] and abs(found["ionic_strength"] / problem["limit"] - 1) < 1e-6:
                continue
            census["I > 0.1"] += found["ionic_strength"] > 0.1
            tiny = any(abs(s) < 1e-17 for s in found["amount"][:1])  # where scaling matters
            if problem["hold"] and (tiny or len(vectors) % SENSITIVITIES_EVERY == 0):
                found |= sensitivities(problem)
        else:
            census["refused"] += 1
        census[kind] += 1
        vectors.append({"problem": problem, "answer": found})
    return vectors, census


def temperature() -> dict[str, list[dict[str, Any]]]:
    """Laws and properties of water at random temperatures."""
    rng = random.Random(FIRST_SEED)
    laws = []
    for _ in range(300):
        t = round(rng.uniform(0.0, 100.0), 2)
        spans = (30.0, 6000.0, 60.0, 0.05, 1e5, 5e-5)
        law = [rng.choice((273.15, 293.15, 298.15, 310.15))]
        law += [twelve(rng.uniform(-s, s)) for s in spans]
        laws.append({"t_celsius": t, "law": law, "log10_k": float(log10_k(law, mpf(repr(t))))})
    water = []
    for t in [0.0, 4.0, 25.0, 37.0, 100.0, *(round(rng.uniform(0.0, 100.0), 2) for _ in range(45))]:
        exact = mpf(repr(t))
        A, B = debye_huckel(exact)
        water.append(
            {
                "t_celsius": t,
                "density_kg_m3": float(density(exact)),
                "permittivity": float(permittivity(exact)),
                "A": float(A),
                "B": float(B),
            }
        )
    return {"laws": laws, "water": water}


def written(title: str, version: int, lists: dict[str, list[dict[str, Any]]]) -> str:
    """JSON with one vector a line, so that a change shows as a line."""
    parts = [f'{{"title": {json.dumps(title)},\n"version": {version}']
    for name, items in lists.items():
        lines = ",\n".join(json.dumps(item, separators=(",", ":")) for item in items)
        parts.append(f'"{name}": [\n{lines}\n]')
    return ",\n".join(parts) + "\n}\n"


def main() -> None:
    count = int(sys.argv[1]) if len(sys.argv) > 1 else 400
    vectors, census = equilibrium(count)
    for name, number in sorted(census.items()):
        print(f"{number:5d}  {name}")
    text = written("problems of dissolving, answers from mpmath", 1, {"vectors": vectors})
    (HERE / "equilibrium-1.json").write_text(text, encoding="utf-8")
    text = written("laws and water at a temperature, answers from mpmath", 1, temperature())
    (HERE / "temperature-1.json").write_text(text, encoding="utf-8")


if __name__ == "__main__":
    main()
