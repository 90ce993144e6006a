"""Reads the arguments and hands them to the command they name."""

from __future__ import annotations

import argparse
import os
from collections.abc import Callable, Sequence
from pathlib import Path
from typing import Any, NoReturn

from builder import __version__
from builder.collection.names import electrolyte_names, salt_names
from builder.commands import asking, batch, dissolve, dissolve_text, inspect, value
from builder.commands.asking import Around
from builder.commands.outcome import FINE, CommandError, Outcome
from builder.commands.telling import csv_text, json_text


def carry_out(arguments: Sequence[str]) -> Outcome:
    """CommandError for arguments that are wrong, DataError for constants that are."""
    try:
        given = _parser().parse_args(arguments)
    except _Told as told:
        return Outcome(FINE, told.text)
    command: Callable[[argparse.Namespace], Outcome] = given.carry_out
    return command(given)


def _inspect(given: argparse.Namespace) -> Outcome:
    found = asking.inspection(given.folders, given.constants)
    return inspect.run(found, given.summary, given.json)


def _issue(given: argparse.Namespace) -> Outcome:
    from builder.commands import issue  # the page templates load only when pages are made

    return issue.run(given.out, given.constants, given.on, os.environ)


def _value(given: argparse.Namespace) -> Outcome:
    _one_or_many(given)
    reference = asking.reference(given.constants)
    names = salt_names(reference.collection)

    def question(salt: str, at: str) -> tuple[str, float]:
        t = asking.temperature(at)
        return asking.salt(names, reference, salt), t

    if given.batch is not None:
        asked = batch.questions(
            given.batch, ("salt", "at"), lambda row: question(row.cells["salt"], row.cells["at"])
        )
        return Outcome(
            FINE, csv_text(value.KEYS, [value.record(reference, *each) for each in asked])
        )
    one = question(given.salt, given.at)
    if given.json:
        return Outcome(FINE, json_text(value.record(reference, *one)))
    return Outcome(FINE, value.text(reference, *one))


def _dissolve(given: argparse.Namespace) -> Outcome:
    _one_or_many(given)
    reference = asking.reference(given.constants)
    names = salt_names(reference.collection)
    electrolytes = electrolyte_names(reference.collection)

    def question(salt: str, at: str, around: Around) -> Callable[[], dissolve.Answer]:
        t = asking.temperature(at)
        salt_id = asking.salt(names, reference, salt)
        conditions = asking.conditions(names, electrolytes, reference, salt_id, around)
        return lambda: dissolve.answer(reference, salt_id, t, conditions, given.textbook)

    if given.batch is not None:
        asked = batch.questions(
            given.batch,
            ("salt", "at", "with", "ph", "co2", "form-also", "acid", "base"),
            lambda row: question(row.cells["salt"], row.cells["at"], _around(row)),
        )
        return Outcome(FINE, csv_text(dissolve.KEYS, [dissolve.record(ask()) for ask in asked]))
    typed = Around(given.added, given.ph, given.co2, given.also, given.acid, given.base)
    answer = question(given.salt, given.at, typed)()
    if given.json:
        return Outcome(FINE, json_text(dissolve.record(answer)))
    return Outcome(FINE, dissolve_text.text(reference, answer))


def _around(row: batch.Row) -> Around:
    """What surrounds the salt of a row; an empty cell asks for nothing."""
    return Around(
        added=row.parts("with"),
        ph=row.cell("ph"),
        co2=row.cell("co2"),
        also=row.parts("form-also"),
        acid=row.cell("acid"),
        base=row.cell("base"),
    )


def _one_or_many(given: argparse.Namespace) -> None:
    """A salt at a temperature, or a file of them."""
    columns = ("salt", "at", "added", "ph", "co2", "also", "acid", "base")
    alone = any(getattr(given, name, None) not in (None, []) for name in columns)
    if given.batch is not None and (alone or given.json):
        raise CommandError(
            "--batch asks what its file says and answers in CSV; leave out the salt, --json and "
            "the options that are columns of the file, as --at"
        )
    if given.batch is None and given.salt is None:
        raise CommandError("no salt is named; write it as in 'sparingly value PbSO4 --at 37'")
    if given.batch is None and given.at is None:
        raise CommandError("no temperature is given; write it as in --at 37")


