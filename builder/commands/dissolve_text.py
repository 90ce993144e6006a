"""The answer of `dissolve` in lines for people."""

from __future__ import annotations

from builder.chem.formula import to_unicode
from builder.collection.answer import Dissolved
from builder.collection.reference import Reference
from builder.commands.dissolve import Answer
from builder.commands.telling import (
    aligned,
    between,
    celsius,
    digits,
    give_or_take,
    paragraph,
    plain,
    table,
    typographic,
)
from builder.commands.value import range_words

SMALLEST_SHARE = 0.0005  # of the dissolved metal; smaller ones get no line
BUDGET_LINES = 3

Lines = list[tuple[str, str]]


def text(reference: Reference, asked: Answer) -> str:
    """The whole answer: amounts, forms, what the uncertainty comes from, cautions."""
    it = asked.shown
    parts = [_title(reference, asked)]
    if it.state == "refused":
        refused = ("refused", typographic(it.reason))
        parts.append(aligned([refused, *_cautions(reference, it)]))
        return "\n".join(parts)
    parts.append(aligned(_amounts(asked)))
    parts.append(_forms(it))
    parts.append(aligned([*_grounds(reference, it), *_cautions(reference, it)]))
    return "\n".join(parts)


def _title(reference: Reference, asked: Answer) -> str:
    salt = reference.salts[asked.shown.salt].salt
    solution = " and ".join(
        f"{digits(m)} mol/kg {to_unicode(formula)}" for formula, m in asked.additions.items()
    )
    title = f"{salt.name}, {to_unicode(salt.formula)} ({salt.id}), at "
    title += f"{celsius(asked.shown.temperature_c)} in {solution or 'water'}\n"
    if asked.textbook_asked:
        title += "Textbook answer: free ions only, concentrations for activities.\n"
    return title


def _amounts(asked: Answer) -> Lines:
    it = asked.shown
    s, litre, metal_l = it.solubility_mol_per_kg, it.solubility_g_per_l, it.metal_mg_per_l
    dry = it.solubility_g_per_l_anhydrous
    assert s is not None and litre is not None and dry is not None and metal_l is not None
    comes_out = s < 0.0
    interval = None if comes_out else it.interval
    lines: Lines = []
    if comes_out:
        lines.append(("dissolves", "nothing: the solution as made up is oversaturated"))
        lines.append(("comes out", f"{digits(-s)} mol/kg, {digits(-litre)} g/L of the solid"))
    else:
        tail = f", {between(*interval)}" if interval else "; interval not evaluated"
        lines.append(("dissolves", f"{digits(s)} mol/kg{tail}"))
        grams = f"{digits(litre)} g/L"
        if abs(dry - litre) > 1e-9 * litre:
            grams += f", counted without water of crystallisation {digits(dry)} g/L"
        lines.append(("", grams))
    metal = f"{digits(metal_l)} mg/L"
    if (span := it.metal_interval) is not None:
        metal += f", {between(*span)}"
    lines += [
        (f"dissolved {to_unicode(it.metal)}", metal),
        (
            "",
            "metal in all its dissolved forms, what was added included, "
            f"in a litre at {celsius(it.temperature_c)}",
        ),
        ("", "(volume by the density of water)"),
        *_textbook(asked),
    ]
    return lines


def _textbook(asked: Answer) -> Lines:
    """The other of the two answers, and the factor between them."""
    if asked.textbook_asked:
        label, other, tail = "full answer", asked.full.solubility_mol_per_kg, ""
    else:
        label, other = "textbook", asked.full.textbook_mol_per_kg
        tail = " from free ions and concentrations"
    if other is None:
        return [(label, f"refused: {typographic(asked.full.reason)}")]
    told = f"{digits(abs(other))} mol/kg{' comes out' if other < 0.0 else ''}{tail}"
    if asked.full.factor is not None:
        told += f"; the full answer is {digits(asked.full.factor)} times the textbook's"
    return [(label, told)]


def _forms(it: Dissolved) -> str:
    """A table of the forms of the metal by share; the others in one line below."""
    metal = to_unicode(it.metal)
    shared = [f for f in it.forms if f.share is not None and f.share >= SMALLEST_SHARE]
    shared.sort(key=lambda f: (-(f.share or 0.0), f.form))
    rows = [
        (
            to_unicode(f.form),
            f"{plain(100.0 * (f.share or 0.0), 1)} %",
            digits(f.mol_per_kg),
            plain(f.activity_coefficient, 3),
        )
        for f in shared
    ]
    head = ("dissolved form", f"share of all {metal}", "mol/kg", "activity coefficient")
    others = ", ".join(
        f"{to_unicode(f.form)}\u00a0{digits(f.mol_per_kg)}" for f in it.forms if f.share is None
    )
    return table(head, rows) + paragraph(f"without {metal}, mol/kg: {others}")


def _grounds(reference: Reference, it: Dissolved) -> Lines:
    evaluated = reference.salts[it.salt]
    constant = it.constant
    assert it.ionic_strength is not None and it.ph is not None and constant.log10_k is not None
    lines: Lines = [
        (
            "solution",
            f"ionic strength {digits(it.ionic_strength)} mol/kg, pH {plain(it.ph, 2)}, "
            f"no carbon dioxide; activity model: {it.activity_model}",
        ),
        (
            "log10 K",
            f"{give_or_take(constant.log10_k, constant.u)}, "
            f"{evaluated.chosen.determination.id}, {range_words(evaluated, constant)}",
        ),
    ]
    if it.standard_uncertainty_log10 is not None:
        largest = ", ".join(
            f"{plain(100.0 * line.share, 0)} % {line.constant}" for line in it.budget[:BUDGET_LINES]
        )
        lines.append(
            (
                "uncertainty",
                f"of log10 of the amount {digits(it.standard_uncertainty_log10, 2)} "
                f"(one standard deviation); its variance: {largest}",
            )
        )
    else:
        lines.append(("uncertainty", "not evaluated"))
    for other in it.other_solids:
        salt = reference.salts[other.salt].salt
        lines.append(
            (
                "other solid",
                f"{salt.name} ({to_unicode(salt.formula)}) is oversaturated here, saturation index "
                f"{plain(other.saturation_index, 2)}: it may form instead, and the answer not hold",
            )
        )
    return lines


def _cautions(reference: Reference, it: Dissolved) -> Lines:
    hazard = reference.collection.hazards.get(reference.salts[it.salt].salt.hazard or "")
    return [] if hazard is None else [("caution", hazard.words), ("", hazard.care)]
