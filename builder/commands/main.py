"""The command `sparingly`: arguments in, exit code out. 0 fine, 1 the data, 2 the command.

Whatever is typed is answered or refused in one clear line. A reader who leaves early (a broken
pipe) is no fault; Ctrl-C ends with 130.
"""

from __future__ import annotations

import json
import os
import sys
from collections.abc import Sequence
from contextlib import suppress
from io import TextIOWrapper
from typing import TextIO

from builder.commands.outcome import (
    COMMAND_WRONG,
    DATA_WRONG,
    STOPPED,
    CommandError,
    DataError,
    Outcome,
)
from builder.read.findings import escaped, shortened

LONGEST_LINE = 800  # characters of a message


def entry() -> None:
    """The console script."""
    sys.exit(run(sys.argv[1:]))


def run(arguments: Sequence[str]) -> int:
    """Carry out one command, say what it has to say, and give its exit code."""
    try:
        return _deliver(_outcome(arguments))
    except KeyboardInterrupt:
        _write(sys.stderr, _line("stopped"))
        return STOPPED


def _outcome(arguments: Sequence[str]) -> Outcome:
    as_json = "--json" in arguments
    try:
        # Here, so that Ctrl-C while the numerical libraries load is answered like any other.
        from builder.commands.carry_out import carry_out

        return carry_out(arguments)
    except CommandError as wrong:
        out = _error_json(str(wrong), wrong.solids) if as_json else ""
        return Outcome(COMMAND_WRONG, out, "".join(map(_line, wrong.messages)))
    except DataError as wrong:
        out = _error_json(str(wrong), ()) if as_json else ""
        return Outcome(DATA_WRONG, out, wrong.report)
    except OSError as wrong:
        where = f"{wrong.filename}: " if wrong.filename else ""
        return Outcome(COMMAND_WRONG, "", _line(f"{where}{wrong.strerror or wrong}"))


def _error_json(message: str, solids: Sequence[str]) -> str:
    return json.dumps({"error": message, "solids": solids}, indent=2) + "\n"


def _deliver(outcome: Outcome) -> int:
    _write(sys.stderr, outcome.err)
    problem = _write(sys.stdout, outcome.out)
    if problem is None or isinstance(problem, BrokenPipeError):
        return outcome.code
    _write(sys.stderr, _line(f"the answer cannot be written: {problem.strerror}"))
    return COMMAND_WRONG


def _line(message: str) -> str:
    return f"sparingly: {shortened(escaped(message), LONGEST_LINE)}\n"


def _write(stream: TextIO | None, text: str) -> OSError | None:
    """Write all of a text in UTF-8, whatever the terminal; what went wrong, if anything."""
    if stream is None or not text:
        return None  # closed by whoever started the command
    if isinstance(stream, TextIOWrapper):
        stream.reconfigure(encoding="utf-8", errors="backslashreplace")
    try:
        stream.write(text)
        stream.flush()
    except OSError as problem:
        _abandon(stream)
        return problem
    return None


def _abandon(stream: TextIO) -> None:
    """Let what is still buffered go nowhere, or the interpreter would complain as it ends."""
    with suppress(OSError, ValueError):
        nowhere = os.open(os.devnull, os.O_WRONLY)
        os.dup2(nowhere, stream.fileno())
        os.close(nowhere)