class _Told(Exception):  # noqa: N818 - no error: what was asked for was help
    def __init__(self, text: str) -> None:
        super().__init__(text)
        self.text = text


class _Tell(argparse.Action):
    """Ends the reading of arguments with a text: the help, or what `const` says."""

    def __init__(self, **options: Any) -> None:
        super().__init__(**{**options, "nargs": 0, "default": argparse.SUPPRESS})

    def __call__(self, parser: argparse.ArgumentParser, *_: object) -> NoReturn:
        raise _Told(self.const or parser.format_help())


class _Parser(argparse.ArgumentParser):
    """Full option names only; what is wrong is one line."""

    def __init__(self, **options: Any) -> None:
        super().__init__(**options, add_help=False, allow_abbrev=False)
        self.add_argument("-h", "--help", action=_Tell, help="say this and end")

    def error(self, message: str) -> NoReturn:
        raise CommandError(f"{message}; see '{self.prog} --help'")


def _parser() -> argparse.ArgumentParser:
    parser = _Parser(
        prog="sparingly",
        description="A traceable reference of sparingly soluble salts, built from reviewed "
        "constant files. Exit codes: 0 fine, 1 the data are wrong, 2 the command is wrong.",
    )
    parser.add_argument(
        "--version", action=_Tell, const=f"sparingly {__version__}\n", help="say the version"
    )
    commands = parser.add_subparsers(required=True, metavar="COMMAND")

    def command(
        name: str, run: Callable[[argparse.Namespace], Outcome], what: str
    ) -> argparse.ArgumentParser:
        added = commands.add_parser(name, help=what, description=what)
        added.set_defaults(carry_out=run)
        added.add_argument(
            "--constants",
            metavar="FOLDER",
            type=Path,
            nargs="+",
            action="extend",
            default=[],
            help="lay the constants of these folders over the shipped ones",
        )
        return added

    one = command("inspect", _inspect, "Read and check the constants, say all that is found.")
    one.add_argument(
        "folders",
        metavar="FOLDER",
        type=Path,
        nargs="*",
        help="read exactly these folders; without one, the shipped constants",
    )
    one.add_argument("--summary", action="store_true", help="count what the constants hold")
    one.add_argument("--json", action="store_true", help="answer in JSON")

    one = command("issue", _issue, "Build the reference and write it as a folder of pages.")
    one.add_argument(
        "--out", metavar="FOLDER", type=Path, default=Path("site_out"), help="default: site_out"
    )
    one.add_argument("--on", metavar="DATE", help="date of the issue, as in 2026-12-01")

    one = command("value", _value, "The constant of one salt at one temperature.")
    _question(one)

    one = command("dissolve", _dissolve, "How much of one salt dissolves, and in which forms.")
    _question(one)
    one.add_argument(
        "--with",
        dest="added",
        metavar="ELECTROLYTE=AMOUNT",
        action="append",
        default=[],
        help="what else is in the solution, as in Na2SO4=0.05mol/kg; can be repeated",
    )
    one.add_argument("--ph", metavar="PH", help="hold the pH, as in 8.0: -log10 a(H+)")
    one.add_argument("--acid", metavar="FORMULA", help="what lowers a held pH; default: HCl")
    one.add_argument("--base", metavar="FORMULA", help="what raises a held pH; default: NaOH")
    one.add_argument(
        "--co2", metavar="BAR", help="partial pressure of carbon dioxide over it, as in 0.0004"
    )
    one.add_argument(
        "--form-also",
        dest="also",
        metavar="SALT",
        action="append",
        default=[],
        help="another solid that may form; can be repeated",
    )
    one.add_argument(
        "--textbook", action="store_true", help="the answer from free ions, beside the full one"
    )
    return parser


def _question(command: argparse.ArgumentParser) -> None:
    command.add_argument("salt", metavar="SALT", nargs="?", help="id, formula, name or CAS number")
    command.add_argument("--at", metavar="TEMPERATURE", help="as in 37, '37 °C' or '310.15 K'")
    command.add_argument("--json", action="store_true", help="answer in JSON")
    command.add_argument(
        "--batch",
        metavar="FILE.csv",
        type=Path,
        help="answer every row of a file; its columns are named like the options",
    )
