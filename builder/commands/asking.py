"""From what people type to what the collection is asked: folders, salts, what surrounds them."""

from __future__ import annotations

import os
import re
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from decimal import Decimal
from pathlib import Path

from builder.collection.amounts import AmountError, molality
from builder.collection.conditions import ACID, BASE, Conditions
from builder.collection.folders import KINDS, FolderError, shipped_folder
from builder.collection.forms import HYDROGEN
from builder.collection.inspection import Inspection, inspect
from builder.collection.names import Match, Names
from builder.collection.reference import Reference
from builder.commands.outcome import CommandError, DataError
from builder.read.findings import quoted

ZERO_CELSIUS_K = Decimal("273.15")
LONGEST_NUMBER = 30  # characters; keeps the number finite
HIGHEST_CO2_BAR = 10.0  # ideal gas up to there

# What keyboards and web pages put in the place of a minus, a degree sign and a space.
_PLAIN = str.maketrans({"−": "-", "–": "-", "º": "°", "˚": "°", "℃": "°C", "\u00a0": " "})
_TEMPERATURE = re.compile(r"([+-]?[0-9]+(?:\.[0-9]+)?)\s*(°?\s*C|K)?")
_PH = re.compile(r"[+-]?[0-9]+(?:\.[0-9]+)?")
_BAR = re.compile(r"([0-9]+(?:\.[0-9]+)?(?:[eE][+-]?[0-9]+)?)\s*(?:bar)?")


@dataclass(frozen=True)
class Around:
    """What surrounds the salt, as typed: one field an option, None or empty where not typed."""

    added: Sequence[str] = ()
    ph: str | None = None
    co2: str | None = None
    also: Sequence[str] = ()
    acid: str | None = None
    base: str | None = None


def inspection(folders: Sequence[Path], laid_over: Sequence[Path]) -> Inspection:
    """Inspect these folders, or the shipped constants when none, and what is laid over them."""
    named = [_folder(folder) for folder in (*folders, *laid_over)]
    together = named if folders else [shipped_folder("constants"), *named]
    shown = [folder.name for folder in together]
    if twice := [name for name in dict.fromkeys(shown) if shown.count(name) > 1]:
        raise CommandError(
            f"two of the folders are called {quoted(twice[0])}, which findings could not tell "
            "apart; rename one of them"
        )
    try:
        return inspect(together)
    except FolderError as wrong:
        raise CommandError(str(wrong)) from wrong


def reference(laid_over: Sequence[Path]) -> Reference:
    """The reference of the shipped constants and what is laid over. DataError where it has none."""
    found = inspection([], laid_over)
    if found.reference is None:
        raise DataError(found.findings)
    return found.reference


def _folder(folder: Path) -> Path:
    """The folder resolved; CommandError for one that cannot be read or holds no constants."""

    def refuse(wrong: OSError) -> None:
        raise CommandError(f"{quoted(str(folder))} cannot be read: {wrong.strerror}") from wrong

    try:
        resolved = folder.resolve(strict=True)
        entries = {entry.name for entry in os.scandir(resolved)}
    except NotADirectoryError:
        raise CommandError(
            f"{quoted(str(folder))} is not a folder; name a folder of constants"
        ) from None
    except OSError as wrong:
        refuse(wrong)
        raise AssertionError from wrong  # refuse never returns
    except RuntimeError:
        raise CommandError(f"{quoted(str(folder))} is a link that leads in a circle") from None
    if not entries & KINDS.keys():
        raise CommandError(
            f"{quoted(str(folder))} holds none of the folders {', '.join(KINDS)}; "
            "name the folder that holds them"
        )
    for _ in os.walk(resolved, onerror=refuse):
        pass  # a folder that cannot be listed must not pass for an empty one
    return resolved


def temperature(text: str) -> float:
    """°C of `37`, `37C`, `37 °C` or `310.15 K`."""
    plain = text.translate(_PLAIN).strip()
    match = _TEMPERATURE.fullmatch(plain)
    if match is None or len(plain) > LONGEST_NUMBER:
        if "," in plain:
            raise CommandError(
                f"the temperature {quoted(text)} has a comma; write a point, as in 37.5"
            )
        raise CommandError(
            f"{quoted(text)} is no temperature; write degrees Celsius or kelvin, "
            "as in 37 or '310.15 K'"
        )
    number = Decimal(match[1])
    return float(number - ZERO_CELSIUS_K if match[2] == "K" else number) + 0.0


def salt(names: Names, asked: Reference, text: str) -> str:
    """The id of the salt that `text` names."""
    salts = asked.collection.salts

    def shown(ids: Sequence[str]) -> str:
        return ", ".join(f"{id} ({salts[id].formula})" for id in ids)

    match = names.find(text.strip())
    if match.id is not None:
        return match.id
    if match.solids:
        raise CommandError(
            f"{quoted(text)} can be {shown(match.solids)}; name the solid", solids=match.solids
        )
    hint = (
        f"perhaps {shown(match.suggestions)}?"
        if match.suggestions
        else "write an id, a formula or a name, as in lead-sulfate, PbSO4 or anglesite"
    )
    raise CommandError(f"no salt is called {quoted(text)}; {hint}", solids=match.suggestions)


