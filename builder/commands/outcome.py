"""What a command ends with: an exit code and what it says, or the reason why it cannot answer."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from builder.read.findings import Finding, report_text

FINE, DATA_WRONG, COMMAND_WRONG, STOPPED = 0, 1, 2, 130


@dataclass(frozen=True)
class Outcome:
    """Exit code, and the whole of standard output and standard error."""

    code: int
    out: str
    err: str = ""


class CommandError(Exception):
    """The command as typed cannot be carried out; one clear line for each message.

    solids: ids of what the text may have meant, for a reader of JSON.
    """

    def __init__(self, *messages: str, solids: Sequence[str] = ()) -> None:
        super().__init__("; ".join(messages))
        self.messages = messages
        self.solids = tuple(solids)


class DataError(Exception):
    """The constants have errors: nothing can be computed from them."""

    def __init__(self, findings: Sequence[Finding]) -> None:
        self.report = report_text(f for f in findings if f.level == "error")
        super().__init__("the constants have errors; 'sparingly inspect' lists them")
