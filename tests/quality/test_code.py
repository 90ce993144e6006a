"""Lint, format and types are part of the one test command."""

from __future__ import annotations

import subprocess
import sys
from pathlib import Path

import pytest

CHECKS = {
    "lint": ["ruff", "check", "."],
    "format": ["ruff", "format", "--check", "."],
    "types": ["mypy", "--strict", "builder"],
}


@pytest.mark.parametrize("check", CHECKS)
def test_code(check: str, repository: Path) -> None:
    done = subprocess.run(
        [sys.executable, "-m", *CHECKS[check]], cwd=repository, capture_output=True, text=True
    )
    assert done.returncode == 0, done.stdout + done.stderr


def test_no_file_names_a_machine_or_skips_a_test(repository: Path) -> None:
    """No path of a machine in any text file, and no test that can be passed over."""
    home = str(repository.parent)
    words = [
        home + "/",
        "pytest." + "skip",
        "mark." + "skip",
        "mark." + "xfail",
        "import" + "orskip",
    ]
    folders = ("builder", "constants", "templates", "tests", ".ci")
    files = [p for folder in folders for p in (repository / folder).rglob("*") if p.is_file()]
    files += [repository / name for name in ("README.md", "DEVELOPERS.md", "pyproject.toml")]
    for file in files:
        if file.suffix == ".pyc":
            continue
        text = file.read_text(encoding="utf-8")
        for word in words:
            assert word not in text, f"{file}: {word}"