def additions(names: Names, asked: Reference, texts: Sequence[str]) -> Mapping[str, float]:
    """mol/kg by electrolyte of texts like `Na2SO4=0.05mol/kg`; the same one twice adds up."""
    out: dict[str, float] = {}
    for text in texts:
        name, sign, amount = text.partition("=")
        if not sign:
            raise CommandError(
                f"{quoted(text)} names no amount; write electrolyte=amount, as in Na2SO4=0.05mol/kg"
            )
        if "," in amount:
            raise CommandError(
                f"the amount {quoted(amount)} has a comma; write a point, as in 0.05mol/kg"
            )
        formula = _electrolyte(names.find(name.strip()), name)
        try:
            added = molality(amount, asked.molar_mass(formula))
        except AmountError as wrong:
            raise CommandError(str(wrong)) from wrong
        out[formula] = out.get(formula, 0.0) + added
    return out


def conditions(
    names: Names, electrolytes: Names, asked: Reference, salt_id: str, around: Around
) -> Conditions:
    """What surrounds the salt, as the collection is asked it."""
    if around.ph is None and (around.acid, around.base) != (None, None):
        raise CommandError("an acid or a base is named to hold a pH, and no pH; write --ph 8.0")
    also = tuple(dict.fromkeys(salt(names, asked, text) for text in around.also))
    if salt_id in also:
        raise CommandError(f"{salt_id} is the salt itself; name another solid that may form")
    return Conditions(
        additions=tuple(additions(electrolytes, asked, around.added).items()),
        ph=None if around.ph is None else ph(around.ph),
        acid=ACID if around.acid is None else _titrant(electrolytes, asked, around.acid, True),
        base=BASE if around.base is None else _titrant(electrolytes, asked, around.base, False),
        co2_bar=None if around.co2 is None else co2_bar(around.co2),
        also=also,
    )


def ph(text: str) -> float:
    """-log10 a(H^+) of `8.0`; whether it can be answered is for the collection to say."""
    plain = text.translate(_PLAIN).strip()
    if "," in plain:
        raise CommandError(f"the pH {quoted(text)} has a comma; write a point, as in 8.0")
    if _PH.fullmatch(plain) is None or len(plain) > LONGEST_NUMBER:
        raise CommandError(f"{quoted(text)} is no pH; write a number alone, as in 8.0")
    return float(plain) + 0.0


def co2_bar(text: str) -> float:
    """Partial pressure of carbon dioxide in bar, of `0.0004`, `4e-4` or `0.0004 bar`."""
    plain = text.translate(_PLAIN).strip()
    if "," in plain:
        raise CommandError(f"the pressure {quoted(text)} has a comma; write a point, as in 0.0004")
    match = _BAR.fullmatch(plain)
    if match is None or len(plain) > LONGEST_NUMBER:
        raise CommandError(
            f"{quoted(text)} is no pressure of carbon dioxide; write it in bar, as in 0.0004"
        )
    bar = float(match[1])
    if not 0.0 < bar <= HIGHEST_CO2_BAR:
        raise CommandError(
            f"the pressure {quoted(text)} cannot be asked; write more than 0 and at most "
            f"{HIGHEST_CO2_BAR:g} bar, or leave carbon dioxide out"
        )
    return bar


def _titrant(names: Names, asked: Reference, text: str, gives: bool) -> str:
    """Formula of an electrolyte that gives hydrogen ion, or takes it up.

    It does so outright (HCl, NaOH) or through one of its ions (NH4^+, CO3^2-).
    """
    formula = _electrolyte(names.find(text.strip()), text)
    sign = 1.0 if gives else -1.0
    made = asked.additions[formula].base
    outright = sign * made.get(HYDROGEN, 0.0) > 0.0
    through = any(
        len(form.made.base) == 2
        and form.made.base.keys() - {HYDROGEN} <= made.keys()
        and sign * form.made.base.get(HYDROGEN, 0.0) < 0.0
        for form in asked.forms.values()
    )
    if not outright and not through:
        kind, does, example = ("acid", "gives", ACID) if gives else ("base", "takes up", BASE)
        raise CommandError(f"{formula} is no {kind}: it {does} no hydrogen ion; write {example}")
    return formula


def _electrolyte(match: Match, text: str) -> str:
    if match.id is not None:
        return match.id
    near = match.solids or match.suggestions
    hint = f"perhaps {', '.join(near)}?" if near else "write its formula, as in Na2SO4"
    raise CommandError(f"no electrolyte is called {quoted(text)}; {hint}")
