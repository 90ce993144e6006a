"""The program with few salts: a copy of builder, templates and constants that starts quickly.

Tests that start the program many times run it from such a copy; what they show does not depend on
how many salts there are. Sources that the kept salts do not cite are left out, as an unused source
is an error.
"""

from __future__ import annotations

import atexit
import functools
import re
import shutil
import tempfile
from collections.abc import Iterable
from pathlib import Path

from builder.collection.inspection import inspect

ROOT = Path(__file__).resolve().parents[1]
SALTS = (
    "anhydrite", "barium-sulfate", "brucite", "fluorite", "gypsum", "lead-iodide", "lead-sulfate",
    "silver-bromide", "silver-chloride", "silver-chromate", "strontium-sulfate",
    "thallium-chloride",
)  # fmt: skip


@functools.cache
def small_tree() -> Path:
    """Folder with builder/, templates/ and reduced constants/; removed when the run ends."""
    folder = Path(tempfile.mkdtemp(prefix="sparingly-small-"))
    atexit.register(shutil.rmtree, folder, ignore_errors=True)
    leave = shutil.ignore_patterns("__pycache__")
    for name in ("builder", "templates", "constants"):
        shutil.copytree(ROOT / name, folder / name, ignore=leave)
    for name in ("pyproject.toml", "README.md"):
        shutil.copy(ROOT / name, folder / name)
    constants = folder / "constants"
    for salt in (constants / "salts").glob("*.yaml"):
        if salt.stem not in SALTS:
            salt.unlink()
    for _ in range(3):  # a source may be cited by another source only
        unused = [f for f in inspect([constants]).findings if f.code == "chem-source-unused"]
        if not unused:
            return folder
        for file in {f.place.file for f in unused}:
            ids = {
                m for f in unused if f.place.file == file for m in re.findall("'(.+?)'", f.found)
            }
            _without(folder / file, ids)
    return folder


def _without(file: Path, ids: Iterable[str]) -> None:
    """Take blocks `- id: ...` out of a file; a file without any is removed."""
    text = file.read_text(encoding="utf-8")
    for name in ids:
        text = re.sub(rf"(?ms)^  - id: {re.escape(name)}\n.*?(?=^  - id: |\Z)", "", text)
    if re.search(r"^  - id: ", text, re.M):
        file.write_text(text, encoding="utf-8")
    else:
        file.unlink()
