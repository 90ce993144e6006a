"""Rules that only computed values can answer: do the numbers of a salt go together?"""

from __future__ import annotations

from collections.abc import Iterator, Mapping

from builder.chem.curve import at
from builder.collection.choice import Evaluated
from builder.collection.figures import Reported
from builder.collection.records import Collection, Origin
from builder.collection.rules_salt import NEVER_CHOSEN
from builder.read.findings import Finding, Level, Place

CODES: Mapping[str, Level] = {
    "judge-no-constant": "doubt",
    "judge-not-converted": "note",
    "judge-temperature-unknown": "doubt",
    "judge-recalled-chosen": "doubt",
    "judge-choice-off": "doubt",
    "judge-law-off": "doubt",
    "judge-exponent": "note",
}

NEAR = 0.5  # log10 K: as near as this a value read in print is a sound other
CHOICE_OFF = 0.3  # log10 K, or three standard uncertainties
LAW_OFF = 0.05  # log10 K, or two standard uncertainties
SLIP = 0.05  # log10 K from a whole power of ten
FAMILIES_FOR_A_SLIP = 3  # fewer do not say which one slipped
WEIGHTY_REASON = 80  # characters: room to say why what is remembered outweighs what was read


def judge(evaluated: Evaluated, collection: Collection) -> list[Finding]:
    """Doubts and notes about one salt of a collection without errors."""
    return [
        *_without_constant(evaluated),
        *_chosen(evaluated, collection),
        *_law(evaluated),
        *_slips(evaluated),
    ]


def _without_constant(evaluated: Evaluated) -> Iterator[Finding]:
    for reported in evaluated.reported.values():
        if reported.log10_k is None:
            is_chosen = reported is evaluated.chosen
            level: Level = "doubt" if is_chosen else "note"
            code = "judge-no-constant" if is_chosen else "judge-not-converted"
            found = f"a determination that gives no constant: {reported.reason}"
            cure = "choose another one" if is_chosen else "it is shown as printed"
            yield Finding(level, code, _number(reported), found, cure)
    for law in evaluated.laws.values():
        if law.curve is None and isinstance(law.law.origin, Origin):
            found = f"a law that gives no constant: {law.reason}"
            cure = "add what it lacks, or remove it"
            yield Finding("doubt", "judge-no-constant", law.law.origin.place("kind"), found, cure)


def _number(reported: Reported) -> Place:
    origin = reported.determination.origin
    if reported.determination.figure is None:
        return origin.place("computed")
    return origin.place("printed", "as")


def _chosen(evaluated: Evaluated, collection: Collection) -> Iterator[Finding]:
    chosen, salt = evaluated.chosen, evaluated.salt
    if chosen.log10_k is None:
        return
    determination = chosen.determination
    if determination.figure is not None and determination.figure.temperature_c is None:
        place = determination.origin.place("printed", "temperature_c")
        found = "a chosen determination whose temperature is not stated"
        cure = "choose one that states it: this one is taken as if at 25 °C"
        yield Finding("doubt", "judge-temperature-unknown", place, found, cure)
    others = [
        r for r in evaluated.reported.values()
        if r is not chosen and r.comparable and r.log10_k is not None
        and r.determination.citation.evidence in ("open-copy", "computed", "measured-here")
        and collection.sources[r.determination.citation.source].kind not in NEVER_CHOSEN
        and abs(r.log10_k - chosen.log10_k) <= NEAR
    ]  # fmt: skip
    recalled = determination.citation.evidence == "recalled"
    if recalled and others and len(salt.choice.reason) < WEIGHTY_REASON:
        place = salt.origin.place("choice", "determination")
        found = f"a recalled value, where {others[0].determination.id} was read or computed"
        cure = "choose that one, or say in the reason why the recalled one is the sounder"
        yield Finding("doubt", "judge-recalled-chosen", place, found, cure)
    middle = evaluated.corroboration.middle
    near = max(CHOICE_OFF, 3.0 * (evaluated.u or 0.0))
    if chosen.comparable and middle is not None and abs(chosen.log10_k - middle) > near:
        place = salt.origin.place("choice", "determination")
        found = f"log10 K = {chosen.log10_k:.2f}, where the families' median is {middle:.2f}"
        cure = "choose another one, or say in the reason why the others are wrong"
        yield Finding("doubt", "judge-choice-off", place, found, cure)


def _law(evaluated: Evaluated) -> Iterator[Finding]:
    """The chosen law, at the temperature of the chosen determination, gives its value."""
    chosen, curve = evaluated.chosen, evaluated.law.curve
    if chosen.log10_k is None or curve is None:
        return
    value = at(curve, chosen.t_celsius).log10_k
    near = max(LAW_OFF, 2.0 * (evaluated.u or 0.0))
    if value is not None and abs(value - chosen.log10_k) > near:
        place = evaluated.salt.origin.place("choice", "law")
        found = (
            f"a law that gives log10 K = {value:.3f} at {chosen.t_celsius:g} °C, "
            f"where the determination gives {chosen.log10_k:.3f}"
        )
        cure = "anchor the law on the chosen determination, or choose the two together"
        yield Finding("doubt", "judge-law-off", place, found, cure)


def _slips(evaluated: Evaluated) -> Iterator[Finding]:
    """A value off by a whole power of ten, or by its sign, from the families' median."""
    middle = evaluated.corroboration.middle
    if middle is None or len(evaluated.corroboration.families) < FAMILIES_FOR_A_SLIP:
        return
    for reported in evaluated.reported.values():
        value = reported.log10_k
        if value is None or not reported.comparable:
            continue
        powers = round(value - middle)
        if abs(value + middle) <= SLIP:
            found = f"log10 K = {value:.2f}, the families' median with the other sign"
        elif 1 <= abs(powers) <= 6 and abs(value - middle - powers) <= SLIP:
            found = f"log10 K = {value:.2f}, {powers:+d} powers of ten from the families' median"
        else:
            continue
        cure = "look at sign and exponent in the source; keep it if that is what is printed"
        yield Finding("note", "judge-exponent", _number(reported), found, cure)
