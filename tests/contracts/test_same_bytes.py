"""Two builds in other surroundings give the same bytes (DEVELOPERS.md, contracts 8 and 9)."""

from __future__ import annotations

import os
import subprocess
import sys
from pathlib import Path

import pytest
from small_tree import small_tree


def processor_features() -> str:
    """Everything numpy could pick by processor, to be switched off (its own names)."""
    from numpy._core._multiarray_umath import __cpu_dispatch__, __cpu_features__

    return " ".join(name for name in __cpu_dispatch__ if __cpu_features__.get(name))


SURROUNDINGS = [
    {"TZ": "UTC", "LC_ALL": "C", "PYTHONHASHSEED": "0"},
    {"TZ": "Pacific/Kiritimati", "LC_ALL": "C.UTF-8", "PYTHONHASHSEED": "4242",
     "NPY_DISABLE_CPU_FEATURES": "*"},
]  # fmt: skip


def build(target: Path, cwd: Path, extra: dict[str, str], umask: int) -> str:
    extra = dict(extra)
    if extra.get("NPY_DISABLE_CPU_FEATURES") == "*":
        extra["NPY_DISABLE_CPU_FEATURES"] = processor_features()
    before = os.umask(umask)
    try:
        done = subprocess.run(
            [sys.executable, "-m", "builder", "issue", "--out", str(target)],
            cwd=cwd, env={**os.environ, **extra}, capture_output=True, text=True,
        )  # fmt: skip
    finally:
        os.umask(before)
    assert done.returncode == 0, done.stderr
    return (target / "MANIFEST.sha256").read_text(encoding="utf-8")


@pytest.mark.parametrize("salts", ["few", pytest.param("all", marks=pytest.mark.sweep)])
def test_other_surroundings_same_manifest(
    salts: str, tmp_path: Path, repository: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    tree = small_tree() if salts == "few" else repository
    monkeypatch.setenv("PYTHONPATH", str(tree))
    (tmp_path / "elsewhere").mkdir()
    first = build(tmp_path / "one", tree, SURROUNDINGS[0], 0o022)
    second = build(tmp_path / "two", tmp_path / "elsewhere", SURROUNDINGS[1], 0o077)
    assert first == second
    assert len(first.splitlines()) > 12


def test_the_second_surroundings_are_really_other_for_numpy() -> None:
    """The switch-off list is not empty, so that the test above compares what it says."""
    assert processor_features()
