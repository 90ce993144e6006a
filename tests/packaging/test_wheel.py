"""The wheel carries constants and templates: the same site from an empty environment."""

from __future__ import annotations

import os
import subprocess
import sys
import venv
from pathlib import Path

from small_tree import small_tree


def run(*command: str, cwd: Path) -> None:
    environment = {k: v for k, v in os.environ.items() if not k.startswith("PYTHON")}
    done = subprocess.run(command, cwd=cwd, capture_output=True, text=True, env=environment)
    assert done.returncode == 0, done.stdout + done.stderr


def test_an_installed_wheel_builds_the_same_site_from_an_empty_folder(tmp_path: Path) -> None:
    tree = small_tree()
    run(
        sys.executable, "-m", "pip", "wheel", "--quiet", "--no-deps", "--no-build-isolation",
        "--wheel-dir", str(tmp_path / "wheel"), str(tree), cwd=tmp_path,
    )  # fmt: skip
    (wheel,) = (tmp_path / "wheel").glob("sparingly-*.whl")
    venv.create(tmp_path / "env", with_pip=True)
    python = tmp_path / "env" / "bin" / "python"
    run(str(python), "-m", "pip", "install", "--quiet", str(wheel), cwd=tmp_path)
    empty = tmp_path / "empty"
    empty.mkdir()
    run(str(tmp_path / "env" / "bin" / "sparingly"), "issue", cwd=empty)
    run(sys.executable, "-m", "builder", "issue", "--out", str(tmp_path / "clone"), cwd=tree)
    installed = (empty / "site_out" / "MANIFEST.sha256").read_text()
    assert installed == (tmp_path / "clone" / "MANIFEST.sha256").read_text()
    assert "salts/lead-sulfate.html" in installed
