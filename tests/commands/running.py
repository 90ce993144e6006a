"""Runs the command, with few salts, in this process or as a program of its own."""

from __future__ import annotations

import contextlib
import functools
import io
import json
import os
import signal
import subprocess
import sys
from collections.abc import Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import Any
from unittest import mock

from small_tree import small_tree

from builder.collection.inspection import Inspection, inspect
from builder.commands import asking
from builder.commands.main import run

ROOT = small_tree()


@dataclass(frozen=True)
class Ran:
    code: int
    out: str
    err: str

    @property
    def json(self) -> Any:
        return json.loads(self.out)


def here(*arguments: str) -> Ran:
    """In this process: an exception that gets out fails the test."""
    out, err = io.StringIO(), io.StringIO()
    quick = mock.patch.object(asking, "inspect", _inspect)
    few = mock.patch.object(asking, "shipped_folder", lambda name: ROOT / name)
    with quick, few, contextlib.redirect_stdout(out), contextlib.redirect_stderr(err):
        code = run(arguments)
    return Ran(code, out.getvalue(), err.getvalue())


def _inspect(folders: Sequence[Path]) -> Inspection:
    """As ever, but the shipped constants are read once."""
    return shipped_inspection() if list(folders) == [ROOT / "constants"] else inspect(folders)


@functools.cache
def shipped_inspection() -> Inspection:
    return inspect([ROOT / "constants"])


def program(arguments: Sequence[str], **options: Any) -> subprocess.Popen[str]:
    """`python -m builder` as a process of its own, its streams captured unless told otherwise."""
    piped = {
        "stdout": subprocess.PIPE,
        "stderr": subprocess.PIPE,
        "text": True,
        "encoding": "utf-8",
    }
    environment = {**os.environ, "PYTHONPATH": str(ROOT), **options.pop("env", {})}
    environment.pop("PYTHONUNBUFFERED", None)  # streams as a user has them
    return subprocess.Popen(
        [sys.executable, "-m", "builder", *arguments],
        env=environment,
        preexec_fn=_mind_ctrl_c,
        **{**piped, **options},
    )


def _mind_ctrl_c() -> None:
    """A suite started in the background has Ctrl-C ignored; the program under test must not."""
    signal.signal(signal.SIGINT, signal.SIG_DFL)


def there(*arguments: str, **options: Any) -> Ran:
    """As a program, run to its end."""
    with program(arguments, **options) as process:
        out, err = process.communicate(timeout=60)
    return Ran(process.returncode, out or "", err or "")


def one_line(err: str) -> bool:
    return err.startswith("sparingly: ") and err.count("\n") == 1 and err.endswith("\n")


def house(folder: Path, name: str, text: str, kind: str = "salts") -> Path:
    """A house's own folder of constants with one file in it."""
    (folder / kind).mkdir(parents=True, exist_ok=True)
    (folder / kind / name).write_text(text, encoding="utf-8")
    return folder


def shipped(name: str) -> str:
    """The text of a shipped salt."""
    return (ROOT / "constants" / "salts" / f"{name}.yaml").read_text(encoding="utf-8")
