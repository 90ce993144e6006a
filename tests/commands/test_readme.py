"""What README.md shows works as printed."""

from __future__ import annotations

import json
import os
import re
import subprocess
import sys
from pathlib import Path

import pytest
from small_tree import small_tree


def run(*words: str, cwd: Path, tree: Path | None = None) -> subprocess.CompletedProcess[str]:
    return subprocess.run(
        [sys.executable, "-m", "builder", *words],
        cwd=cwd,
        env={**os.environ, "PYTHONPATH": str(tree or small_tree())},
        capture_output=True,
        text=True,
    )


def test_the_example_of_a_new_salt_is_accepted_and_answered(
    repository: Path, tmp_path: Path
) -> None:
    readme = (repository / "README.md").read_text(encoding="utf-8")
    (example,) = re.findall(r"```yaml\n(id: .*?)```", readme, re.S)
    name = re.match(r"id: (.*)", example)
    assert name is not None
    salts = tmp_path / "our_constants" / "salts"
    salts.mkdir(parents=True)
    (salts / f"{name[1]}.yaml").write_text(example, encoding="utf-8")
    words = ("dissolve", name[1], "--at", "18", "--json", "--constants", str(salts.parent))
    done = run(*words, cwd=tmp_path)
    assert done.returncode == 0, done.stderr
    # the solubility printed in the example, 0.026 g in 100 mL, comes out again
    assert json.loads(done.stdout)["solubility_g_per_l"] == pytest.approx(0.26, rel=0.01)


def test_every_command_of_the_tour_runs(repository: Path, tmp_path: Path) -> None:
    readme = (repository / "README.md").read_text(encoding="utf-8")
    lines = re.findall(r"^    sparingly (.+?)(?:  +#.*)?$", readme, re.M)
    assert len(lines) >= 6
    (tmp_path / "baths.csv").write_text("salt,at\nPbSO4,37\n", encoding="utf-8")
    (tmp_path / "our_constants" / "salts").mkdir(parents=True)
    for line in lines:
        beyond = "calcite" in line or "cerussite" in line
        done = run(*line.split(), cwd=tmp_path, tree=repository if beyond else small_tree())
        assert done.returncode == 0, line + done.stderr
