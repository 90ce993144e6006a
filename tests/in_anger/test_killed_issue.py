"""`issue` killed at moments spread over its run leaves the old or the new site whole."""

from __future__ import annotations

import shutil
import subprocess
import sys
import time
from pathlib import Path

import pytest
from small_tree import small_tree

from builder.site.writer import recover

MOMENTS = (0.1, 0.5, 0.85, 0.95)  # of the time a whole run takes


def issue(out: Path, *, on: str) -> list[str]:
    return [sys.executable, "-m", "builder", "issue", "--out", str(out), "--on", on]


def whole(site: Path) -> str:
    """The manifest, once every file was compared with it by an independent program."""
    done = subprocess.run(
        ["sha256sum", "--quiet", "-c", "MANIFEST.sha256"], cwd=site, capture_output=True, text=True
    )
    assert done.returncode == 0, done.stdout
    listed = {
        line.split("  ", 1)[1] for line in (site / "MANIFEST.sha256").read_text().splitlines()
    }
    there = {p.relative_to(site).as_posix() for p in site.rglob("*") if p.is_file()}
    assert there == listed | {"MANIFEST.sha256"}
    return (site / "MANIFEST.sha256").read_text()


@pytest.fixture(scope="module")
def sites(tmp_path_factory: pytest.TempPathFactory) -> tuple[Path, str, str, float]:
    """(folder of the old site, old manifest, new manifest, seconds a run takes)."""
    base = tmp_path_factory.mktemp("killed")
    subprocess.run(issue(base / "old", on="2026-01-01"), cwd=small_tree(), check=True)
    start = time.monotonic()
    subprocess.run(issue(base / "new", on="2026-02-02"), cwd=small_tree(), check=True)
    seconds = time.monotonic() - start
    return base / "old", whole(base / "old"), whole(base / "new"), seconds


@pytest.mark.parametrize("share", MOMENTS)
def test_killed(share: float, sites: tuple[Path, str, str, float], tmp_path: Path) -> None:
    old, before, after, seconds = sites
    site = tmp_path / "site"
    shutil.copytree(old, site)
    run = subprocess.Popen(
        issue(site, on="2026-02-02"), cwd=small_tree(),
        stdout=subprocess.DEVNULL, stderr=subprocess.DEVNULL,
    )  # fmt: skip
    time.sleep(share * seconds)
    run.kill()
    run.wait()
    recover(site)
    assert whole(site) in (before, after)
